/**
 * First-order uncertainty of one reading: u² = Σ (c_i·u_i)², for independent inputs.   [METHOD.md eq. 18;
 * JCGM 100:2008, 5.1.2]
 *
 * Inputs are standard uncertainties, half-widths of a distribution, or expanded uncertainties. U = k·u with k = 2.
 */
import { notNegative, oneOf, plainObject, positive } from './check.js';
import { accuracyHalfWidth, type Conditions } from './conditions.js';
import { MeasurementError } from './errors.js';
import type { EngineAt } from './model.js';
import { sensitivitiesAt } from './model.js';
import type { AnyKelvin } from './units.js';

/** Distribution an input given by its half-width follows. JCGM 100:2008, 4.3 */
export type Distribution = 'rectangular' | 'triangular' | 'arcsine';

/** Uncertainty of one input: a standard uncertainty, or how it was stated. In the unit of the input, ≥ 0 */
export type UncertaintyEntry =
  | number
  | { readonly standard: number }
  | { readonly halfWidth: number; readonly distribution?: Distribution }
  | { readonly expanded: number; readonly coverageFactor: number };

/** Uncertainties in the shape of the conditions. Temperatures in kelvin, ratios as ratios. */
export interface Uncertainties {
  /** Of the apparent temperature, or of the recorded one for a recorrection. [K] */
  readonly apparent?: UncertaintyEntry;
  readonly recorded?: UncertaintyEntry;
  readonly emissivity?: UncertaintyEntry;
  /** [K] */
  readonly reflectedApparentTemperature?: UncertaintyEntry;
  readonly reflectedRadiance?: UncertaintyEntry;
  readonly path?: readonly Readonly<Partial<Record<PathKey, UncertaintyEntry>>>[];
  readonly surface?: {
    readonly transmittance?: UncertaintyEntry;
    readonly backgroundApparentTemperature?: UncertaintyEntry;
  };
}

/** Inputs of a layer that can be uncertain. */
export type PathKey =
  | 'transmittance'
  | 'reflectance'
  | 'temperature'
  | 'mirroredTemperature'
  | 'pathRadiance';

const uncertaintyKeys = [
  'apparent',
  'recorded',
  'emissivity',
  'reflectedApparentTemperature',
  'reflectedRadiance',
  'path',
  'surface',
] as const satisfies readonly (keyof Uncertainties)[];
const pathKeys = [
  'transmittance',
  'reflectance',
  'temperature',
  'mirroredTemperature',
  'pathRadiance',
] as const;
const surfaceKeys = ['transmittance', 'backgroundApparentTemperature'] as const;

/** One line of a budget. */
export interface BudgetRow {
  /** Name of the input. */
  readonly name: string;
  /** [unit of the input] */
  readonly standardUncertainty: number;
  /** ∂T/∂input. [K per unit of the input] */
  readonly sensitivity: number;
  /** |sensitivity| · standard uncertainty. [K] */
  readonly contribution: number;
  /** Part of the variance, 0…1. */
  readonly share: number;
  /** Where the uncertainty comes from, where it was not given with the uncertainties. */
  readonly origin?: string;
}

/** A budget, largest part first. */
export interface Budget {
  readonly rows: readonly BudgetRow[];
  /** u of the surface temperature. [K] */
  readonly standardUncertainty: number;
  /** U = k·u. [K] */
  readonly expandedUncertainty: number;
  readonly coverageFactor: number;
}

/** Coverage factor for about 95 % without finite degrees of freedom. JCGM 100:2008, 6.3.3 */
const coverageFactor = 2;

const halfWidthDivisor: Readonly<Record<Distribution, number>> = {
  rectangular: Math.sqrt(3),
  triangular: Math.sqrt(6),
  arcsine: Math.sqrt(2),
};

/**
 * Standard uncertainty of an entry.
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `unknown-key`; `out-of-range` for a negative one;
 *   `missing-input`, `conflicting-inputs` when it is not stated in exactly one way.
 */
export function standardUncertaintyOf(entry: unknown, path: string): number {
  if (typeof entry === 'number') return notNegative(entry, path);
  const given = plainObject(entry, path, [
    'standard',
    'halfWidth',
    'distribution',
    'expanded',
    'coverageFactor',
  ]);
  const stated = ['standard', 'halfWidth', 'expanded'].filter((key) => given[key] !== undefined);
  if (stated.length !== 1) {
    throw new MeasurementError(stated.length === 0 ? 'missing-input' : 'conflicting-inputs', {
      path,
      expected: 'exactly one of standard, halfWidth and expanded',
      received: entry,
    });
  }
  for (const [key, partner] of [
    ['distribution', 'halfWidth'],
    ['coverageFactor', 'expanded'],
  ] as const) {
    if (given[key] === undefined || stated[0] === partner) continue;
    throw new MeasurementError('conflicting-inputs', {
      path: `${path}.${key}`,
      expected: `${key} only beside ${partner}`,
      received: entry,
    });
  }
  if (given.standard !== undefined) return notNegative(given.standard, `${path}.standard`);
  if (given.expanded !== undefined) {
    return (
      notNegative(given.expanded, `${path}.expanded`) /
      positive(given.coverageFactor, `${path}.coverageFactor`)
    );
  }
  const words = ['rectangular', 'triangular', 'arcsine'] as const;
  const distribution =
    given.distribution === undefined
      ? 'rectangular'
      : oneOf(given.distribution, `${path}.distribution`, words);
  return notNegative(given.halfWidth, `${path}.halfWidth`) / halfWidthDivisor[distribution];
}

/** Standard uncertainties by input name, from the shape of the conditions. */
export function flatUncertainties(uncertainties: unknown): Record<string, number> {
  const given = plainObject(uncertainties, 'uncertainties', uncertaintyKeys);
  const flat: Record<string, number> = {};
  const put = (name: string, entry: unknown): void => {
    if (entry !== undefined) flat[name] = standardUncertaintyOf(entry, `uncertainties.${name}`);
  };
  for (const key of [
    'apparent',
    'recorded',
    'emissivity',
    'reflectedApparentTemperature',
    'reflectedRadiance',
  ]) {
    put(key, given[key]);
  }
  if (given.path !== undefined) {
    if (!Array.isArray(given.path)) {
      throw new MeasurementError('wrong-type', {
        path: 'uncertainties.path',
        expected: 'an array with one object a layer',
        received: given.path,
      });
    }
    given.path.forEach((layer, k) => {
      const entries = plainObject(layer, `uncertainties.path[${k}]`, pathKeys);
      for (const key of pathKeys) put(`path[${k}].${key}`, entries[key]);
    });
  }
  if (given.surface !== undefined) {
    const entries = plainObject(given.surface, 'uncertainties.surface', surfaceKeys);
    for (const key of surfaceKeys) put(`surface.${key}`, entries[key]);
  }
  return flat;
}

/**
 * The budget of one reading. Undefined when nothing is known to be uncertain.
 *
 * @throws {MeasurementError} `unknown-key` for an uncertainty of an input the conditions do not have.
 */
export function budgetAt(
  at: EngineAt,
  reading: AnyKelvin,
  uncertainties: Uncertainties | undefined,
): Budget | undefined {
  const given = uncertainties === undefined ? {} : flatUncertainties(uncertainties);
  const sensitivities = sensitivitiesAt(at, reading);
  for (const name of Object.keys(given)) {
    if (name in sensitivities) continue;
    throw new MeasurementError('unknown-key', {
      path: `uncertainties.${name}`,
      expected: `an input of these conditions: ${Object.keys(sensitivities).join(', ')}`,
      received: name,
    });
  }
  const implied = impliedUncertainties(at, reading);
  const names = [...new Set([...Object.keys(given), ...Object.keys(implied)])];
  if (names.length === 0) return undefined;
  const { rows, standardUncertainty } = combined(
    names.map((name) => {
      const own = given[name];
      return {
        name,
        standardUncertainty: own ?? implied[name]!.standardUncertainty,
        sensitivity: sensitivities[name]!,
        ...(own === undefined ? { origin: implied[name]!.origin } : {}),
      };
    }),
  );
  return {
    rows,
    standardUncertainty,
    coverageFactor,
    expandedUncertainty: coverageFactor * standardUncertainty,
  };
}

/** Contributions |c·u| of independent inputs, their shares of the variance, largest first, and u = √Σ(c·u)². */
export function combined(inputs: readonly Omit<BudgetRow, 'contribution' | 'share'>[]): {
  readonly rows: readonly BudgetRow[];
  readonly standardUncertainty: number;
} {
  const parts = inputs.map((input) => ({
    ...input,
    contribution: Math.abs(input.sensitivity) * input.standardUncertainty,
  }));
  const variance = parts.reduce((sum, { contribution }) => sum + contribution ** 2, 0);
  const rows = parts
    .map((part) => ({ ...part, share: variance > 0 ? part.contribution ** 2 / variance : 0 }))
    .sort((a, b) => b.share - a.share);
  return { rows, standardUncertainty: Math.sqrt(variance) };
}

/** Uncertainties the conditions bring with them: intervals, the instrument's accuracy, rounding of recorded values. */
function impliedUncertainties(
  { engine, recorded }: EngineAt,
  reading: AnyKelvin,
): Record<string, { readonly standardUncertainty: number; readonly origin: string }> {
  const implied: Record<string, { standardUncertainty: number; origin: string }> = {};
  const ofIntervals = (conditions: Conditions, prefix: string): void => {
    (conditions.path ?? []).forEach((layer, k) => {
      for (const [key, halfWidth] of Object.entries(layer.halfWidths)) {
        implied[`${prefix}path[${k}].${key}`] = {
          standardUncertainty: halfWidth / halfWidthDivisor.rectangular,
          origin: 'half-width of the interval given, rectangular',
        };
      }
      const own = layer.inBand?.(conditions.band, reading).uncertainties ?? {};
      for (const [key, entry] of Object.entries(own)) implied[`${prefix}path[${k}].${key}`] = entry;
    });
  };
  ofIntervals(engine.conditions, '');
  if (engine.recorded && recorded) {
    ofIntervals(engine.recorded.conditions, 'recorded.');
    const { resolution } = engine.recorded.conditions;
    if (resolution !== undefined) {
      implied.recorded = {
        standardUncertainty: resolution / 2 / halfWidthDivisor.rectangular,
        origin: 'half of the step recorded values are rounded to, rectangular',
      };
    }
  }
  const accuracy = accuracyHalfWidth(engine.conditions.instrument, reading);
  if (accuracy !== undefined && !recorded) {
    implied.apparent = {
      standardUncertainty: accuracy / halfWidthDivisor.rectangular,
      origin: 'accuracy stated for the instrument, rectangular',
    };
  }
  return implied;
}
