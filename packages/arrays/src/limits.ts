/**
 * Limits on what is read, and the check of a declared size against them and against the bytes that are there.
 *
 * Nothing is allocated from a header before it has passed here.
 */
import { ArrayError } from './errors.js';
import { checkedOptions } from './options.js';

/** What reading may take. */
export interface Limits {
  /**
   * Most bytes held at once for one source: the array that `readFrames` returns, the text of a delimited grid, one
   * frame with its compressed blocks. Default 1 GiB.
   */
  readonly bytes: number;
  /** Most pixels (rows × columns) of one frame. Default 2²⁶, 67 million. */
  readonly pixels: number;
  /** Most frames of one source. Default 1 000 000. */
  readonly frames: number;
}

/** The limits used where the caller gives none. */
export const defaultLimits: Limits = Object.freeze({ bytes: 2 ** 30, pixels: 2 ** 26, frames: 1_000_000 });

/** Limits with the defaults filled in. */
export function limitsOf(given: unknown): Limits {
  const options = checkedOptions(given, Object.keys(defaultLimits), 'limits');
  const limit = (key: keyof Limits): number => {
    const value = options[key] ?? defaultLimits[key];
    if (typeof value === 'number' && value >= 1 && !Number.isNaN(value)) return value;
    throw new ArrayError('wrong-option', {
      path: `limits.${key}`,
      expected: 'a number ≥ 1',
      received: value,
    });
  };
  return Object.freeze({ bytes: limit('bytes'), pixels: limit('pixels'), frames: limit('frames') });
}

/** Extents of frames: how many, rows, columns. */
export type FrameShape = readonly [frames: number, rows: number, columns: number];

/**
 * Checks declared extents: whole, not zero, within the limits.
 *
 * @throws {ArrayError} `malformed`, `empty`, `limit-exceeded`.
 */
export function checkShape(shape: FrameShape, limits: Limits, path: string): void {
  const [frames, rows, columns] = shape;
  const text = `${frames} × ${rows} × ${columns}`;
  if (!shape.every((extent) => Number.isSafeInteger(extent) && extent >= 0)) {
    throw new ArrayError('malformed', { path, expected: 'whole extents ≥ 0', received: text });
  }
  if (shape.includes(0)) {
    throw new ArrayError('empty', { path, expected: 'at least one frame, row and column', received: text });
  }
  if (rows * columns > limits.pixels) {
    throw new ArrayError('limit-exceeded', {
      path,
      expected: `at most ${limits.pixels} pixels a frame`,
      received: `${rows} × ${columns}`,
      hint: `Write { limits: { pixels: ${rows * columns} } } if the file is to be trusted.`,
    });
  }
  if (frames > limits.frames) {
    throw new ArrayError('limit-exceeded', {
      path,
      expected: `at most ${limits.frames} frames`,
      received: frames,
      hint: `Write { limits: { frames: ${frames} } } if the file is to be trusted.`,
    });
  }
}

/** Checks a number of bytes about to be held against the limit. */
export function checkBytes(bytes: number, limits: Limits, path: string, what: string): void {
  if (bytes <= limits.bytes) return;
  throw new ArrayError('limit-exceeded', {
    path,
    expected: `at most ${limits.bytes} bytes for ${what}`,
    received: bytes,
    hint: `Read it frame by frame with openFrames, or write { limits: { bytes: ${bytes} } }.`,
  });
}
