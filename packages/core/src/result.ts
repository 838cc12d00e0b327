/**
 * A measurement result: the surface temperature with its budget, the radiance it came from, cautions, and a record
 * that re-computes to the same number. Printed, it reads as a line for a report.
 */
import { type Caution, readingCautions } from './cautions.js';
import type { Conditions, RecordedConditions } from './conditions.js';
import {
  type ConditionsDocument,
  compact,
  conditionsDocument,
  type RecordedDocument,
  recordedDocument,
} from './document.js';
import { type ApparentKelvin, measurementModel } from './measurement.js';
import type { RadianceTerm } from './measurement-equation.js';
import { checkedReading, type Engine, engineAt, type ReadingQuantity, surfaceOf, termsAt } from './model.js';
import { type RecordedKelvin, recorrection } from './recorrection.js';
import type { Pixel } from './scalar.js';
import { type BudgetRow, budgetAt, type Uncertainties } from './uncertainty.js';
import { type Kelvin, toCelsius } from './units.js';
import { softwareVersion } from './version.js';

/** A result as plain data, version 1: inputs with their origin, versions, result. Re-computes to the same number. */
export interface ResultRecord {
  readonly format: 'graybody-result';
  readonly version: 1;
  readonly software: { readonly name: '@graybody/core'; readonly version: string };
  /** Which equation of METHOD.md was inverted. */
  readonly method: string;
  readonly reading: { readonly quantity: ReadingQuantity; readonly kelvin: number };
  readonly conditions: ConditionsDocument;
  readonly recorded?: RecordedDocument;
  readonly uncertainties?: Uncertainties;
  readonly result: {
    readonly quantity: 'surface temperature';
    readonly kelvin: number;
    readonly standardUncertainty?: number;
    readonly expandedUncertainty?: number;
    readonly coverageFactor?: number;
  };
  readonly budget: readonly BudgetRow[];
  readonly cautions: readonly Caution[];
}

/** The result of one reading. Frozen. */
export interface MeasurementResult {
  readonly quantity: 'surface temperature';
  /** [K] */
  readonly temperature: Kelvin<'surface temperature'>;
  /** u. [K]; undefined where nothing was said to be uncertain. */
  readonly standardUncertainty: number | undefined;
  /** U = k·u. [K] */
  readonly expandedUncertainty: number | undefined;
  readonly coverageFactor: number | undefined;
  /** One row an uncertain input, largest part first. */
  readonly budget: readonly BudgetRow[];
  /** Parts of the radiance at the instrument; they add up to the whole. */
  readonly radianceTerms: readonly RadianceTerm[];
  readonly cautions: readonly Caution[];
  readonly record: ResultRecord;
  /** The result in a few lines: °C and K, uncertainty when known, cautions. */
  toString(): string;
  /** The record. */
  toJSON(): ResultRecord;
}

/**
 * The result of one apparent temperature, with its budget.
 *
 * @param apparent - What the instrument shows. [K]
 * @param conditions - As for `measurementModel`.
 * @param uncertainties - In the shape of the conditions; where `apparent` is absent, the instrument's accuracy holds.
 * @param pixel - Where an input is a map.
 * @throws {MeasurementError} as `surfaceTemperature`; `unknown-key` for an uncertainty of an input there is not.
 * @example
 * measurementResult(celsius(62.4), conditions, { apparent: 1, emissivity: 0.02, reflectedApparentTemperature: 2 })
 */
export function measurementResult(
  apparent: ApparentKelvin,
  conditions: Conditions,
  uncertainties?: Uncertainties,
  pixel?: Pixel,
): MeasurementResult {
  return resultOf(measurementModel(conditions).engine, apparent, uncertainties, pixel);
}

/**
 * The result of one recorded temperature, taken back and corrected anew, with its budget.
 *
 * @throws {MeasurementError} as `recorrection` and {@link measurementResult}.
 */
export function recorrectionResult(
  recordedTemperature: RecordedKelvin,
  recorded: RecordedConditions,
  actual: Conditions,
  uncertainties?: Uncertainties,
  pixel?: Pixel,
): MeasurementResult {
  return resultOf(recorrection(recorded, actual).engine, recordedTemperature, uncertainties, pixel);
}

function resultOf(
  engine: Engine,
  value: unknown,
  uncertainties: Uncertainties | undefined,
  pixel: Pixel | undefined,
): MeasurementResult {
  const at = engineAt(engine, pixel);
  const reading = checkedReading(value, engine.reads);
  const temperature = surfaceOf(at, reading);
  const budget = budgetAt(at, reading, uncertainties);
  const cautions = Object.freeze(readingCautions(at, reading, temperature));
  const rows = Object.freeze(budget?.rows ?? []);
  const figures = {
    standardUncertainty: budget?.standardUncertainty,
    expandedUncertainty: budget?.expandedUncertainty,
    coverageFactor: budget?.coverageFactor,
  };
  const record = compact({
    format: 'graybody-result',
    version: 1,
    software: { name: '@graybody/core', version: softwareVersion },
    method: engine.recorded
      ? 'recorrection, METHOD.md eq. 16'
      : 'inverse of the measurement equation, METHOD.md eq. 12',
    reading: { quantity: engine.reads, kelvin: reading },
    conditions: conditionsDocument(engine.conditions, pixel),
    recorded: engine.recorded && recordedDocument(engine.recorded.conditions, pixel),
    uncertainties,
    result: compact({ quantity: 'surface temperature', kelvin: temperature, ...figures }),
    budget: rows,
    cautions,
  }) as ResultRecord;
  const text = (): string => resultText(temperature, figures, rows, cautions);
  const result: MeasurementResult = {
    quantity: 'surface temperature',
    temperature,
    ...figures,
    budget: rows,
    radianceTerms: termsAt(at, temperature),
    cautions,
    record,
    toString: text,
    toJSON: () => record,
  };
  // Node's REPL and console print a value by this symbol; elsewhere it does nothing.
  Object.defineProperty(result, Symbol.for('nodejs.util.inspect.custom'), { value: text });
  return Object.freeze(result);
}

function resultText(
  temperature: Kelvin<'surface temperature'>,
  {
    expandedUncertainty,
    coverageFactor,
  }: { expandedUncertainty: number | undefined; coverageFactor: number | undefined },
  budget: readonly BudgetRow[],
  cautions: readonly Caution[],
): string {
  const digits = expandedUncertainty === undefined ? 2 : decimalsFor(expandedUncertainty);
  const lines = [
    `surface temperature ${toCelsius(temperature).toFixed(digits)} °C (${temperature.toFixed(digits)} K)` +
      (expandedUncertainty === undefined
        ? ', uncertainty not stated'
        : `, U = ${expandedUncertainty.toFixed(digits)} K (k = ${coverageFactor})`),
  ];
  const largest = budget[0];
  if (largest && largest.share > 0) {
    lines.push(
      `  the largest part comes from ${largest.name} (${Math.round(100 * largest.share)} % of the variance)`,
    );
  }
  for (const { message, remedy } of cautions) lines.push(`  caution: ${message} ${remedy}`);
  return lines.join('\n');
}

/** Decimals that show an uncertainty with two digits at most. JCGM 100:2008, 7.2.6 */
function decimalsFor(uncertainty: number): number {
  if (!(uncertainty > 0)) return 2;
  return Math.min(4, Math.max(0, 1 - Math.floor(Math.log10(uncertainty))));
}
