/**
 * Layers on the path from the target to the instrument: air, windows, anything that turns radiance L into
 * τ·L + (1 − τ − ρ)·L(T_layer) + ρ·L(T_mirrored), or into τ·L + path radiance.   [METHOD.md eq. 11]
 *
 * A layer answers its transmittance given what lies between it and the instrument, because stretches of air on
 * one path share absorbers. A gray layer's answer is a constant. `measurement` sees only this interface.
 */
import type { Band } from './band.js';
import type { Caution } from './cautions.js';
import { notNegative, plainObject, ratio, temperature } from './check.js';
import { type Curve, isCurve, plainAbscissa, spectralFunction } from './curve.js';
import type { LayerDocument } from './document.js';
import { MeasurementError } from './errors.js';
import { type Scalar, scalar, type TemperatureScalar } from './scalar.js';
import type { AnyKelvin } from './units.js';

/** A ratio known to lie between two limits: its middle is used, and its half-width enters the budget. */
export interface Interval {
  readonly low: number;
  readonly high: number;
}

/** A thing on the path. Made by {@link air}, {@link infraredWindow} or {@link layer}. */
export interface Layer {
  readonly kind: 'air' | 'window' | 'layer';
  /** Temperature of the layer; undefined where it does not emit or where its path radiance is given. [K] */
  readonly temperature: TemperatureScalar | undefined;
  /** Reflectance on the instrument side; 0 for air. */
  readonly reflectance: Scalar | Curve;
  /** Apparent temperature of what the instrument side mirrors. [K] */
  readonly mirroredTemperature: TemperatureScalar | undefined;
  /** What the layer adds, where that is given in place of a temperature. [unit of the band] */
  readonly pathRadiance: Scalar | undefined;
  /** Half-width of an input given as an {@link Interval}, by its key. */
  readonly halfWidths: Readonly<Record<string, number>>;
  /** The layer as plain data, where it is made from other inputs than a transmittance. */
  readonly document?: LayerDocument;
  /** Throws where the layer's model does not hold in a band. */
  checkBand?(band: Band): void;
  /** What the layer's model says of itself in a band, for a source of this temperature [K]. */
  inBand?(band: Band, source: AnyKelvin): LayerInBand;
  /**
   * Transmittance of this layer, given the layers between it and the instrument.
   * @param nearer - Layers after this one, in path order.
   */
  transmittanceBehind(nearer: readonly Layer[]): Scalar | Curve;
}

/** How good a computed layer is in a band. */
export interface LayerInBand {
  /** Standard uncertainty of an input, by its key, and where it comes from. */
  readonly uncertainties: Readonly<
    Record<string, { readonly standardUncertainty: number; readonly origin: string }>
  >;
  readonly cautions: readonly Caution[];
}

/** What {@link air} takes. */
export interface AirInput {
  /** Transmittance in the band: a number, a map, a curve over wavelength, or an interval. 0 < τ ≤ 1 */
  readonly transmittance: Scalar | Curve | Interval;
  /** Temperature of the air; may be left out only where the transmittance is the number 1. [K] */
  readonly temperature?: TemperatureScalar;
}

/** What {@link infraredWindow} takes. */
export interface WindowInput {
  /** Transmittance in the band, for the source temperature it was measured at: as that of air. 0 < τ ≤ 1 */
  readonly transmittance: Scalar | Curve | Interval;
  /** Reflectance in the band; 0 when left out. An unknown one may be an interval. */
  readonly reflectance?: Scalar | Curve | Interval;
  /** Temperature of the window, required where 1 − τ − ρ > 0. [K] */
  readonly temperature?: TemperatureScalar;
  /** Apparent temperature of what the instrument side of the window mirrors, required where ρ > 0. [K] */
  readonly mirroredTemperature?: TemperatureScalar;
}

/** What {@link layer} takes: a window's inputs, or a transmittance and a path radiance. */
export type LayerInput =
  | WindowInput
  | { readonly transmittance: Scalar | Curve; readonly pathRadiance: Scalar };

/**
 * A stretch of air with a known transmittance: τ·L + (1 − τ)·L(T_air).
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`, `unknown-key`; `missing-input` when the
 *   air absorbs and no temperature is given.
 */
export function air(input: AirInput): Layer {
  plainObject(input, 'air', ['transmittance', 'temperature']);
  return makeLayer('air', input);
}

/**
 * An infrared window or any plate that transmits, reflects and emits.
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `unknown-key`; `out-of-range` also for τ + ρ > 1;
 *   `missing-input` when the window emits and has no temperature, or mirrors and has no mirrored temperature.
 */
export function infraredWindow(input: WindowInput): Layer {
  plainObject(input, 'infraredWindow', [
    'transmittance',
    'reflectance',
    'temperature',
    'mirroredTemperature',
  ]);
  return makeLayer('window', input);
}

/**
 * Any layer: with the inputs of a window, or `{ transmittance, pathRadiance }` where what it adds is known.
 *
 * @throws {MeasurementError} as {@link infraredWindow}; `conflicting-inputs` for a path radiance beside a temperature.
 */
export function layer(input: LayerInput): Layer {
  const keys = ['transmittance', 'reflectance', 'temperature', 'mirroredTemperature', 'pathRadiance'];
  const record = plainObject(input, 'layer', keys);
  if (record.pathRadiance === undefined) return makeLayer('layer', input as WindowInput);
  for (const key of ['reflectance', 'temperature', 'mirroredTemperature']) {
    if (record[key] !== undefined) {
      throw new MeasurementError('conflicting-inputs', {
        path: `layer.${key}`,
        expected: 'either pathRadiance, or temperatures and a reflectance',
        received: record,
      });
    }
  }
  const transmittance = ratioOrCurve(record.transmittance, 'layer.transmittance', 'above 0');
  return freeze('layer', transmittance, 0, {
    pathRadiance: scalar<Scalar>(record.pathRadiance, 'layer.pathRadiance', notNegative),
  });
}

/** Whether a value is a layer. */
export function isLayer(value: unknown): value is Layer {
  return typeof value === 'object' && value !== null && 'transmittanceBehind' in value && 'kind' in value;
}

/** Whether a value is an {@link Interval}. */
export function isInterval(value: unknown): value is Interval {
  return typeof value === 'object' && value !== null && 'low' in value && 'high' in value;
}

/** The middle and the half-width of an interval of ratios. */
export function interval(
  value: Interval,
  path: string,
): { readonly middle: number; readonly halfWidth: number } {
  plainObject(value, path, ['low', 'high']);
  const low = ratio(value.low, `${path}.low`);
  const high = ratio(value.high, `${path}.high`);
  if (high >= low) return { middle: (low + high) / 2, halfWidth: (high - low) / 2 };
  throw new MeasurementError('out-of-range', {
    path: `${path}.high`,
    expected: `a number ≥ low = ${low}`,
    received: high,
  });
}

/** A ratio, a map of it, or a curve of it. */
export function ratioOrCurve(value: unknown, path: string, lowest: 'above 0' | 'from 0'): Scalar | Curve {
  if (value === undefined) throw new MeasurementError('missing-input', { path, expected: 'a ratio of 0…1' });
  if (isCurve(value)) {
    spectralFunction(value, path);
    return Object.freeze({ ...plainAbscissa(value), value: [...value.value] });
  }
  return scalar<Scalar>(value, path, (number, at) => ratio(number, at, lowest));
}

function makeLayer(kind: Layer['kind'], input: WindowInput): Layer {
  const name = kind === 'window' ? 'infraredWindow' : kind;
  const halfWidths: Record<string, number> = {};
  const middleOf = (key: 'transmittance' | 'reflectance', lowest: 'above 0' | 'from 0'): Scalar | Curve => {
    const value = input[key];
    if (!isInterval(value)) return ratioOrCurve(value, `${name}.${key}`, lowest);
    const { middle, halfWidth } = interval(value, `${name}.${key}`);
    halfWidths[key] = halfWidth;
    return ratioOrCurve(middle, `${name}.${key}`, lowest);
  };
  const transmittance = middleOf('transmittance', 'above 0');
  const reflectance = input.reflectance === undefined ? 0 : middleOf('reflectance', 'from 0');
  if (
    typeof transmittance === 'number' &&
    typeof reflectance === 'number' &&
    transmittance + reflectance > 1 + 1e-12
  ) {
    throw new MeasurementError('out-of-range', {
      path: `${name}.reflectance`,
      expected: 'transmittance + reflectance ≤ 1',
      received: `${transmittance} + ${reflectance}`,
    });
  }
  const emits = !(
    typeof transmittance === 'number' &&
    typeof reflectance === 'number' &&
    transmittance + reflectance >= 1 - 1e-12
  );
  const mirrors = reflectance !== 0;
  const temperatures = {
    temperature: optionalTemperature(
      input.temperature,
      `${name}.temperature`,
      emits,
      'the layer emits (1 − τ − ρ > 0)',
    ),
    mirroredTemperature: optionalTemperature(
      input.mirroredTemperature,
      `${name}.mirroredTemperature`,
      mirrors,
      'the layer mirrors what is on the instrument side (ρ > 0)',
    ),
  };
  return freeze(kind, transmittance, reflectance, { ...temperatures, halfWidths });
}

function optionalTemperature(
  value: unknown,
  path: string,
  required: boolean,
  because: string,
): TemperatureScalar | undefined {
  if (value !== undefined) return scalar<TemperatureScalar>(value, path, temperature);
  if (!required) return undefined;
  throw new MeasurementError('missing-input', {
    path,
    expected: `a temperature, because ${because}`,
    hint: 'Write for example celsius(20).',
  });
}

function freeze(
  kind: Layer['kind'],
  transmittance: Scalar | Curve,
  reflectance: Scalar | Curve,
  rest: Partial<Pick<Layer, 'temperature' | 'mirroredTemperature' | 'pathRadiance' | 'halfWidths'>>,
): Layer {
  return Object.freeze({
    kind,
    reflectance,
    temperature: rest.temperature,
    mirroredTemperature: rest.mirroredTemperature,
    pathRadiance: rest.pathRadiance,
    halfWidths: Object.freeze(rest.halfWidths ?? {}),
    transmittanceBehind: () => transmittance,
  });
}
