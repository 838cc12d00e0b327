/**
 * One-line checks for the public edge: each returns its value or throws a {@link MeasurementError} that says
 * what was expected, what came, and what to write instead. Nothing is built unless something is thrown.
 */
import { MeasurementError } from './errors.js';
import { type AnyKelvin, highestTemperature, lowestTemperature } from './units.js';

/** A finite number. */
export function finiteNumber(value: unknown, path: string, expected = 'a number'): number {
  if (typeof value !== 'number')
    throw new MeasurementError('wrong-type', { path, expected, received: value });
  if (!Number.isFinite(value)) {
    throw new MeasurementError('not-finite', { path, expected: 'a finite number', received: value });
  }
  return value;
}

/** A finite number above zero. */
export function positive(value: unknown, path: string): number {
  const number = finiteNumber(value, path);
  if (number > 0) return number;
  throw new MeasurementError('out-of-range', { path, expected: 'a number > 0', received: value });
}

/** A finite number, zero or above. */
export function notNegative(value: unknown, path: string): number {
  const number = finiteNumber(value, path);
  if (number >= 0) return number;
  throw new MeasurementError('out-of-range', { path, expected: 'a number ≥ 0', received: value });
}

/** A ratio between two limits; a percentage is recognised and the ratio to write is named. */
export function ratio(value: unknown, path: string, lowest: 'above 0' | 'from 0' = 'from 0'): number {
  const noun = path.slice(path.lastIndexOf('.') + 1);
  const expected = lowest === 'above 0' ? `0 < ${noun} ≤ 1` : `0 ≤ ${noun} ≤ 1`;
  const number = finiteNumber(value, path, `a number with ${expected}`);
  if (number <= 1 && (lowest === 'above 0' ? number > 0 : number >= 0)) return number;
  throw new MeasurementError('out-of-range', {
    path,
    expected,
    received: value,
    ...(number > 1 && number <= 100 ? { hint: `Write ${number / 100} for ${number} %.` } : {}),
  });
}

/** An absolute temperature in kelvin that the bands can be evaluated at, 150…3500 K. */
export function temperature(value: unknown, path: string): AnyKelvin {
  const number = finiteNumber(value, path, 'a temperature in kelvin');
  if (number >= lowestTemperature && number <= highestTemperature) return number as AnyKelvin;
  const slip = number > -120 && number < lowestTemperature;
  throw new MeasurementError('out-of-range', {
    path,
    expected: `a temperature of ${lowestTemperature}…${highestTemperature} K`,
    received: value,
    ...(slip ? { hint: `Did you mean celsius(${number})?` } : {}),
  });
}

/** One of a few words. */
export function oneOf<Word extends string>(value: unknown, path: string, words: readonly Word[]): Word {
  if ((words as readonly unknown[]).includes(value)) return value as Word;
  throw new MeasurementError(typeof value === 'string' ? 'out-of-range' : 'wrong-type', {
    path,
    expected: `one of ${words.map((word) => `'${word}'`).join(', ')}`,
    received: value,
    ...nearest(value, words),
  });
}

/** A plain object with no other keys than these; an unknown key is answered with the nearest known one. */
export function plainObject(value: unknown, path: string, keys: readonly string[]): Record<string, unknown> {
  if (typeof value !== 'object' || value === null || Array.isArray(value) || ArrayBuffer.isView(value)) {
    throw new MeasurementError('wrong-type', {
      path,
      expected: `an object with ${keys.slice(0, 6).join(', ')}`,
      received: value,
    });
  }
  for (const key of Object.keys(value)) {
    if (!keys.includes(key)) {
      throw new MeasurementError('unknown-key', {
        path: path === '' ? key : `${path}.${key}`,
        expected: `only the keys ${keys.join(', ')}`,
        received: key,
        ...nearest(key, keys),
      });
    }
  }
  return value as Record<string, unknown>;
}

/** A list of finite numbers, in a plain or a typed array. */
export function numberList(value: unknown, path: string): readonly number[] {
  const isList = Array.isArray(value) || (ArrayBuffer.isView(value) && !(value instanceof DataView));
  if (!isList)
    throw new MeasurementError('wrong-type', { path, expected: 'a list of numbers', received: value });
  const list = Array.from(value as ArrayLike<unknown>);
  list.forEach((item, index) => {
    finiteNumber(item, `${path}[${index}]`);
  });
  return list as number[];
}

/** The hint `Did you mean …?` with the nearest of a few words, where one is near. */
export function nearest(word: unknown, words: readonly string[]): { hint?: string } {
  if (typeof word !== 'string') return {};
  let closest = '';
  let least = Number.POSITIVE_INFINITY;
  for (const candidate of words) {
    if (candidate === word) continue;
    const distance = editDistance(word.toLowerCase(), candidate.toLowerCase());
    if (distance < least) [closest, least] = [candidate, distance];
  }
  return least <= Math.max(2, Math.floor(closest.length * 0.6)) ? { hint: `Did you mean '${closest}'?` } : {};
}

/** Edit distance of two short words: letters put in, left out, replaced, or two neighbours swapped. */
function editDistance(a: string, b: string): number {
  const rows: number[][] = [Array.from({ length: b.length + 1 }, (_, column) => column)];
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const above = rows[i - 1]!;
      const replaced = above[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1);
      const swapped = i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1];
      row.push(
        Math.min(replaced, above[j]! + 1, row[j - 1]! + 1, swapped ? rows[i - 2]![j - 2]! + 1 : Infinity),
      );
    }
    rows.push(row);
  }
  return rows[a.length]![b.length]!;
}
