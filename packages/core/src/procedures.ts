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
import { notNegative, plainObject } from './check.js';
import { MeasurementError } from './errors.js';
import {
  contrastCautions,
  emissivityFinding,
  type Finding,
  observed,
  type RatioEstimate,
  type Readings,
  ratioOf,
  type Setup,
  scaleOf,
  scatterCautions,
  setupKeys,
  viewThrough,
  withinRatio,
} from './procedure-support.js';
import { propagate } from './propagation.js';

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
