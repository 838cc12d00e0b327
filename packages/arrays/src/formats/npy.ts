/**
 * NPY: arrays as NumPy saves them. [NEP 1; format versions 1.0, 2.0 and 3.0]
 *
 * Numbers of either byte order, C and Fortran order, float16/32/64 and integers of 8 to 64 bits. A 2-D array is one
 * frame (row, column), a 3-D array is (frame, row, column); other ranks are refused, as nothing says which axis is
 * which. Frames of a C-ordered file are read one at a time; a 3-D Fortran-ordered file interleaves its frames and
 * is read as a whole.
 */
import {
  bytesPerElement,
  type DataType,
  decodeElements,
  type ElementArray,
  elementArray,
  encodeElements,
} from '../element-type.js';
import { ArrayError } from '../errors.js';
import type { FormatReader, FormatWriter, FramesToWrite, ReadingOptions, StoredArray } from '../format.js';
import { checkBytes, checkShape, type FrameShape } from '../limits.js';
import type { ByteSource } from '../source.js';
import {
  claimsDescription,
  crc32,
  parseDescription,
  refuseOtherArray,
  type StoredDescription,
} from '../stored-description.js';

/** Longest header taken; a real one has about 128 bytes. */
const longestHeader = 65_536;
/** Longest description beside an array, in bytes. */
const longestDescription = 1 << 24;

const typesOfCodes: Readonly<Record<string, DataType>> = {
  f2: 'float16',
  f4: 'float32',
  f8: 'float64',
  i1: 'int8',
  u1: 'uint8',
  i2: 'int16',
  u2: 'uint16',
  i4: 'int32',
  u4: 'uint32',
  i8: 'int64',
  u8: 'uint64',
};

interface NpyHeader {
  readonly dataType: DataType;
  readonly littleEndian: boolean;
  readonly fortranOrder: boolean;
  readonly shape: FrameShape;
  /** Where the numbers begin. */
  readonly start: number;
}

/** Reads NPY. */
export const npyReader: FormatReader = {
  async open(source, options) {
    const header = await readHeader(source);
    checkShape(header.shape, options.limits, source.name);
    checkLength(source, header);
    const description = await readDescription(source, header);
    const read = header.fortranOrder
      ? fortranFrames(source, header, options)
      : plainFrames(source, header, options);
    const { shape, dataType, fortranOrder, littleEndian } = header;
    const metadata = { fortranOrder, byteOrder: littleEndian ? 'little-endian' : 'big-endian' };
    const stored: StoredArray = { shape, dataType, description, noData: [], metadata, read };
    return stored;
  },
};

async function readHeader(source: ByteSource): Promise<NpyHeader> {
  const head = await source.read(0, 8);
  const major = head[6]!;
  if (major < 1 || major > 3) {
    throw new ArrayError('unsupported', {
      path: source.name,
      expected: 'NPY of version 1, 2 or 3',
      received: `version ${major}.${head[7]}`,
    });
  }
  const lengthBytes = major === 1 ? 2 : 4;
  const view = new DataView((await source.read(8, lengthBytes)).buffer);
  const length = major === 1 ? view.getUint16(0, true) : view.getUint32(0, true);
  const start = 8 + lengthBytes + length;
  if (start > source.size) {
    throw new ArrayError('truncated', {
      path: source.name,
      expected: `a header of ${length} bytes`,
      received: `a file of ${source.size} bytes`,
    });
  }
  if (length > longestHeader) {
    throw new ArrayError('malformed', {
      path: source.name,
      expected: `a header of at most ${longestHeader} bytes`,
      received: length,
    });
  }
  const bytes = await source.read(8 + lengthBytes, length);
  const text = new TextDecoder(major === 3 ? 'utf-8' : 'latin1').decode(bytes);
  return { ...parseHeader(text, source.name), start };
}

/** Pieces of the header, a Python dictionary; sticky, each without nested repetition. */
const pieces = {
  key: /\s*'(\w+)'\s*:\s*/y,
  value: /'[^']*'|True|False|\([\d\s,L]*\)/y,
  next: /\s*(,?)\s*(\}?)\s*/y,
} as const;

function parseHeader(text: string, path: string): Omit<NpyHeader, 'start'> {
  const malformed = (expected: string, received: unknown): ArrayError =>
    new ArrayError('malformed', { path: `${path}: header`, expected, received });
  const entries = new Map<string, string>();
  let place = /^\s*\{/.exec(text)?.[0].length ?? 0;
  const take = (piece: RegExp): RegExpExecArray => {
    piece.lastIndex = place;
    const match = piece.exec(text);
    if (match === null) throw malformed("{'descr': …, 'fortran_order': …, 'shape': …}", text.trim());
    place = piece.lastIndex;
    return match;
  };
  for (let open = place > 0; open; ) {
    const key = take(pieces.key)[1]!;
    if (key === 'descr' && text[place] === '[')
      return { ...typeOf('a structured type', path), fortranOrder: false, shape: [0, 0, 0] };
    entries.set(key, take(pieces.value)[0]);
    const [, comma, brace] = take(pieces.next);
    if (comma === '' && brace === '') break;
    open = brace === '';
  }
  const keys = [...entries.keys()].sort().join(', ');
  if (place !== text.length || keys !== 'descr, fortran_order, shape') {
    throw malformed("{'descr': …, 'fortran_order': …, 'shape': …}", text.trim());
  }
  const order = entries.get('fortran_order')!;
  const shape = entries.get('shape')!;
  if (order !== 'True' && order !== 'False') throw malformed('fortran_order True or False', order);
  const extents = shape
    .slice(1, -1)
    .split(',')
    .map((extent) => extent.trim());
  if (extents.at(-1) === '') extents.pop();
  if (!shape.startsWith('(') || !extents.every((extent) => /^\d+L?$/.test(extent))) {
    throw malformed('a shape such as (4, 120, 160)', shape);
  }
  return {
    ...typeOf(entries.get('descr')!, path),
    fortranOrder: order === 'True',
    shape: frameShape(
      extents.map((extent) => Number.parseInt(extent, 10)),
      path,
    ),
  };
}

function typeOf(descr: string, path: string): { dataType: DataType; littleEndian: boolean } {
  const match = /^'([<>|])([a-zA-Z?]\d*)'$/.exec(descr);
  const dataType = match === null ? undefined : typesOfCodes[match[2]!];
  const single = dataType !== undefined && bytesPerElement(dataType) === 1;
  if (match !== null && dataType !== undefined && (match[1] !== '|' || single)) {
    return { dataType, littleEndian: match[1] !== '>' };
  }
  const isBool = match?.[2] === 'b1' || match?.[2] === '?';
  throw new ArrayError('unsupported', {
    path: `${path}: descr`,
    expected: 'real numbers f2, f4, f8, i1…i8 or u1…u8 with a byte order',
    received: descr,
    hint: isBool
      ? "A mask is no frame: save array.astype('uint8') to read it as counts."
      : "Save array.astype('float32').",
  });
}

function frameShape(extents: readonly number[], path: string): FrameShape {
  const [a, b, c] = extents;
  if (extents.length === 2) return [1, a!, b!];
  if (extents.length === 3) return [a!, b!, c!];
  throw new ArrayError('wrong-shape', {
    path: `${path}: shape`,
    expected: '(row, column) or (frame, row, column)',
    received: `${extents.length} axes, [${extents.join(', ')}]`,
    hint: 'Save array.reshape(rows, columns) or array.reshape(frames, rows, columns).',
  });
}

function checkLength(source: ByteSource, { shape, dataType, start }: NpyHeader): void {
  const needed = shape[0] * shape[1] * shape[2] * bytesPerElement(dataType);
  const there = source.size - start;
  if (there === needed) return;
  throw new ArrayError(there < needed ? 'truncated' : 'malformed', {
    path: source.name,
    expected: `${needed} bytes for [${shape.join(', ')}] of ${dataType}`,
    received: `${there} bytes`,
    hint: there > needed ? 'Bytes follow the array: save one array a file.' : undefined,
  });
}

function plainFrames(source: ByteSource, header: NpyHeader, { limits }: ReadingOptions): StoredArray['read'] {
  const { shape, dataType, littleEndian, start } = header;
  const bytes = shape[1] * shape[2] * bytesPerElement(dataType);
  checkBytes(bytes, limits, source.name, 'one frame');
  return async (index) =>
    decodeElements(await source.read(start + index * bytes, bytes), dataType, littleEndian, source.name);
}

function fortranFrames(
  source: ByteSource,
  header: NpyHeader,
  { limits }: ReadingOptions,
): StoredArray['read'] {
  const { shape, dataType, littleEndian, start } = header;
  const [frames, rows, columns] = shape;
  const bytes = frames * rows * columns * bytesPerElement(dataType);
  checkBytes(bytes, limits, source.name, 'an array in Fortran order');
  let whole: ElementArray | undefined;
  return async (index) => {
    whole ??= decodeElements(await source.read(start, bytes), dataType, littleEndian, source.name);
    const frame = elementArray(dataType, rows * columns);
    for (let row = 0; row < rows; row++) {
      for (let column = 0; column < columns; column++) {
        frame[row * columns + column] = whole[index + frames * (row + rows * column)]!;
      }
    }
    return frame;
  };
}

/** The description beside the array, tied to it by shape, type and the checksum of its first frame. */
async function readDescription(
  source: ByteSource,
  header: NpyHeader,
): Promise<StoredDescription | undefined> {
  const bytes = await source.beside('.json', longestDescription);
  if (bytes === undefined) return undefined;
  const path = `${source.name}.json`;
  const text = new TextDecoder().decode(bytes);
  if (!claimsDescription(text)) {
    throw new ArrayError('malformed', {
      path,
      expected: 'a description of the array beside it',
      received: text,
      hint: 'A file of this name says what the array holds; give other files another name, or remove it.',
    });
  }
  const description = parseDescription(text, path);
  const { shape, dataType, start } = header;
  refuseOtherArray(description, shape, dataType, path);
  const length = shape[1] * shape[2] * bytesPerElement(dataType);
  if (crc32(await source.read(start, length)) === description.firstFrameCrc32) return description;
  throw new ArrayError('malformed', {
    path,
    expected: `the description of an array whose first frame has CRC-32 ${description.firstFrameCrc32}`,
    received: 'another array',
    hint: 'The array was written anew without its description: write both again, or remove the description.',
  });
}

/** Writes NPY, version 1.0, C order, little-endian, and the description beside it. */
export const npyWriter: FormatWriter = {
  write(frames) {
    let crc = 0;
    return {
      chunks: npyChunks(frames, (bytes) => {
        crc = crc32(bytes);
      }),
      besides: {
        ending: '.json',
        text: () => `${JSON.stringify({ ...frames.description, firstFrameCrc32: crc }, null, 2)}\n`,
      },
    };
  },
};

function* npyChunks(frames: FramesToWrite, firstFrame: (bytes: Uint8Array) => void): Generator<Uint8Array> {
  const { shape, dataType, single } = frames;
  const size = bytesPerElement(dataType);
  const code = Object.keys(typesOfCodes).find((key) => typesOfCodes[key] === dataType)!;
  const extents = (single ? shape.slice(1) : shape).join(', ');
  const text = `{'descr': '${size === 1 ? '|' : '<'}${code}', 'fortran_order': False, 'shape': (${extents}), }`;
  const length = Math.ceil((10 + text.length + 1) / 64) * 64;
  const header = new Uint8Array(length);
  header.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0]);
  new DataView(header.buffer).setUint16(8, length - 10, true);
  header.set(new TextEncoder().encode(`${text.padEnd(length - 11)}\n`), 10);
  yield header;
  for (let index = 0; index < shape[0]; index++) {
    const bytes = encodeElements(frames.frame(index));
    if (index === 0) firstFrame(bytes);
    yield bytes;
  }
}
