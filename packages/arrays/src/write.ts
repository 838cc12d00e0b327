/**
 * Frames out: NPY, TIFF and delimited text, to a file or to bytes, with quantity, unit and provenance inside.
 */
import { frameFlag, isView, type NumericArray, type Quantity, quantities, type View } from '@graybody/core';
import { writeAtomically } from './atomic-file.js';
import { type ElementArray, elementArray, typeOfArray } from './element-type.js';
import { ArrayError } from './errors.js';
import type { Format, FormatId, FramesToWrite, WrittenFile } from './format.js';
import { formatOfId, formatOfName, formats } from './formats.js';
import type { FrameShape } from './limits.js';
import { checkedOptions, stopIfAborted, wordOption } from './options.js';
import { nameOf, pathOf } from './source.js';
import { describeFrames, type StoredDescription } from './stored-description.js';

/** Frames that know what they hold: what `readFrames` and a correction return. */
export interface FramesWithQuantity {
  /** (row, column) or (frame, row, column) */
  readonly array: View;
  readonly quantity: Quantity;
  readonly unit?: string | undefined;
  readonly times?: readonly string[] | undefined;
}

/** How frames are written. */
export interface WriteOptions {
  /** Format; needed for bytes, otherwise told by the ending of the name (.npy, .tif, .tiff, .csv). */
  readonly format?: FormatId | undefined;
  /** What a bare view holds. */
  readonly quantity?: Quantity | undefined;
  /** Unit of a radiance whose unit is not known. */
  readonly unit?: string | undefined;
  /** Date and time of each frame, ISO 8601 with its zone. */
  readonly times?: readonly string[] | undefined;
  /** Where the numbers come from: any JSON, kept in the file. */
  readonly provenance?: unknown;
  /**
   * 'drop' allows what would lose the quantity: NPY as bytes, or without its file beside it. Default 'keep'.
   */
  readonly metadata?: 'keep' | 'drop' | undefined;
  readonly signal?: AbortSignal | undefined;
}

const optionKeys: readonly (keyof WriteOptions)[] = [
  'format',
  'quantity',
  'unit',
  'times',
  'provenance',
  'metadata',
  'signal',
];

/**
 * Writes frames. The numbers keep their type: float32 stays float32. A file appears whole or not at all.
 *
 * NPY has no place for a quantity, so a path gets a second file, NAME.npy.json, which the reader picks up.
 *
 * @param target - A path or file URL; or `'bytes'` to get the bytes, with `format`.
 * @param frames - What `readFrames` or a correction returned; or a bare view, with `quantity`.
 * @throws {ArrayError} `wrong-option`, `unknown-option`, `missing-option`, `wrong-shape`, `empty`, `wrong-quantity`,
 *   `wrong-unit`, `limit-exceeded` for a TIFF beyond 4 GiB, `write-failed`, `aborted`.
 */
export async function writeFrames(
  target: 'bytes',
  frames: FramesWithQuantity | View,
  options: WriteOptions,
): Promise<Uint8Array>;
export async function writeFrames(
  target: string | URL,
  frames: FramesWithQuantity | View,
  options?: WriteOptions,
): Promise<undefined>;
export async function writeFrames(
  target: string | URL,
  frames: FramesWithQuantity | View,
  options: WriteOptions = {},
): Promise<Uint8Array | undefined> {
  checkedOptions(options, optionKeys);
  const given = isView(frames)
    ? { array: frames, quantity: options.quantity }
    : withQuantity(frames, options);
  if (given.quantity === undefined) {
    throw new ArrayError('missing-option', {
      path: 'quantity',
      expected: 'to be told what a bare view holds',
      hint: "Write { quantity: 'apparent temperature' }, or pass what readFrames or surfaceFrame returned.",
    });
  }
  const quantity = wordOption(given.quantity, 'quantity', quantities);
  const unit = unitToStore(quantity, 'unit' in given ? given.unit : undefined, options.unit);
  const times = options.times ?? ('times' in given ? given.times : undefined);
  const { provenance } = options;
  return write(target, given.array, { content: 'frames', quantity, unit, times, provenance }, options);
}

/**
 * Writes the reason codes of a frame, uint8, as NPY, TIFF or delimited text.
 *
 * The file says that it holds reason codes and which number means what; it is read back as counts.
 *
 * @param flags - View of uint8, (row, column) or (frame, row, column).
 * @throws {ArrayError} as {@link writeFrames}.
 */
export async function writeFlags(
  target: 'bytes',
  flags: View,
  options: Omit<WriteOptions, 'quantity' | 'unit'>,
): Promise<Uint8Array>;
export async function writeFlags(
  target: string | URL,
  flags: View,
  options?: Omit<WriteOptions, 'quantity' | 'unit'>,
): Promise<undefined>;
export async function writeFlags(
  target: string | URL,
  flags: View,
  options: Omit<WriteOptions, 'quantity' | 'unit'> = {},
): Promise<Uint8Array | undefined> {
  checkedOptions(
    options,
    optionKeys.filter((key) => key !== 'quantity' && key !== 'unit'),
  );
  if (!isView(flags) || !(flags.data instanceof Uint8Array)) {
    throw new ArrayError('wrong-option', {
      path: 'flags',
      expected: 'a view of uint8 reason codes',
      received: flags,
      hint: 'Pass the flags of what surfaceFrame returned.',
    });
  }
  const provenance = {
    codes: frameFlag,
    ...(options.provenance === undefined ? {} : { source: options.provenance }),
  };
  const parts = {
    content: 'flags',
    quantity: 'counts',
    unit: '1',
    times: options.times,
    provenance,
  } as const;
  return write(target, flags, parts, options);
}

function withQuantity(frames: unknown, options: WriteOptions): FramesWithQuantity {
  const { array, quantity } = Object(frames) as Partial<FramesWithQuantity>;
  if (!isView(array)) {
    throw new ArrayError('wrong-option', {
      path: 'frames',
      expected: 'frames { array, quantity, unit } or a view { data, shape, stride, offset }',
      received: frames,
    });
  }
  if (options.quantity !== undefined && quantity !== undefined && options.quantity !== quantity) {
    throw new ArrayError('wrong-quantity', {
      path: 'quantity',
      expected: `'${quantity}', which the frames hold`,
      received: options.quantity,
      hint: 'Leave quantity out.',
    });
  }
  return { ...(frames as FramesWithQuantity), quantity: (quantity ?? options.quantity) as Quantity };
}

function unitToStore(quantity: Quantity, held: unknown, option: unknown): string {
  const unit = option ?? held;
  if (held !== undefined && option !== undefined && held !== option) {
    throw new ArrayError('wrong-unit', {
      path: 'unit',
      expected: `'${String(held)}', which the frames have`,
      received: option,
    });
  }
  if (quantity === 'counts') return '1';
  if (quantity !== 'band radiance') {
    if (unit === undefined || unit === 'K') return 'K';
    throw new ArrayError('wrong-unit', {
      path: 'unit',
      expected: "'K': temperatures are kelvin inside",
      received: unit,
    });
  }
  if (typeof unit === 'string' && unit !== '') return unit;
  throw new ArrayError('missing-option', {
    path: 'unit',
    expected: 'to be told the unit of the radiance',
    hint: 'Write { unit: band.radianceUnit }.',
  });
}

type DescriptionParts = Pick<StoredDescription, 'content' | 'quantity' | 'unit' | 'provenance'> & {
  readonly times: readonly string[] | undefined;
};

async function write(
  target: string | URL,
  array: View,
  parts: DescriptionParts,
  options: WriteOptions,
): Promise<Uint8Array | undefined> {
  const { signal } = options;
  const keep = wordOption(options.metadata ?? 'keep', 'metadata', ['keep', 'drop']) === 'keep';
  stopIfAborted(signal);
  const path = target === 'bytes' ? undefined : pathText(target);
  const format = formatFor(path, options.format);
  const writer = await format.writer!();
  const file = writer.write(framesToWrite(array, parts));
  if (path !== undefined) {
    await writeAtomically(path, file, keep, signal);
    return undefined;
  }
  if (file.besides !== undefined && keep) {
    throw new ArrayError('missing-option', {
      path: 'metadata',
      expected: `to be told that the quantity may be lost, as ${format.name} bytes have no place for it`,
      hint: "Write { format: 'tiff' }, a path, or { metadata: 'drop' }.",
    });
  }
  return joined(file, signal);
}

function pathText(target: unknown): string {
  if (typeof target !== 'string' && !(target instanceof URL)) {
    throw new ArrayError('wrong-option', {
      path: 'target',
      expected: "a path, a file URL or 'bytes'",
      received: target,
    });
  }
  const path = pathOf(target);
  return path instanceof URL ? decodeURIComponent(path.pathname) : path;
}

function formatFor(path: string | undefined, id: unknown): Format {
  const writable = formats.filter(({ writer }) => writer !== undefined);
  if (id !== undefined) return formatOfId(id);
  if (path !== undefined) {
    const format = formatOfName(path);
    if (format !== undefined) return format;
  }
  throw new ArrayError('missing-option', {
    path: 'format',
    expected: `to be told the format: ${writable.map((one) => `'${one.id}'`).join(', ')}`,
    received: path === undefined ? undefined : nameOf(path),
    hint: `Names end in ${writable.flatMap(({ extensions }) => extensions).join(', ')}.`,
  });
}

function framesToWrite(array: View, parts: DescriptionParts): FramesToWrite {
  checkArray(array);
  const { data, shape: extents, stride: steps, offset } = array;
  const single = extents.length === 2;
  const shape = (single ? [1, ...extents] : [...extents]) as unknown as FrameShape;
  const [count, rows, columns] = shape;
  const stride = single ? [0, ...steps] : steps;
  const dataType = typeOfArray(data);
  const { times, provenance, ...rest } = parts;
  if (times !== undefined && times.length !== count) {
    throw new ArrayError('wrong-shape', {
      path: 'times',
      expected: `${count} times, one a frame`,
      received: times.length,
    });
  }
  return {
    shape,
    single,
    dataType,
    description: describeFrames({
      ...rest,
      shape,
      dataType,
      ...(times === undefined ? {} : { times: [...times] }),
      ...(provenance === undefined ? {} : { provenance }),
    }),
    frame(index) {
      const start = offset + index * stride[0]!;
      const whole = stride[1] === columns && stride[2] === 1 && isElementArray(data);
      if (whole) return data.subarray(start, start + rows * columns) as ElementArray;
      const frame = elementArray(dataType, rows * columns);
      for (let row = 0, to = 0; row < rows; row++) {
        for (let column = 0; column < columns; column++) {
          frame[to++] = data[start + row * stride[1]! + column * stride[2]!]!;
        }
      }
      return frame;
    },
  };
}

function isElementArray(data: NumericArray): data is ElementArray {
  return !Array.isArray(data) && !(data instanceof Uint8ClampedArray);
}

function checkArray({ data, shape, stride, offset }: View): void {
  const wrong = (expected: string, received: unknown): ArrayError =>
    new ArrayError('wrong-shape', { path: 'array', expected, received });
  if (shape.length !== 2 && shape.length !== 3) throw wrong('(row, column) or (frame, row, column)', shape);
  if (!shape.every((extent) => Number.isInteger(extent) && extent >= 0)) throw wrong('whole extents', shape);
  if (shape.includes(0)) {
    throw new ArrayError('empty', {
      path: 'array',
      expected: 'at least one frame, row and column',
      received: shape,
    });
  }
  const reach = shape.map((extent, axis) => (extent - 1) * (stride[axis] ?? Number.NaN));
  const lowest = reach.reduce((sum, step) => sum + Math.min(0, step), offset);
  const highest = reach.reduce((sum, step) => sum + Math.max(0, step), offset);
  if (Number.isInteger(lowest) && Number.isInteger(highest) && lowest >= 0 && highest < data.length) return;
  throw wrong(`elements within 0…${data.length - 1}`, `${lowest}…${highest}`);
}

function joined({ chunks }: WrittenFile, signal: AbortSignal | undefined): Uint8Array {
  const pieces: Uint8Array[] = [];
  let length = 0;
  for (const piece of chunks) {
    stopIfAborted(signal);
    pieces.push(piece);
    length += piece.length;
  }
  const bytes = new Uint8Array(length);
  let at = 0;
  for (const piece of pieces) {
    bytes.set(piece, at);
    at += piece.length;
  }
  return bytes;
}
