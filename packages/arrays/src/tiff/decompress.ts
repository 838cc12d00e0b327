/**
 * The compressions of TIFF, each with a bound on what comes out.   [TIFF 6.0, sections 9, 13, 14; TIFF Technical
 * Note 3 for the floating point predictor; RFC 1950 for deflate]
 *
 * Not covered: JPEG, LERC, LZMA, Zstandard, WebP, and LZW with the bit order of before 1992.
 */
import { ArrayError } from '../errors.js';

/** A compression: how many times longer than its input the output can be, and how it is undone. */
export interface Compression {
  readonly name: string;
  readonly largestRatio: number;
  /**
   * @param input - Bytes of one strip or tile.
   * @param length - Length that must come out.
   * @param longest - Length that may come out: writers may fill up the last strip.
   * @throws {ArrayError} `malformed`.
   */
  undo(input: Uint8Array, length: number, longest: number, path: string): Promise<Uint8Array> | Uint8Array;
}

const deflate: Compression = { name: 'deflate', largestRatio: 1032, undo: inflate };

/** The compressions read, by their number in the file. */
export const compressions: Readonly<Record<number, Compression>> = {
  1: { name: 'none', largestRatio: 1, undo: (input) => input },
  5: { name: 'LZW', largestRatio: 2600, undo: unpackLzw },
  8: deflate,
  32773: { name: 'PackBits', largestRatio: 64, undo: unpackBits },
  32946: deflate,
};

function malformed(
  path: string,
  name: string,
  expected: string,
  received: string,
  cause?: unknown,
): ArrayError {
  return new ArrayError('malformed', { path, expected: `${expected} (${name})`, received, cause });
}

/** zlib, read in pieces so that a flood is stopped at the bound; the checksum at the end is verified by the stream. */
async function inflate(
  input: Uint8Array,
  length: number,
  longest: number,
  path: string,
): Promise<Uint8Array> {
  const output = new Uint8Array(longest);
  let done = 0;
  const stream = new DecompressionStream('deflate');
  const writer = stream.writable.getWriter();
  // What goes wrong while writing is reported by the reading side.
  const writing = writer
    .write(input as Uint8Array<ArrayBuffer>)
    .then(() => writer.close())
    .catch(() => {});
  const reader = (stream.readable as ReadableStream<Uint8Array>).getReader();
  try {
    for (;;) {
      const { done: ended, value } = await reader.read();
      if (ended) break;
      if (done + value.length > longest) {
        throw malformed(path, 'deflate', `at most ${longest} bytes`, 'more');
      }
      output.set(value, done);
      done += value.length;
    }
  } catch (error) {
    await reader.cancel().catch(() => {});
    if (error instanceof ArrayError) throw error;
    throw malformed(path, 'deflate', 'a sound zlib stream', 'a damaged one', error);
  }
  await writing;
  return exactly(output, done, length, path, 'deflate');
}

function unpackBits(input: Uint8Array, length: number, longest: number, path: string): Uint8Array {
  const output = new Uint8Array(longest);
  let done = 0;
  for (let at = 0; at < input.length && done < length; ) {
    const header = input[at++]!;
    if (header === 128) continue;
    const count = header < 128 ? header + 1 : 257 - header;
    const available = header < 128 ? Math.min(count, input.length - at) : count;
    if (available < count || at >= input.length)
      throw malformed(path, 'PackBits', 'a whole run', 'a cut one');
    if (done + count > longest) throw malformed(path, 'PackBits', `at most ${longest} bytes`, 'more');
    if (header < 128) {
      output.set(input.subarray(at, at + count), done);
      at += count;
    } else {
      output.fill(input[at++]!, done, done + count);
    }
    done += count;
  }
  return exactly(output, done, length, path, 'PackBits');
}

const clearCode = 256;
const endCode = 257;

function unpackLzw(input: Uint8Array, length: number, longest: number, path: string): Uint8Array {
  const broken = (received: string): ArrayError => malformed(path, 'LZW', 'a sound code', received);
  if (input.length > 1 && input[0] === 0 && (input[1]! & 1) === 1) {
    throw new ArrayError('unsupported', {
      path,
      expected: 'LZW of TIFF 6.0',
      received: 'the older bit order',
    });
  }
  const output = new Uint8Array(longest);
  // A string is where it first stands in the output: place and length by code.
  const places = new Uint32Array(4097);
  const lengths = new Uint32Array(4097);
  let done = 0;
  let next = 258;
  let width = 9;
  let previous = -1;
  let buffer = 0;
  let bits = 0;
  let at = 0;
  while (done < length) {
    while (bits < width) {
      if (at >= input.length) return exactly(output, done, length, path, 'LZW');
      buffer = ((buffer << 8) | input[at++]!) & 0xffffff;
      bits += 8;
    }
    const code = (buffer >> (bits - width)) & ((1 << width) - 1);
    bits -= width;
    if (code === endCode) break;
    if (code === clearCode) {
      [next, width, previous] = [258, 9, -1];
      continue;
    }
    const start = done;
    const known = code < 256 ? 1 : code < next ? lengths[code]! : 0;
    if (previous < 0 && code > 255) throw broken(`code ${code} after a clear code`);
    if (known === 0 && code !== next) throw broken(`code ${code} of ${next}`);
    const before = previous < 256 ? 1 : lengths[previous]!;
    const size = known || before + 1;
    if (done + size > longest) throw malformed(path, 'LZW', `at most ${longest} bytes`, 'more');
    if (code < 256) output[done] = code;
    else {
      // A code not yet known is the string before it and that string's first byte again: it overlaps itself.
      const from = known ? places[code]! : start - before;
      for (let i = 0; i < size; i++) output[start + i] = output[from + i]!;
    }
    done += size;
    if (previous >= 0) {
      if (next > 4095) throw broken('more than 4096 codes');
      places[next] = start - before;
      lengths[next] = before + 1;
      next++;
    }
    previous = code;
    // The width grows one code early.
    if (next + 1 >= 1 << width && width < 12) width++;
  }
  return exactly(output, done, length, path, 'LZW');
}

function exactly(output: Uint8Array, done: number, length: number, path: string, name: string): Uint8Array {
  if (done >= length) return output.subarray(0, length);
  throw malformed(path, name, `${length} bytes in a strip or tile`, `${done} bytes`);
}

/**
 * Undoes a predictor in place.
 *
 * @param bytes - Rows of a strip or tile.
 * @param predictor - 1 none, 2 differences of whole numbers, 3 differences of the byte planes of floats.
 * @param size - Bytes of a number.
 */
export function undoPredictor(
  bytes: Uint8Array,
  predictor: number,
  columns: number,
  size: number,
  littleEndian: boolean,
): void {
  const rowBytes = columns * size;
  for (let start = 0; start + rowBytes <= bytes.length; start += rowBytes) {
    const row = bytes.subarray(start, start + rowBytes);
    if (predictor === 2) sumNumbers(row, size, littleEndian);
    else if (predictor === 3) joinPlanes(row, size);
  }
}

/** Adds each number to the one before, with carry from byte to byte in the order of the file. */
function sumNumbers(row: Uint8Array, size: number, littleEndian: boolean): void {
  for (let at = size; at < row.length; at += size) {
    let carry = 0;
    for (let i = 0; i < size; i++) {
      const byte = at + (littleEndian ? i : size - 1 - i);
      const sum = row[byte]! + row[byte - size]! + carry;
      row[byte] = sum;
      carry = sum >> 8;
    }
  }
}

/** Adds up the bytes of a row, then gathers each number from the planes, highest byte first, as little-endian. */
function joinPlanes(row: Uint8Array, size: number): void {
  for (let at = 1; at < row.length; at++) row[at] = row[at]! + row[at - 1]!;
  const planes = row.slice();
  const count = row.length / size;
  for (let i = 0; i < count; i++) {
    for (let byte = 0; byte < size; byte++) row[i * size + byte] = planes[(size - 1 - byte) * count + i]!;
  }
}
