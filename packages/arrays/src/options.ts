/**
 * Checks of options at the public edge: unknown keys are refused with the nearest known one, values by kind.
 */
import { ArrayError } from './errors.js';

/** A plain object of options with no other keys than these. */
export function checkedOptions(
  value: unknown,
  keys: readonly string[],
  path = 'options',
): Record<string, unknown> {
  if (value === undefined) return {};
  if (typeof value !== 'object' || value === null || Array.isArray(value) || ArrayBuffer.isView(value)) {
    throw new ArrayError('wrong-option', {
      path,
      expected: `an object with ${keys.slice(0, 6).join(', ')}`,
      received: value,
    });
  }
  for (const key of Object.keys(value)) {
    if (keys.includes(key)) continue;
    const close = nearest(key, keys);
    throw new ArrayError('unknown-option', {
      path: path === 'options' ? key : `${path}.${key}`,
      expected: `only the options ${keys.join(', ')}`,
      received: key,
      hint: close === undefined ? undefined : `Did you mean '${close}'?`,
    });
  }
  return value as Record<string, unknown>;
}

/** A finite number, or the fallback where the option is not given. */
export function numberOption(value: unknown, path: string, fallback: number): number {
  if (value === undefined) return fallback;
  if (typeof value === 'number' && Number.isFinite(value)) return value;
  throw new ArrayError('wrong-option', { path, expected: 'a finite number', received: value });
}

/** One of a few words. */
export function wordOption<Word extends string>(value: unknown, path: string, words: readonly Word[]): Word {
  if ((words as readonly unknown[]).includes(value)) return value as Word;
  const close = nearest(value, words);
  throw new ArrayError('wrong-option', {
    path,
    expected: `one of ${words.map((word) => `'${word}'`).join(', ')}`,
    received: value,
    hint: close === undefined ? undefined : `Did you mean '${close}'?`,
  });
}

/** Throws `aborted` when the signal says so. */
export function stopIfAborted(signal: AbortSignal | undefined): void {
  if (!signal?.aborted) return;
  throw new ArrayError('aborted', {
    path: 'signal',
    expected: 'a signal that is not aborted',
    cause: signal.reason,
  });
}

/** The nearest of a few words, where one is near: at most two letters or two fifths of them differ. */
export function nearest(word: unknown, words: readonly string[]): string | undefined {
  if (typeof word !== 'string' || word.length > 60) return undefined;
  let closest: string | undefined;
  let least = Number.POSITIVE_INFINITY;
  for (const candidate of words) {
    const distance = editDistance(word.toLowerCase(), candidate.toLowerCase());
    if (distance < least) [closest, least] = [candidate, distance];
  }
  return closest !== undefined && least <= Math.max(2, Math.floor(closest.length * 0.4))
    ? closest
    : undefined;
}

function editDistance(a: string, b: string): number {
  let above = Array.from({ length: b.length + 1 }, (_, column) => column);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const replaced = above[j - 1]! + (a[i - 1] === b[j - 1] ? 0 : 1);
      row.push(Math.min(replaced, above[j]! + 1, row[j - 1]! + 1));
    }
    above = row;
  }
  return above[b.length]!;
}
