/**
 * Frames in: `openFrames` reads one at a time, `readFrames` all of them into one array (frame, row, column).
 *
 * Temperatures and radiances come out as float32 or float64, temperatures in kelvin, missing cells NaN and counted;
 * counts keep their integer type, with a mask of missing cells beside them.
 */
import { isView, type Quantity, type View } from '@graybody/core';
import {
  type Conversion,
  type ConversionOptions,
  type ConversionPlan,
  planConversion,
} from './conversion.js';
import { type ArrayType, type ElementArray, elementArray, typeOfArray } from './element-type.js';
import { ArrayError } from './errors.js';
import type { FormatId, StoredArray, TableOptions } from './format.js';
import { formatOfName, recognise } from './formats.js';
import { checkBytes, type FrameShape, type Limits, limitsOf } from './limits.js';
import { type FrameArray, frameArray, withoutMethods } from './ndarray.js';
import { checkedOptions, stopIfAborted, wordOption } from './options.js';
import { refuseBelowAbsoluteZero, refuseOtherUnit } from './plausibility.js';
import { type ByteSource, type FrameInputSource, openSource } from './source.js';

/** How frames are read. What a file of this library says about itself need not be given. */
export interface ReadOptions extends ConversionOptions {
  /** Name of one of several arrays in a file; no format read so far has several. */
  readonly dataset?: string | undefined;
  /** Delimiter and decimal sign of a text, where they cannot be told from it. */
  readonly table?: TableOptions | undefined;
  readonly limits?: Partial<Limits> | undefined;
  readonly signal?: AbortSignal | undefined;
}

/** Where frames came from. */
export interface FrameOrigin {
  /** File name; `bytes` or `blob` for memory. */
  readonly name: string;
  readonly format: FormatId;
  /** [bytes] */
  readonly size: number;
}

/** What is known of frames before they are read. */
export interface FramesDescription {
  /** Frames, rows, columns. */
  readonly shape: FrameShape;
  readonly quantity: Quantity;
  /** 'K' for temperatures; the radiance's own unit, undefined where nobody said it; '1' for counts. */
  readonly unit: string | undefined;
  /** Type of the values that come out. */
  readonly dataType: ArrayType;
  /** Date and time of each frame, ISO 8601, where this library stored them. */
  readonly times: readonly string[] | undefined;
  /** What the file says beside its numbers; `provenance` is what its writer was given. */
  readonly metadata: Readonly<Record<string, unknown>>;
  /** What was applied to the stored numbers, once. */
  readonly conversion: Conversion;
  readonly source: FrameOrigin;
  /** What a person should know: a name that misleads, methods that are missing. */
  readonly warnings: readonly string[];
}

/** One frame. Every frame call of @graybody/core takes it. */
export interface Frame {
  readonly index: number;
  readonly time: string | undefined;
  /** (row, column) */
  readonly array: View<ElementArray>;
  readonly quantity: Quantity;
  readonly unit: string | undefined;
  /** How many cells are missing: NaN, or for counts 1 in the mask. */
  readonly missing: number;
  /** For counts with no-data numbers, uint8 (row, column): 1 where a cell is missing. */
  readonly missingMask: View<Uint8Array> | undefined;
  /** How many radiances no blackbody within the band's range gives; NaN. 0 without `band`. */
  readonly unsolved: number;
}

/** Frames to read one by one. */
export interface FrameSource extends FramesDescription, AsyncIterable<Frame> {
  /**
   * Reads one frame.
   * @param index - From 0.
   * @param out - View (row, column) of the type in `dataType` to write into; may be reused for every frame.
   * @throws {ArrayError} `wrong-index`, `wrong-shape`, `closed`, `truncated`, `malformed`, `implausible`, `aborted`.
   */
  read(index: number, out?: View): Promise<Frame>;
  /** Closes the file. Reading after it throws `closed`; closing twice is harmless. */
  close(): Promise<void>;
}

/** All frames of a source. Every frame call of @graybody/core takes it. */
export interface Frames extends FramesDescription {
  /** (frame, row, column); an array of the ndarray package. */
  readonly array: FrameArray;
  /** How many cells of all frames are missing. */
  readonly missing: number;
  /** For counts with no-data numbers, uint8 (frame, row, column): 1 where a cell is missing. */
  readonly missingMask: View<Uint8Array> | undefined;
  readonly unsolved: number;
}

const optionKeys: readonly (keyof ReadOptions)[] = [
  'unit',
  'quantity',
  'otherwise',
  'scale',
  'offset',
  'noData',
  'band',
  'plausibility',
  'dataset',
  'table',
  'limits',
  'signal',
];

/**
 * Opens frames to read them one by one: the format is recognised by content, nothing but the header is read.
 * Formats that do not stream (delimited grids) are read as a whole here.
 *
 * @param source - A path, a file URL, bytes or a Blob. No address on a network.
 * @throws {ArrayError} `not-found`, `not-readable`, `empty`, `truncated`, `not-recognised`, `unsupported`,
 *   `malformed`, `limit-exceeded`, `missing-option`, `wrong-option`, `unknown-option`, `wrong-quantity`,
 *   `wrong-unit`, `wrong-shape`, `aborted`.
 */
export async function openFrames(source: FrameInputSource, options: ReadOptions = {}): Promise<FrameSource> {
  checkedOptions(options, optionKeys);
  const limits = limitsOf(options.limits);
  const table = tableOptions(options.table);
  const { signal } = options;
  stopIfAborted(signal);
  const bytes = await openSource(source);
  try {
    const format = recognise(await bytes.read(0, Math.min(4096, bytes.size)), bytes.name);
    const reader = await format.reader();
    const stored = await reader.open(bytes, { limits, table, signal });
    if (options.dataset !== undefined) {
      throw new ArrayError('wrong-option', {
        path: 'dataset',
        expected: `no name of an array, as ${format.name} holds one`,
        received: options.dataset,
      });
    }
    const plan = await planConversion(stored, options);
    const named = formatOfName(bytes.name);
    const warnings =
      named === undefined || named === format
        ? []
        : [
            `${bytes.name} is named like ${named.name} but holds ${format.name}; it was read as what it holds.`,
          ];
    const origin = { name: bytes.name, format: format.id, size: bytes.size };
    return frameSource(bytes, stored, plan, { origin, warnings, signal });
  } catch (error) {
    await bytes.close();
    throw error;
  }
}

/**
 * Reads all frames of a source into one array (frame, row, column).
 *
 * @throws {ArrayError} as {@link openFrames} and `read`; `limit-exceeded` when the array is larger than `limits.bytes`.
 * @example
 * const frames = await readFrames('line-3.npy', { unit: 'degC', quantity: 'apparent temperature' });
 */
export async function readFrames(source: FrameInputSource, options: ReadOptions = {}): Promise<Frames> {
  const opened = await openFrames(source, options);
  try {
    const { shape, dataType, source: origin } = opened;
    const [frames, rows, columns] = shape;
    const pixels = rows * columns;
    const bytes = frames * pixels * elementArray(dataType, 0).BYTES_PER_ELEMENT;
    checkBytes(bytes, limitsOf(options.limits), origin.name, 'all frames');
    const data = elementArray(dataType, frames * pixels);
    let mask: Uint8Array | undefined;
    let missing = 0;
    let unsolved = 0;
    for (let index = 0; index < frames; index++) {
      const out = plane(data, index * pixels, rows, columns);
      const frame = await opened.read(index, out);
      missing += frame.missing;
      unsolved += frame.unsolved;
      if (frame.missingMask === undefined) continue;
      mask ??= new Uint8Array(frames * pixels);
      mask.set(frame.missingMask.data, index * pixels);
    }
    const { array, plain } = frameArray(data, shape);
    const { quantity, unit, times, metadata, conversion, warnings } = opened;
    return {
      array,
      shape,
      quantity,
      unit,
      dataType,
      missing,
      missingMask: mask && { data: mask, shape: [...shape], stride: [pixels, columns, 1], offset: 0 },
      unsolved,
      times,
      metadata,
      conversion,
      source: origin,
      warnings: plain ? [...warnings, withoutMethods] : warnings,
    };
  } finally {
    await opened.close();
  }
}

function tableOptions(given: unknown): TableOptions {
  const { delimiter, decimal } = checkedOptions(given, ['delimiter', 'decimal'], 'table');
  return {
    delimiter:
      delimiter === undefined
        ? undefined
        : wordOption(delimiter, 'table.delimiter', [',', ';', '\t', ' '] as const),
    decimal: decimal === undefined ? undefined : wordOption(decimal, 'table.decimal', ['.', ','] as const),
  };
}

function plane<Data extends ElementArray>(
  data: Data,
  offset: number,
  rows: number,
  columns: number,
): View<Data> {
  return { data, shape: [rows, columns], stride: [columns, 1], offset };
}

interface SourceParts {
  readonly origin: FrameOrigin;
  readonly warnings: readonly string[];
  readonly signal: AbortSignal | undefined;
}

function frameSource(
  bytes: ByteSource,
  stored: StoredArray,
  plan: ConversionPlan,
  { origin, warnings, signal }: SourceParts,
): FrameSource {
  const { shape, description } = stored;
  const [frames, rows, columns] = shape;
  const { quantity, unit, dataType, conversion, temperatureUnit: kelvin } = plan;
  const times = description?.times;
  let closed = false;
  let unitSettled = !plan.checkPlausibility;

  const read = async (index: number, out?: View): Promise<Frame> => {
    if (closed) {
      throw new ArrayError('closed', {
        path: origin.name,
        expected: 'an open source',
        hint: 'Read before close().',
      });
    }
    if (!Number.isInteger(index) || index < 0 || index >= frames) {
      throw new ArrayError('wrong-index', {
        path: 'index',
        expected: `a whole number of 0…${frames - 1}`,
        received: index,
      });
    }
    stopIfAborted(signal);
    const target = out === undefined ? undefined : checkedOut(out, rows, columns, dataType);
    const numbers = await stored.read(index);
    const direct = target !== undefined && target.stride[0] === columns && target.stride[1] === 1;
    const values = direct
      ? (target.data.subarray(target.offset, target.offset + rows * columns) as ElementArray)
      : elementArray(dataType, rows * columns);
    const mask = plan.hasMask ? new Uint8Array(rows * columns) : undefined;
    const { missing, unsolved, range } = plan.convert(numbers, values, mask);
    if (kelvin !== undefined) {
      const place = `${origin.name}: frame ${index}`;
      refuseBelowAbsoluteZero(range, kelvin, place);
      if (!unitSettled) refuseOtherUnit(range, kelvin, place);
      if (range.low <= range.high) unitSettled = true;
    }
    if (target !== undefined && !direct) scatter(values, target, rows, columns);
    return {
      index,
      time: times?.[index],
      array: target ?? plane(values, 0, rows, columns),
      quantity,
      unit,
      missing,
      missingMask: mask && plane(mask, 0, rows, columns),
      unsolved,
    };
  };

  return {
    shape,
    quantity,
    unit,
    dataType,
    times,
    metadata: {
      ...stored.metadata,
      ...(description === undefined
        ? {}
        : {
            content: description.content,
            provenance: description.provenance,
            software: description.software,
          }),
    },
    conversion,
    source: origin,
    warnings,
    read,
    async *[Symbol.asyncIterator]() {
      for (let index = 0; index < frames; index++) yield await read(index);
    },
    async close() {
      if (closed) return;
      closed = true;
      await bytes.close();
    },
  };
}

function checkedOut(out: unknown, rows: number, columns: number, dataType: ArrayType): View<ElementArray> {
  const wrong = (expected: string, received: unknown): ArrayError =>
    new ArrayError('wrong-shape', { path: 'out', expected, received });
  if (!isView(out)) throw wrong('a view { data, shape, stride, offset }', out);
  const { data, shape, stride, offset } = out;
  if (Array.isArray(data) || typeOfArray(data) !== dataType) throw wrong(`a view of ${dataType}`, data);
  if (shape.length !== 2 || shape[0] !== rows || shape[1] !== columns)
    throw wrong(`the shape [${rows}, ${columns}]`, shape);
  const reach = [(rows - 1) * stride[0]!, (columns - 1) * stride[1]!];
  const lowest = offset + Math.min(0, reach[0]!) + Math.min(0, reach[1]!);
  const highest = offset + Math.max(0, reach[0]!) + Math.max(0, reach[1]!);
  if (!Number.isInteger(lowest) || !Number.isInteger(highest) || lowest < 0 || highest >= data.length) {
    throw wrong(`elements within 0…${data.length - 1}`, `${lowest}…${highest}`);
  }
  return out as View<ElementArray>;
}

function scatter(
  values: ElementArray,
  { data, stride, offset }: View<ElementArray>,
  rows: number,
  columns: number,
): void {
  for (let row = 0; row < rows; row++) {
    for (let column = 0; column < columns; column++) {
      data[offset + row * stride[0]! + column * stride[1]!] = values[row * columns + column]!;
    }
  }
}
