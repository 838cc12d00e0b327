/**
 * What the inspector wrote down: the conditions of a reading, checked once at the edge.
 *
 * Terms of ISO 18434-1 and ASTM E1862. Nothing has a silent default: no band, no emissivity, no reflected
 * apparent temperature is assumed.
 */
import { type Band, isBand } from './band.js';
import { notNegative, oneOf, plainObject, positive, ratio, temperature } from './check.js';
import { type Curve, isCurve } from './curve.js';
import { MeasurementError, within } from './errors.js';
import { isLayer, type Layer, ratioOrCurve } from './layer.js';
import { type Scalar, scalar, type TemperatureScalar } from './scalar.js';
import { type AnyKelvin, toCelsius } from './units.js';

/** A target that is not opaque: film, thin glass, flame. L = ε·L(T) + (1 − ε − τ)·L(T_refl) + τ·L(T_bg). */
export interface SurfaceTransmission {
  /** Transmittance of the target in the band. 0…1, ε + τ ≤ 1 */
  readonly transmittance: Scalar;
  /** Apparent temperature of what is behind the target. [K] */
  readonly backgroundApparentTemperature: TemperatureScalar;
}

/** Accuracy stated for an instrument: the larger of the two, as half-width of a rectangular distribution. */
export interface InstrumentAccuracy {
  /** [K] */
  readonly kelvin?: number;
  /** [%] of what `percentOf` says. */
  readonly percent?: number;
  /** What the percentage is of; required beside `percent`. Data sheets mostly mean the Celsius reading. Common practice, no source. */
  readonly percentOf?: 'celsius' | 'kelvin' | 'range';
}

/** What is known of the instrument. */
export interface Instrument {
  /** Apparent temperatures it can show; a pixel at either end is flagged saturated. [K] */
  readonly measuringRange?: { readonly from: AnyKelvin; readonly to: AnyKelvin };
  /** Noise equivalent temperature difference [K] and the scene temperature it holds at [K]. */
  readonly netd?: { readonly value: number; readonly sceneTemperature: AnyKelvin };
  readonly accuracy?: InstrumentAccuracy;
  /** Instantaneous field of view. [mrad] */
  readonly ifov?: number;
  readonly lens?: string;
  /** Date of the last calibration, ISO 8601. */
  readonly calibrationDate?: string;
  /** Time since switched on. [s] */
  readonly warmUp?: number;
}

/** The conditions of a reading or of a frame. */
export interface Conditions {
  readonly band: Band;
  /** Emissivity in the band and at the angle of view: number, map, or curve over wavelength. 0 < ε ≤ 1 */
  readonly emissivity: Scalar | Curve;
  /**
   * What arrives at the target's place from the directions it mirrors, as apparent temperature in the band and
   * before any layer of the path. [K]. Exactly one of this and `reflectedRadiance`.
   */
  readonly reflectedApparentTemperature?: TemperatureScalar;
  /** The same as band radiance. [unit of the band] */
  readonly reflectedRadiance?: Scalar;
  /** Layers between target and instrument, the target's side first. */
  readonly path?: readonly Layer[];
  readonly surface?: SurfaceTransmission;
  /** Angle between the view and the normal of the surface. [°], 0…90 */
  readonly viewAngle?: number;
  /** Where the reflected apparent temperature was measured. Behind a window it must be the target's side. */
  readonly reflectedMeasuredAt?: 'target' | 'instrument';
  readonly instrument?: Instrument;
  /** Where a value comes from, by input name: `{ 'path[0].transmittance': 'assumed' }`. */
  readonly origins?: Readonly<Record<string, string>>;
}

const conditionKeys = [
  'band',
  'emissivity',
  'reflectedApparentTemperature',
  'reflectedRadiance',
  'path',
  'surface',
  'viewAngle',
  'reflectedMeasuredAt',
  'instrument',
  'origins',
] as const satisfies readonly (keyof Conditions)[];

/**
 * Settings an instrument applied itself before it stored a temperature: exact numbers it was told.
 * Its air is the transmittance it applied; a humidity and a distance cannot be undone.
 */
export type RecordedConditions = Pick<
  Conditions,
  'emissivity' | 'reflectedApparentTemperature' | 'path' | 'instrument'
> & {
  /** Band of the instrument; that of the actual conditions when left out. Another one is refused. */
  readonly band?: Band;
  /** Step the stored temperatures are rounded to. [K] */
  readonly resolution?: number;
};

const recordedKeys = [
  'band',
  'emissivity',
  'reflectedApparentTemperature',
  'path',
  'instrument',
  'resolution',
] as const;

/** Checks conditions and copies them into a frozen record. */
export function checkedConditions(input: unknown): Conditions {
  const given = plainObject(input, '', conditionKeys) as Partial<Conditions>;
  if (!isBand(given.band)) {
    throw new MeasurementError(given.band === undefined ? 'missing-input' : 'wrong-type', {
      path: 'band',
      expected: 'a band; there is no default',
      received: given.band,
      hint: 'Write topHatBand(8, 14), or bandFromDescriptor() for plain data.',
    });
  }
  const emissivity = ratioOrCurve(given.emissivity, 'emissivity', 'above 0');
  const checked: { -readonly [Key in keyof Conditions]: Conditions[Key] } = {
    ...given,
    band: given.band,
    emissivity,
  };
  checkReflected(given);
  if (given.path !== undefined) checked.path = checkedPath(given.path);
  if (given.surface !== undefined) checked.surface = checkedSurface(given.surface, emissivity);
  if (given.viewAngle !== undefined) {
    if (!(notNegative(given.viewAngle, 'viewAngle') < 90)) {
      throw new MeasurementError('out-of-range', {
        path: 'viewAngle',
        expected: 'an angle of 0…90° from the normal',
        received: given.viewAngle,
      });
    }
  }
  if (given.reflectedMeasuredAt !== undefined) {
    oneOf(given.reflectedMeasuredAt, 'reflectedMeasuredAt', ['target', 'instrument']);
  }
  if (given.instrument !== undefined) checked.instrument = checkedInstrument(given.instrument);
  if (given.origins !== undefined) checked.origins = checkedOrigins(given.origins);
  return Object.freeze(checked);
}

/** Recorded settings, checked: conditions in the band of the actual ones, and the step of what was stored. */
export type RecordedSettings = Conditions & Pick<RecordedConditions, 'resolution'>;

/** Checks recorded settings against the band of the actual conditions. */
export function checkedRecorded(input: unknown, band: Band): RecordedSettings {
  const given = plainObject(input, 'recorded', recordedKeys) as Partial<RecordedConditions>;
  if (given.band !== undefined && !sameBand(given.band, band)) {
    throw new MeasurementError('wrong-band', {
      path: 'recorded.band',
      expected: 'the band of the actual conditions',
      received: isBand(given.band) ? given.band.descriptor : given.band,
      hint: 'A recorded temperature can only be taken back in the band it was made in.',
    });
  }
  const { resolution, ...rest } = given;
  if (resolution !== undefined) positive(resolution, 'recorded.resolution');
  const checked = within('recorded', () => checkedConditions({ ...rest, band }));
  return Object.freeze({ ...checked, ...(resolution === undefined ? {} : { resolution }) });
}

/** Whether two bands are the same, by their descriptors; the order of keys does not count. */
function sameBand(one: unknown, other: Band): boolean {
  const text = (descriptor: unknown): string =>
    JSON.stringify(descriptor, (_, value: unknown) =>
      typeof value === 'object' && value !== null && !Array.isArray(value)
        ? Object.fromEntries(Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1)))
        : value,
    );
  return isBand(one) && text(one.descriptor) === text(other.descriptor);
}

function checkReflected(given: Partial<Conditions>): void {
  const { reflectedApparentTemperature: kelvin, reflectedRadiance: radiance } = given;
  if ((kelvin === undefined) === (radiance === undefined)) {
    throw new MeasurementError(kelvin === undefined ? 'missing-input' : 'conflicting-inputs', {
      path: 'reflectedApparentTemperature',
      expected: 'exactly one of reflectedApparentTemperature and reflectedRadiance',
      hint: 'Write for example celsius(21), the value measured at the target with a reflector.',
    });
  }
  if (kelvin !== undefined) scalar(kelvin, 'reflectedApparentTemperature', temperature);
  if (radiance === undefined) return;
  scalar(radiance, 'reflectedRadiance', notNegative);
  if (isCurve(given.emissivity)) {
    throw new MeasurementError('unsupported', {
      path: 'reflectedRadiance',
      expected: 'reflectedApparentTemperature where the emissivity is a curve',
      hint: 'A band radiance does not say how it is spread over wavelength.',
    });
  }
}

function checkedPath(path: unknown): readonly Layer[] {
  if (!Array.isArray(path) || !path.every(isLayer)) {
    throw new MeasurementError('wrong-type', {
      path: 'path',
      expected: 'an array of layers from target to instrument',
      received: path,
      hint: 'Write [air({ … }), infraredWindow({ … })].',
    });
  }
  return Object.freeze([...path]);
}

function checkedOrigins(origins: unknown): Readonly<Record<string, string>> {
  const given = plainObject(origins, 'origins', Object.keys(Object(origins)));
  for (const [name, origin] of Object.entries(given)) checkText(origin, `origins.${name}`);
  return Object.freeze({ ...given }) as Readonly<Record<string, string>>;
}

function checkText(value: unknown, path: string): void {
  if (typeof value === 'string') return;
  throw new MeasurementError('wrong-type', { path, expected: 'a text', received: value });
}

function checkedSurface(surface: unknown, emissivity: Scalar | Curve): SurfaceTransmission {
  const given = plainObject(surface, 'surface', ['transmittance', 'backgroundApparentTemperature']);
  const transmittance = scalar<Scalar>(given.transmittance, 'surface.transmittance', ratio);
  if (isCurve(emissivity)) {
    throw new MeasurementError('unsupported', {
      path: 'surface',
      expected: 'an emissivity given as a number or a map where the target is not opaque',
      received: emissivity,
    });
  }
  if (
    typeof emissivity === 'number' &&
    typeof transmittance === 'number' &&
    emissivity + transmittance > 1 + 1e-12
  ) {
    throw new MeasurementError('out-of-range', {
      path: 'surface.transmittance',
      expected: 'emissivity + transmittance ≤ 1',
      received: `${emissivity} + ${transmittance}`,
    });
  }
  const background = given.backgroundApparentTemperature;
  if (background === undefined) {
    throw new MeasurementError('missing-input', {
      path: 'surface.backgroundApparentTemperature',
      expected: 'the apparent temperature of what is behind the target',
    });
  }
  return Object.freeze({
    transmittance,
    backgroundApparentTemperature: scalar<TemperatureScalar>(
      background,
      'surface.backgroundApparentTemperature',
      temperature,
    ),
  });
}

function checkedInstrument(input: unknown): Instrument {
  const keys = ['measuringRange', 'netd', 'accuracy', 'ifov', 'lens', 'calibrationDate', 'warmUp'];
  const given = plainObject(input, 'instrument', keys);
  if (given.measuringRange !== undefined) {
    const { from, to } = plainObject(given.measuringRange, 'instrument.measuringRange', ['from', 'to']);
    const lowest = temperature(from, 'instrument.measuringRange.from');
    if (temperature(to, 'instrument.measuringRange.to') <= lowest) {
      throw new MeasurementError('out-of-range', {
        path: 'instrument.measuringRange.to',
        expected: `a temperature above from = ${lowest} K`,
        received: to,
      });
    }
  }
  if (given.netd !== undefined) {
    const netd = plainObject(given.netd, 'instrument.netd', ['value', 'sceneTemperature']);
    positive(netd.value, 'instrument.netd.value');
    temperature(netd.sceneTemperature, 'instrument.netd.sceneTemperature');
  }
  if (given.accuracy !== undefined) checkAccuracy(given.accuracy, given.measuringRange !== undefined);
  if (given.ifov !== undefined) positive(given.ifov, 'instrument.ifov');
  if (given.warmUp !== undefined) notNegative(given.warmUp, 'instrument.warmUp');
  for (const key of ['lens', 'calibrationDate']) {
    if (given[key] !== undefined) checkText(given[key], `instrument.${key}`);
  }
  const copied = Object.entries(given).map(([key, value]) => [
    key,
    typeof value === 'object' ? Object.freeze({ ...value }) : value,
  ]);
  return Object.freeze(Object.fromEntries(copied)) as Instrument;
}

function checkAccuracy(input: unknown, hasRange: boolean): void {
  const given = plainObject(input, 'instrument.accuracy', ['kelvin', 'percent', 'percentOf']);
  if (given.kelvin === undefined && given.percent === undefined) {
    throw new MeasurementError('missing-input', {
      path: 'instrument.accuracy',
      expected: 'kelvin, percent, or both (the larger holds)',
    });
  }
  if (given.kelvin !== undefined) notNegative(given.kelvin, 'instrument.accuracy.kelvin');
  if (given.percent === undefined) return;
  notNegative(given.percent, 'instrument.accuracy.percent');
  const of = oneOf(given.percentOf, 'instrument.accuracy.percentOf', ['celsius', 'kelvin', 'range']);
  if (of === 'range' && !hasRange) {
    throw new MeasurementError('missing-input', {
      path: 'instrument.measuringRange',
      expected: 'a measuring range, because the accuracy is a percentage of it',
    });
  }
}

/** Half-width of the accuracy an instrument states at a reading; undefined where it states none. [K] */
export function accuracyHalfWidth(
  instrument: Instrument | undefined,
  apparent: AnyKelvin,
): number | undefined {
  const accuracy = instrument?.accuracy;
  if (accuracy === undefined) return undefined;
  const { kelvin = 0, percent = 0, percentOf } = accuracy;
  const range = instrument?.measuringRange;
  const whole =
    percentOf === 'celsius'
      ? Math.abs(toCelsius(apparent))
      : percentOf === 'range' && range
        ? range.to - range.from
        : apparent;
  return Math.max(kelvin, (percent / 100) * whole);
}
