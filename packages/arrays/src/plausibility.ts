/**
 * Can the numbers be what their unit says? Nothing is guessed: numbers that look like another unit are refused, with
 * the option that settles it.
 *
 * The ranges are common practice of this library, no source: 235…311 K is the weather on Earth's surface with
 * buildings in it, 150 K is below what any instrument of the trade reads, 3500 K above.
 */
import { ArrayError } from './errors.js';
import type { ToKelvin } from './temperature-unit.js';

/** Lowest and highest finite number of a frame; low > high when it has none. */
export interface NumberRange {
  readonly low: number;
  readonly high: number;
}

const weather = { low: 235, high: 311 } as const;
const coldestReading = 150;
const hottestReading = 3500;

/** Refuses a number below absolute zero, in any frame. */
export function refuseBelowAbsoluteZero({ low, high }: NumberRange, unit: ToKelvin, path: string): void {
  if (low > high || low >= unit.absoluteZero) return;
  throw new ArrayError('implausible', {
    path,
    expected: `${unit.name} of at least ${unit.absoluteZero}`,
    received: `numbers of ${shown(low)}…${shown(high)}`,
    hint:
      unit.unit === 'K' && low > -120 && high < 400
        ? "They look like degrees Celsius: write { unit: 'degC' } if they are."
        : `If ${shown(low)} stands for a missing cell, write { noData: ${low} }.`,
  });
}

/** Refuses a first frame all of whose numbers look like another unit. */
export function refuseOtherUnit({ low, high }: NumberRange, unit: ToKelvin, path: string): void {
  if (low > high) return;
  const suspect = suspicion(low, high, unit);
  if (suspect === undefined) return;
  throw new ArrayError('implausible', {
    path,
    expected: `temperatures in ${unit.name}`,
    received: `numbers of ${shown(low)}…${shown(high)}`,
    hint: `${suspect} Or write { plausibility: 'accept' } if they are ${unit.name} indeed.`,
  });
}

function suspicion(low: number, high: number, { unit }: ToKelvin): string | undefined {
  const highest = unit === 'degF' ? hottestReading * 1.8 : hottestReading;
  if (low > highest) return 'They look like scaled numbers: write { scale, offset } of the file.';
  if (unit === 'K') {
    return high < coldestReading
      ? "They look like degrees Celsius or Fahrenheit: write { unit: 'degC' } or { unit: 'degF' }."
      : undefined;
  }
  return low >= weather.low && high <= weather.high
    ? "They look like kelvin: write { unit: 'K' }."
    : undefined;
}

/** What numbers look like, as a hint for a caller who did not say the unit. */
export function likelyUnits({ low, high }: NumberRange): string {
  const units = "write { unit: 'K' }, { unit: 'degC' } or { unit: 'degF' }";
  if (low > high) return `The first frame has no number; ${units}.`;
  const range = `The first frame holds ${shown(low)}…${shown(high)}`;
  if (low > hottestReading) return `${range}, which looks scaled: write its { scale, offset } and { unit }.`;
  if (low >= weather.low && high <= hottestReading) return `${range}, which could be kelvin: ${units}.`;
  return `${range}: ${units}.`;
}

function shown(value: number): string {
  return String(Number(value.toPrecision(6)));
}
