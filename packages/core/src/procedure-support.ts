/**
 * What the procedures share: replicated readings, the view through a path, and what is said of a finding.
 */
import type { Band } from './band.js';
import type { Caution } from './cautions.js';
import { notNegative, plainObject, ratio, temperature } from './check.js';
import { MeasurementError } from './errors.js';
import type { Layer } from './layer.js';
import { type MeasurementModel, measurementModel } from './measurement.js';
import { type Estimate, meanOf, type Propagated } from './propagation.js';
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

/** Keys every procedure through a path takes. */
export const setupKeys = ['band', 'path', 'pathUncertainties'] as const;

/** A view through the path: what leaves the target's place for a reading, and radiance there for a temperature. */
export interface View {
  /** The uncertain inputs of the path, as deviations from what was stated. */
  readonly inputs: Readonly<Record<never, Estimate>>;
  leaving(reading: number, at: Readonly<Record<string, number>>): number;
  radiance(kelvin: number): number;
  temperature(radiance: number, path: string, hint: string): number;
}

/** Compiles the path of a setup. */
export function viewThrough({ band, path = [], pathUncertainties }: Setup): View {
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
export function observed(input: unknown, path: string): Estimate {
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

/** A ratio with its standard uncertainty, checked. */
export function ratioOf(input: unknown, path: string): Estimate {
  const given = plainObject(input, path, ['value', 'standardUncertainty']);
  const standardUncertainty = notNegative(given.standardUncertainty ?? 0, `${path}.standardUncertainty`);
  return { value: ratio(given.value, `${path}.value`), standardUncertainty };
}

/** A kelvin for temperatures, a hundredth for ratios: both are small against what they are applied to. */
export function scaleOf(name: string): number {
  return /emissivity|reflectance|transmittance/.test(name) ? 0.01 : 1;
}

/** An emissivity, with what is to be said of its contrast; refused where it decides nothing. */
export function emissivityFinding(
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

/** A ratio within 0…1, or the reason why it is none. */
export function withinRatio(found: Propagated, path: string, cautions: readonly Caution[]): Finding {
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

/** Says when there is little contrast to work with. */
export function contrastCautions(contrast: number, against: string): Caution[] {
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
export function scatterCautions({ readings, standardUncertainty = 0 }: Readings, name: string): Caution[] {
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
