/**
 * NPY bytes of plain numbers.
 */
import { view } from '@graybody/core';
import { writeFrames } from '../../src/write.js';

/** NPY bytes of a frame of plain numbers, without a description. */
export async function npyOf(
  numbers: readonly number[],
  type: 'f4' | 'f8' | 'i2' | 'u2' = 'f8',
): Promise<Uint8Array> {
  const arrays = { f4: Float32Array, f8: Float64Array, i2: Int16Array, u2: Uint16Array };
  const array = view(arrays[type].from(numbers), [1, numbers.length]);
  return writeFrames('bytes', array, { format: 'npy', quantity: 'counts', metadata: 'drop' });
}
