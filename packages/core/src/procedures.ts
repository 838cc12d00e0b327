/**
 * Finding an unknown before a surface can be corrected: reflected apparent temperature, emissivity, transmittance.
 *
 * The procedures and their names are those of ASTM E1862 (reflected temperature: reflector and direct method),
 * ASTM E1933 (emissivity: contact thermometer method, non-contact method with a surface-modifying material) and
 * ASTM E1897 (transmittance of an attenuating medium); also ISO 18434-1, annex A. Readings are replicates: their
 * scatter enters as type A (JCGM 100:2008, 4.2), what is stated of the kit as type B.   [METHOD.md eq. 25–28]
 *
 * What comes back is an estimate with its standard uncertainty and budget, ready to be put into `Conditions`.
 */
import type { Band } from './band.js';
import type { Caution } from './cautions.js';
import { notNegative, plainObject, ratio, temperature } from './check.js';
import { MeasurementError } from './errors.js';
import type { Layer } from './layer.js';
import { type MeasurementModel, measurementModel } from './measurement.js';
import { type Estimate, meanOf, type Propagated, propagate } from './propagation.js';
import { flatUncertainties, type Uncertainties } from './uncertainty.js';
import type { AnyKelvin } from './units.js';

/** Replicated readings of one quantity, and what is known of the kit that made them. */
export interface Readings {
  /** One reading or several. [K] */
  readonly readings: AnyKelvin | readonly AnyKelvin[];
  /** Standard uncertainty common to all of them (calibration, probe contact), type B. [K] */
  readonly standardUncertainty?: number;
}

/** A ratio with its standard uncertainty. */
export interface RatioEstimate {
  readonly value: number;
  readonly standardUncertainty?: number;
}

/** What a procedure found. */
export interface Finding extends Propagated {
  readonly cautions: readonly Caution[];
}

/** Band and path of the readings. */
export interface Setup {
  readonly band: Band;
  /** Layers between target and instrument. */
  readonly path?: readonly Layer[];
  /** Uncertainties of the path, as in `Uncertainties`. */
  readonly pathUncertainties?: Uncertainties['path'];
}

/** Emissivities with a larger expanded uncertainty are refused: they decide nothing. */
const largestExpandedEmissivity = 0.2;
/** Contrast to the surroundings below which a caution is raised. ASTM E1933, from memory. [K] */
const leastContrast = 10;

/**
 * Reflected apparent temperature by the reflector method: a diffuse reflector (crumpled and flattened foil) in the
 * place of the target, read with emissivity 1, taken back through the path and the reflector's own emission:
 * L(T_refl) = (L − ε_f·L(T_f)) / (1 − ε_f).   [METHOD.md eq. 25]
 *
 * @param input - `reflector` with its emissivity and temperature.
 * @returns Estimate of the reflected apparent temperature. [K]
 * @throws {MeasurementError} `no-solution` when the reflector's own emission explains all that was read.
 */
export function reflectedTemperatureByReflector(
  input: Setup & {
    readonly reading: Readings;
    readonly reflector: { readonly emissivity: RatioEstimate; readonly temperature: Readings };
  },
): Finding {
  plainObject(input, '', [...setupKeys, 'reading', 'reflector']);
  plainObject(input.reflector, 'reflector', ['emissivity', 'temperature']);
  const view = viewThrough(input);
  const inputs = {
    reading: observed(input.reading, 'reading'),
    'reflector.emissivity': ratioOf(input.reflector.emissivity, 'reflector.emissivity'),
    'reflector.temperature': observed(input.reflector.temperature, 'reflector.temperature'),
    ...view.inputs,
  };
  const found = propagate(
    inputs,
    (at) => {
      const own = at['reflector.emissivity'] * view.radiance(at['reflector.temperature']);
      const radiance = (view.leaving(at.reading, at) - own) / (1 - at['reflector.emissivity']);
      return view.temperature(
        radiance,
        'reading',
        'The reflector’s own emission explains all of the reading.',
      );
    },
    scaleOf,
  );
  return Object.freeze({ ...found, cautions: scatterCautions(input.reading, 'reading') });
}

/**
 * Reflected apparent temperature by the direct method: the surroundings the target mirrors, read directly with
 * emissivity 1, several directions averaged in radiance.   [METHOD.md eq. 25]
 *
 * @param input - One `Readings` a direction, of equal weight. The path does not lie between them and the instrument.
 * @returns Estimate of the reflected apparent temperature. [K]
 * @throws {MeasurementError} `missing-input` without a direction.
 */
export function reflectedTemperatureDirect(input: {
  readonly band: Band;
  readonly directions: readonly Readings[];
}): Finding {
  plainObject(input, '', ['band', 'directions']);
  const { band, directions } = input;
  if (!Array.isArray(directions) || directions.length === 0) {
    throw new MeasurementError('missing-input', {
      path: 'directions',
      expected: 'readings of one direction or more',
    });
  }
  const inputs = Object.fromEntries(
    directions.map((readings, i) => [`directions[${i}]`, observed(readings, `directions[${i}]`)]),
  );
  const found = propagate(
    inputs,
    (at) => {
      const total = Object.values(at).reduce((sum, kelvin) => sum + band.exact.radiance(kelvin), 0);
      return band.temperature(total / directions.length);
    },
    scaleOf,
  );
  return Object.freeze({
    ...found,
    cautions: directions.flatMap((one, i) => scatterCautions(one, `directions[${i}]`)),
  });
}

/**
 * Emissivity by the contact thermometer method: ε = (L − L(T_refl)) / (L(T) − L(T_refl)), L the radiance leaving the
 * target, T its temperature by contact.   [METHOD.md eq. 26; ASTM E1933]
 *
 * @param input - `reading`: apparent temperature of the target; `contact`: its temperature by contact, already
 *   corrected for what the probe takes away, with that correction's uncertainty.
 * @returns Estimate of the emissivity in the band.
 * @throws {MeasurementError} `no-solution` when no emissivity of 0…1 fits, or when U(ε) would exceed 0.2.
 */
export function emissivityByContact(
  input: Setup & {
    readonly reading: Readings;
    readonly contact: Readings;
    readonly reflectedApparentTemperature: Readings;
  },
): Finding {
  plainObject(input, '', [...setupKeys, 'reading', 'contact', 'reflectedApparentTemperature']);
  const view = viewThrough(input);
  const inputs = {
    reading: observed(input.reading, 'reading'),
    contact: observed(input.contact, 'contact'),
    reflectedApparentTemperature: observed(
      input.reflectedApparentTemperature,
      'reflectedApparentTemperature',
    ),
    ...view.inputs,
  };
  const found = propagate(
    inputs,
    (at) => {
      const reflected = view.radiance(at.reflectedApparentTemperature);
      return (view.leaving(at.reading, at) - reflected) / (view.radiance(at.contact) - reflected);
    },
    scaleOf,
  );
  return emissivityFinding(found, inputs.contact.value, inputs.reflectedApparentTemperature.value, [
    ...scatterCautions(input.reading, 'reading'),
    ...scatterCautions(input.contact, 'contact'),
  ]);
}

/**
 * Emissivity by the non-contact method: a spot of the target is covered with a material of known emissivity (tape,
 * paint) at the same temperature and read beside it.   [METHOD.md eq. 27; ASTM E1933]
 *
 * @param input - `reading`: of the bare target; `reference`: reading of the covered spot and its emissivity;
 *   `temperatureDifference`: what the cover may change the surface temperature by, standard uncertainty. [K]
 * @returns Estimate of the emissivity of the bare target in the band.
 * @throws {MeasurementError} as {@link emissivityByContact}.
 */
export function emissivityByReference(
  input: Setup & {
    readonly reading: Readings;
    readonly reference: { readonly reading: Readings; readonly emissivity: RatioEstimate };
    readonly reflectedApparentTemperature: Readings;
    readonly temperatureDifference?: number;
  },
): Finding {
  const own = ['reading', 'reference', 'reflectedApparentTemperature', 'temperatureDifference'];
  plainObject(input, '', [...setupKeys, ...own]);
  plainObject(input.reference, 'reference', ['reading', 'emissivity']);
  const view = viewThrough(input);
  const inputs = {
    reading: observed(input.reading, 'reading'),
    'reference.reading': observed(input.reference.reading, 'reference.reading'),
    'reference.emissivity': ratioOf(input.reference.emissivity, 'reference.emissivity'),
    reflectedApparentTemperature: observed(
      input.reflectedApparentTemperature,
      'reflectedApparentTemperature',
    ),
    temperatureDifference: {
      value: 0,
      standardUncertainty: notNegative(input.temperatureDifference ?? 0, 'temperatureDifference'),
    },
    ...view.inputs,
  };
  const surfaceOf = (at: Readonly<Record<keyof typeof inputs, number>>): number => {
    const reflected = view.radiance(at.reflectedApparentTemperature);
    const covered = view.leaving(at['reference.reading'], at);
    const emitted = (covered - (1 - at['reference.emissivity']) * reflected) / at['reference.emissivity'];
    const hint = 'The surroundings explain more than the covered spot shows.';
    return view.temperature(emitted, 'reference.reading', hint) + at.temperatureDifference;
  };
  const found = propagate(
    inputs,
    (at) => {
      const reflected = view.radiance(at.reflectedApparentTemperature);
      return (view.leaving(at.reading, at) - reflected) / (view.radiance(surfaceOf(at)) - reflected);
    },
    scaleOf,
  );
  const values = Object.fromEntries(Object.entries(inputs).map(([name, { value }]) => [name, value]));
  const surface = surfaceOf(values as Record<keyof typeof inputs, number>);
  return emissivityFinding(found, surface, inputs.reflectedApparentTemperature.value, [
    ...scatterCautions(input.reading, 'reading'),
    ...scatterCautions(input.reference.reading, 'reference.reading'),
  ]);
}

/**
 * Transmittance of a window or another medium, from a warm target read without it and through it:
 * τ = (L₂ − L(T_medium) − ρ·(L(T_mirrored) − L(T_medium))) / (L₁ − L(T_medium)).   [METHOD.md eq. 28; ASTM E1897]
 *
 * The emissivity of the target need not be known: it is the same in both readings.
 *
 * @param input - `without` and `through`: apparent temperatures; `medium`: its temperature; `reflectance` and
 *   `mirroredTemperature` of its instrument side where it reflects.
 * @returns Estimate of the transmittance in the band, for this source temperature.
 * @throws {MeasurementError} `no-solution` when no transmittance of 0…1 fits; `missing-input` when ρ > 0 has no mirrored temperature.
 */
export function transmittanceByPair(input: {
  readonly band: Band;
  readonly without: Readings;
  readonly through: Readings;
  readonly medium: Readings;
  readonly reflectance?: RatioEstimate;
  readonly mirroredTemperature?: Readings;
}): Finding {
  plainObject(input, '', ['band', 'without', 'through', 'medium', 'reflectance', 'mirroredTemperature']);
  const { band, reflectance = { value: 0 }, mirroredTemperature } = input;
  if (reflectance.value > 0 && mirroredTemperature === undefined) {
    throw new MeasurementError('missing-input', {
      path: 'mirroredTemperature',
      expected: 'what the instrument side of the medium mirrors, because it reflects',
    });
  }
  const inputs = {
    without: observed(input.without, 'without'),
    through: observed(input.through, 'through'),
    medium: observed(input.medium, 'medium'),
    reflectance: ratioOf(reflectance, 'reflectance'),
    mirroredTemperature: observed(mirroredTemperature ?? input.medium, 'mirroredTemperature'),
  };
  const radiance = band.exact.radiance;
  const found = propagate(
    inputs,
    (at) => {
      const medium = radiance(at.medium);
      const mirrored = at.reflectance * (radiance(at.mirroredTemperature) - medium);
      return (radiance(at.through) - medium - mirrored) / (radiance(at.without) - medium);
    },
    scaleOf,
  );
  const contrast = Math.abs(inputs.without.value - inputs.medium.value);
  const cautions = [
    ...scatterCautions(input.without, 'without'),
    ...scatterCautions(input.through, 'through'),
    ...contrastCautions(contrast, 'the medium'),
  ];
  return withinRatio(found, 'transmittance', cautions);
}

const setupKeys = ['band', 'path', 'pathUncertainties'] as const;

/** A view through the path: what leaves the target's place for a reading, and radiance there for a temperature. */
interface View {
  /** The uncertain inputs of the path, as deviations from what was stated. */
  readonly inputs: Readonly<Record<never, Estimate>>;
  leaving(reading: number, at: Readonly<Record<string, number>>): number;
  radiance(kelvin: number): number;
  temperature(radiance: number, path: string, hint: string): number;
}

function viewThrough({ band, path = [], pathUncertainties }: Setup): View {
  // A blackbody in the target's place: its temperature is the apparent temperature there.
  const black: MeasurementModel = measurementModel({
    band,
    emissivity: 1,
    reflectedApparentTemperature: 300 as AnyKelvin,
    path,
  });
  const { targetBand } = black;
  const flat = pathUncertainties === undefined ? {} : flatUncertainties({ path: pathUncertainties });
  for (const name of Object.keys(flat)) {
    if (black.inputs.includes(name)) continue;
    throw new MeasurementError('unknown-key', {
      path: `pathUncertainties: ${name}`,
      expected: `an input of this path: ${black.inputs.filter((input) => input.startsWith('path')).join(', ')}`,
      received: name,
    });
  }
  const inputs = Object.fromEntries(
    Object.entries(flat).map(([name, standardUncertainty]) => [name, { value: 0, standardUncertainty }]),
  );
  return {
    inputs,
    leaving(reading, at) {
      const kelvin = reading as AnyKelvin;
      let here: number = black.surfaceTemperature(kelvin as never);
      // The path's inputs enter as deviations from what was stated, to first order.
      const off = Object.keys(flat).filter((name) => at[name] !== 0);
      if (off.length > 0) {
        const sensitivities = black.sensitivities(kelvin as never);
        for (const name of off) here += sensitivities[name]! * at[name]!;
      }
      return targetBand.exact.radiance(here);
    },
    radiance: targetBand.exact.radiance,
    temperature(radiance, place, hint) {
      const kelvin = radiance > 0 ? targetBand.exact.temperature(radiance) : Number.NaN;
      if (!Number.isNaN(kelvin)) return kelvin;
      throw new MeasurementError('no-solution', {
        path: place,
        expected: 'radiance left for a temperature of 150…3500 K',
        received: radiance,
        hint,
      });
    },
  };
}

/** Mean of the replicates; type A and type B together. */
function observed(input: unknown, path: string): Estimate {
  const given = plainObject(input, path, ['readings', 'standardUncertainty']);
  const list = Array.isArray(given.readings) ? given.readings : [given.readings];
  if (list.length === 0) {
    throw new MeasurementError('missing-input', {
      path: `${path}.readings`,
      expected: 'one reading or more',
    });
  }
  const readings = list.map((reading, i) => temperature(reading, `${path}.readings[${i}]`));
  const { value, standardUncertainty } = meanOf(readings);
  const common = notNegative(given.standardUncertainty ?? 0, `${path}.standardUncertainty`);
  return { value, standardUncertainty: Math.hypot(standardUncertainty, common) };
}

function ratioOf(input: unknown, path: string): Estimate {
  const given = plainObject(input, path, ['value', 'standardUncertainty']);
  const standardUncertainty = notNegative(given.standardUncertainty ?? 0, `${path}.standardUncertainty`);
  return { value: ratio(given.value, `${path}.value`), standardUncertainty };
}

/** A kelvin for temperatures, a hundredth for ratios: both are small against what they are applied to. */
function scaleOf(name: string): number {
  return /emissivity|reflectance|transmittance/.test(name) ? 0.01 : 1;
}

function emissivityFinding(
  found: Propagated,
  surface: number,
  reflected: number,
  cautions: readonly Caution[],
): Finding {
  const finding = withinRatio(found, 'emissivity', [
    ...cautions,
    ...contrastCautions(Math.abs(surface - reflected), 'the surroundings'),
  ]);
  if (2 * found.standardUncertainty <= largestExpandedEmissivity) return finding;
  throw new MeasurementError('no-solution', {
    path: 'emissivity',
    expected: `an expanded uncertainty of ${largestExpandedEmissivity} at most`,
    received: 2 * found.standardUncertainty,
    hint: `The largest part comes from ${found.budget[0]!.name}. Raise the contrast between target and surroundings.`,
  });
}

function withinRatio(found: Propagated, path: string, cautions: readonly Caution[]): Finding {
  // A value above 1 by less than its uncertainty is a measurement of nearly 1, and is used as 1.
  if (!(found.value > 0 && found.value <= 1 + 2 * found.standardUncertainty)) {
    throw new MeasurementError('no-solution', {
      path,
      expected: `a reading that some ${path} of 0…1 gives`,
      received: found.value,
      hint: 'Check the reflected apparent temperature, the contact temperature and the path.',
    });
  }
  if (found.value <= 1) return Object.freeze({ ...found, cautions: Object.freeze(cautions) });
  const above: Caution = {
    code: 'above-one',
    message: `The readings give ${path} ${found.value.toFixed(3)}, above 1 by less than the uncertainty; 1 is used.`,
    remedy: 'Repeat the readings with more contrast.',
  };
  return Object.freeze({ ...found, value: 1, cautions: Object.freeze([...cautions, above]) });
}

function contrastCautions(contrast: number, against: string): Caution[] {
  if (contrast >= leastContrast) return [];
  return [
    {
      code: 'low-contrast',
      message: `The target is only ${contrast.toFixed(1)} K from ${against}.`,
      remedy: `Heat or cool it to at least ${leastContrast} K from them; 20 K or more is better.`,
    },
  ];
}

/** Replicates that scatter far more than the rest allow point at a target that is not steady. */
function scatterCautions({ readings, standardUncertainty = 0 }: Readings, name: string): Caution[] {
  const list: readonly number[] = Array.isArray(readings)
    ? (readings as readonly number[])
    : [readings as number];
  const { deviation } = meanOf(list);
  if (list.length < 3 || deviation <= Math.max(1, 3 * standardUncertainty)) return [];
  return [
    {
      code: 'replicates-scatter',
      message: `The readings of ${name} scatter by ${deviation.toFixed(1)} K.`,
      remedy: 'Wait until the target is steady, hold the instrument still, and read again.',
    },
  ];
}
