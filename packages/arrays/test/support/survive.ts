/**
 * Reading damaged files under a watchdog.
 */
import { expect } from 'vitest';
import { isArrayError } from '../../src/errors.js';
import { readFrames } from '../../src/frames.js';
import { sha256 } from './fixtures.js';

/** Frames read without a unit. */
export const counts = { quantity: 'counts' } as const;

/** Longest time one damaged file may take. [ms] */
export const patience = 2000;

/** Reads a damaged file: a typed error in time, or an array of a size that its bytes can hold. */
export async function survive(
  bytes: Uint8Array,
  whole?: { length: number; numbers: string },
): Promise<string> {
  const start = performance.now();
  let timer: NodeJS.Timeout | undefined;
  const hang = new Promise<never>((_, reject) => {
    timer = setTimeout(() => reject(new Error('hang')), patience * 2);
  });
  try {
    const { array } = await Promise.race([readFrames(bytes, counts), hang]);
    expect(array.data.length).toBe(array.shape.reduce((product, extent) => product * extent, 1));
    return `read ${array.shape.join('x')}${bytes.length < (whole?.length ?? 0) && whole?.numbers === sha256(array.data) ? ' unharmed' : ''}`;
  } catch (error) {
    if (!isArrayError(error)) throw error;
    return error.code;
  } finally {
    clearTimeout(timer);
    expect(performance.now() - start).toBeLessThan(patience);
  }
}
