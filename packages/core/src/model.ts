/**
 * A model: conditions compiled once, answering readings and frames. Shared by the measurement of an apparent
 * temperature and by the recorrection of a recorded one, which differ only in how the reading becomes radiance.
 */

import { temperature } from './check.js';
import type { Conditions, RecordedSettings } from './conditions.js';
import { MeasurementError } from './errors.js';
import { type EquationAt, equationAt, hasMaps } from './evaluation.js';
import {
  type MeasurementEquation,
  measurementEquation,
  type RadianceTerm,
  radianceTerms,
} from './measurement-equation.js';
import type { Quantity } from './quantity.js';
import type { Pixel } from './scalar.js';
import { radianceSensitivities, type Sensitivities } from './sensitivity.js';
import type { AnyKelvin, Kelvin } from './units.js';

/** Surface temperatures a correction answers with; beyond them it says `out-of-range`. [K], −60…3000 °C */
export const surfaceRange: { readonly from: number; readonly to: number } = { from: 213.15, to: 3273.15 };

/** What a reading is, for a model. */
export type ReadingQuantity = 'apparent temperature' | 'recorded temperature';

/** Equations of a model: the actual conditions, and the recorded ones where there are such. */
export interface Engine {
  readonly reads: ReadingQuantity;
  readonly conditions: Conditions;
  readonly equation: MeasurementEquation;
  readonly recorded:
    | { readonly conditions: RecordedSettings; readonly equation: MeasurementEquation }
    | undefined;
}

/** An engine at one place, with numbers for every input. */
export interface EngineAt {
  readonly engine: Engine;
  readonly pixel: Pixel | undefined;
  readonly actual: EquationAt;
  readonly recorded: EquationAt | undefined;
}

/** Compiles checked conditions. */
export function engineOf(conditions: Conditions, recorded?: RecordedSettings): Engine {
  return {
    reads: recorded === undefined ? 'apparent temperature' : 'recorded temperature',
    conditions,
    equation: measurementEquation(conditions),
    recorded: recorded && { conditions: recorded, equation: measurementEquation(recorded) },
  };
}

/** Whether an engine needs a pixel to answer. */
function needsPixel(engine: Engine): boolean {
  return hasMaps(engine.equation) || (engine.recorded !== undefined && hasMaps(engine.recorded.equation));
}

/** Puts numbers to every input. */
export function engineAt(engine: Engine, pixel: Pixel | undefined): EngineAt {
  return {
    engine,
    pixel,
    actual: equationAt(engine.equation, pixel),
    recorded: engine.recorded && equationAt(engine.recorded.equation, pixel),
  };
}

/** Puts numbers to every input, once where a model needs no pixel or is held to one. */
export function placesOf(
  engine: Engine,
  fixed: Pixel | undefined,
): { readonly needsPixel: boolean; readonly at: (pixel: Pixel | undefined) => EngineAt } {
  const uniform = !needsPixel(engine) || fixed !== undefined ? engineAt(engine, fixed) : undefined;
  return {
    needsPixel: uniform === undefined,
    at: (pixel) => (pixel === undefined && uniform ? uniform : engineAt(engine, pixel)),
  };
}

/** Radiance at the instrument for a reading.   [METHOD.md eq. 16] */
export function radianceOfReading(at: EngineAt, reading: number): number {
  const { recorded, engine } = at;
  if (recorded === undefined) return engine.equation.band.exact.radiance(reading);
  return recorded.gain * recorded.equation.targetBand.exact.radiance(reading) + recorded.offset;
}

/** The inverse: surface temperature of a reading.   [METHOD.md eq. 12] */
export function surfaceOf(at: EngineAt, reading: AnyKelvin): Kelvin<'surface temperature'> {
  const { actual, engine } = at;
  const seen = radianceOfReading(at, reading);
  const radiance = (seen - actual.offset) / actual.gain;
  const solution = radiance > 0 ? engine.equation.targetBand.exact.temperature(radiance) : Number.NaN;
  if (solution >= surfaceRange.from && solution <= surfaceRange.to)
    return solution as Kelvin<'surface temperature'>;
  throw radiance > 0 ? outsideRange(at, radiance, reading) : noSurface(at, reading);
}

/** The forward direction: what the instrument would show for a surface temperature. */
export function readingOf(at: EngineAt, surface: AnyKelvin): number {
  const { actual, recorded, engine } = at;
  const seen = actual.gain * engine.equation.targetBand.exact.radiance(surface) + actual.offset;
  if (recorded === undefined) return engine.equation.band.temperature(seen);
  const { targetBand } = recorded.equation;
  const radiance = (seen - recorded.offset) / recorded.gain;
  const solution = targetBand.exact.temperature(radiance);
  if (!Number.isNaN(solution)) return solution;
  throw notStorable(recorded, radiance);
}

/**
 * Readings from which on, and up to which, a value is saturated: the ends of the measuring range. A range of the
 * actual conditions is of apparent temperature and is carried over to recorded ones.
 */
export function saturationOf(engine: Engine): { readonly from: number; readonly to: number } | undefined {
  const { recorded, conditions } = engine;
  // 1 mK: a float32 of the range's end may lie just inside it.
  const inside = 1e-3 + (recorded?.conditions.resolution ?? 0) / 2;
  const own = (recorded ?? engine).conditions.instrument?.measuringRange;
  if (own) return { from: own.from + inside, to: own.to - inside };
  const apparent = conditions.instrument?.measuringRange;
  if (!apparent || !recorded || hasMaps(recorded.equation)) return undefined;
  const { gain, offset, equation } = equationAt(recorded.equation, undefined);
  const stored = (end: number): number =>
    equation.targetBand.exact.temperature((engine.equation.band.exact.radiance(end) - offset) / gain);
  const [from, to] = [stored(apparent.from), stored(apparent.to)];
  return {
    from: Number.isNaN(from) ? Number.NEGATIVE_INFINITY : from + inside,
    to: Number.isNaN(to) ? Number.POSITIVE_INFINITY : to - inside,
  };
}

/** Sensitivity of the surface temperature to the reading and to every input. */
export function sensitivitiesAt(at: EngineAt, reading: AnyKelvin): Sensitivities {
  const surface = surfaceOf(at, reading);
  const { engine, actual, recorded, pixel } = at;
  const perRadiance = 1 / (actual.gain * engine.equation.targetBand.exact.slope(surface));
  const result: Record<string, number> = {};
  if (recorded === undefined || engine.recorded === undefined) {
    result.apparent = engine.equation.band.exact.slope(reading) * perRadiance;
  } else {
    result.recorded = recorded.gain * recorded.equation.targetBand.exact.slope(reading) * perRadiance;
    const settings = radianceSensitivities(recorded, engine.recorded.conditions, reading, pixel);
    for (const [name, value] of Object.entries(settings)) result[`recorded.${name}`] = value * perRadiance;
  }
  const actualOnes = radianceSensitivities(actual, engine.conditions, surface, pixel);
  for (const [name, value] of Object.entries(actualOnes)) result[name] = -value * perRadiance;
  return Object.freeze(result);
}

/** Parts of the radiance at the instrument for a surface temperature. */
export function termsAt(at: EngineAt, surface: number): readonly RadianceTerm[] {
  const { equation, x } = at.actual;
  return radianceTerms(equation, x, equation.targetBand.exact.radiance(surface));
}

/**
 * A reading as a number: a plain one is taken by contract, what knows its quantity must have the right one.
 *
 * @throws {MeasurementError} `already-corrected`, `wrong-quantity`, `wrong-type`, `not-finite`, `out-of-range`.
 */
export function checkedReading(value: unknown, reads: ReadingQuantity): AnyKelvin {
  const path = reads === 'apparent temperature' ? 'apparent' : 'recorded';
  const quantity =
    typeof value === 'object' && value !== null ? (value as { quantity?: unknown }).quantity : undefined;
  if (quantity === undefined) return temperature(value, path);
  refuseQuantity(quantity, reads, path);
  return temperature((value as { temperature?: unknown }).temperature, path);
}

/** Throws unless a quantity is the one a model reads. */
export function refuseQuantity(quantity: unknown, reads: Quantity, path: string): void {
  if (quantity === reads) return;
  if (quantity === 'surface temperature') {
    throw new MeasurementError('already-corrected', {
      path,
      expected: reads,
      received: quantity,
      hint: 'This is a surface temperature already; correcting it again would be wrong by kelvins. Use it as it is.',
    });
  }
  const hints: Partial<Record<string, string>> = {
    counts: 'Turn counts into radiance or temperature with the calibration of the instrument first.',
    'band radiance': 'Turn it into apparent temperature with apparentFrame(frame, band) first.',
    'recorded temperature': 'Use recorrection(recorded, actual), which takes the recorded settings back.',
    'apparent temperature': 'Use measurementModel(conditions): no settings were applied to it.',
  };
  const hint = typeof quantity === 'string' ? hints[quantity] : undefined;
  throw new MeasurementError('wrong-quantity', {
    path,
    expected: reads,
    received: quantity,
    ...(hint ? { hint } : {}),
  });
}

function noSurface(at: EngineAt, reading: number): MeasurementError {
  const { actual, engine } = at;
  const alone = engine.equation.band.exact.temperature(actual.offset);
  const showing = Number.isNaN(alone)
    ? ''
    : ` Surroundings and path alone would already show ${alone.toFixed(2)} K.`;
  return new MeasurementError('no-solution', {
    path: engine.recorded ? 'recorded' : 'apparent',
    expected: 'a reading above what surroundings and path send by themselves',
    received: `${reading} K`,
    hint: `${showing} Check emissivity, reflected apparent temperature and path: one of them is too low or too high.`.trim(),
  });
}

/** Settings that leave the target nothing, or less or more than any blackbody of the band's range sends. */
function notStorable({ equation }: EquationAt, radiance: number): MeasurementError {
  const { from, to } = equation.targetBand.range;
  const tooMuch = radiance > equation.targetBand.exact.radiance(to);
  return new MeasurementError('no-solution', {
    path: 'recorded',
    expected: `settings under which the instrument could have stored a temperature of ${from}…${to} K`,
    received: `${radiance.toPrecision(4)} for the target`,
    hint: tooMuch
      ? 'The recorded settings ascribe too little radiance to surroundings and path, or too low an emissivity or transmittance.'
      : 'The recorded settings ascribe more radiance to surroundings and path than there is.',
  });
}

function outsideRange(at: EngineAt, radiance: number, reading: number): MeasurementError {
  const { from } = surfaceRange;
  const { targetBand } = at.engine.equation;
  const low = radiance < targetBand.exact.radiance(Math.max(from, targetBand.range.from));
  return new MeasurementError('out-of-range', {
    path: 'surface temperature',
    expected: `a result of ${Math.max(from, targetBand.range.from)}…${Math.min(surfaceRange.to, targetBand.range.to)} K`,
    received: `one ${low ? 'below' : 'above'} it for a reading of ${reading} K`,
    hint: low
      ? 'Nearly all of the radiance is ascribed to surroundings and path: check emissivity and reflected temperature.'
      : 'Check emissivity and transmittance: the radiance left for the target is too high.',
  });
}
