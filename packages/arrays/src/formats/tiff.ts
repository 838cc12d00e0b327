/**
 * TIFF with one measured value a pixel.   [TIFF 6.0, its Technical Notes on deflate and the floating point predictor,
 * BigTIFF]
 *
 * float16/32/64, integers of 8 to 64 bits, both byte orders, strips and tiles, several pages of one shape as frames;
 * uncompressed, LZW, deflate, PackBits; predictors 1, 2 and 3. Big-endian with predictor 3 is refused: writers
 * disagree on it, and nothing in the file says which way it is. Other compressions are refused by name.
 *
 * The reader is our own rather than one from a package because every check of sizes must come before any allocation;
 * packages take memory from unchecked counts. A test compares with an independent reader.
 */
import { bytesPerElement, decodeElements, isFloat } from '../element-type.js';
import { ArrayError } from '../errors.js';
import type { FormatReader, FormatWriter, ReadingOptions, StoredArray } from '../format.js';
import { checkBytes, checkShape, type FrameShape, type Limits } from '../limits.js';
import { stopIfAborted } from '../options.js';
import type { ByteSource } from '../source.js';
import {
  claimsDescription,
  parseDescription,
  refuseOtherArray,
  type StoredDescription,
} from '../stored-description.js';
import { compressions, undoPredictor } from '../tiff/decompress.js';
import { scanTiff, type TiffPage } from '../tiff/directory.js';
import { tiffChunks } from '../tiff/write.js';

/** Reads TIFF. */
export const tiffReader: FormatReader = {
  async open(source, options) {
    const pages = await scanTiff(source, options.limits);
    const [first] = pages as [TiffPage];
    const { rows, columns, dataType } = first;
    const shape: FrameShape = [pages.length, rows, columns];
    checkShape(shape, options.limits, source.name);
    pages.forEach((page, index) => {
      checkPage(page, first, source, options.limits, `${source.name}: page ${index}`);
    });
    refuseHiddenFrames(first, pages.length, source.name);
    const stored: StoredArray = {
      shape,
      dataType,
      description: descriptionOf(first, shape, source.name),
      noData: noDataOf(first, source.name),
      metadata: metadataOf(first, pages.length),
      read: (index) => readPage(source, pages[index]!, options, `${source.name}: page ${index}`),
    };
    return stored;
  },
};

/** Writes TIFF: little-endian, one uncompressed strip a page, the description in ImageDescription of the first. */
export const tiffWriter: FormatWriter = {
  write: (frames) => ({ chunks: tiffChunks(frames) }),
};

function checkPage(page: TiffPage, first: TiffPage, source: ByteSource, limits: Limits, path: string): void {
  const { rows, columns, dataType, compression, blockRows, blockColumns, offsets, byteCounts } = page;
  if (rows !== first.rows || columns !== first.columns || dataType !== first.dataType) {
    throw new ArrayError('wrong-shape', {
      path,
      expected: `${first.rows} × ${first.columns} of ${first.dataType}, as page 0`,
      received: `${rows} × ${columns} of ${dataType}`,
      hint: 'Frames of one file have one shape: split the file.',
    });
  }
  const method = compressions[compression];
  if (method === undefined) {
    throw new ArrayError('unsupported', {
      path,
      expected: 'no compression, LZW, deflate or PackBits',
      received: `compression ${compression}`,
      hint: 'Store it again with deflate, for example with libtiff: tiffcp -c zip IN OUT.',
    });
  }
  checkPredictor(page, path);
  const size = bytesPerElement(dataType);
  const longest = blockRows * blockColumns * size;
  checkBytes(longest, limits, path, 'one strip or tile');
  checkBytes(rows * columns * size, limits, path, 'one frame');
  for (let block = 0; block < offsets.length; block++) {
    const needed = page.tiled ? longest : stripRows(page, block) * columns * size;
    checkBlock(source, offsets[block]!, byteCounts[block]!, needed / method.largestRatio, path, block);
  }
}

function checkBlock(
  source: ByteSource,
  offset: number,
  count: number,
  least: number,
  path: string,
  block: number,
): void {
  if (offset + count > source.size) {
    throw new ArrayError('truncated', {
      path: `${path}, strip or tile ${block}`,
      expected: `${count} bytes from byte ${offset} on`,
      received: `a file of ${source.size} bytes`,
      hint: 'The file is cut off or its header is damaged: copy it again from where it was made.',
    });
  }
  // Also refuses blocks left out of sparse files: a missing block is not a block of zeros.
  if (count >= least && count > 0 && offset > 0) return;
  throw new ArrayError('malformed', {
    path: `${path}, strip or tile ${block}`,
    expected: `at least ${Math.max(1, Math.ceil(least))} bytes`,
    received: offset === 0 ? 'none' : count,
    hint: 'The header declares more pixels than its bytes can hold.',
  });
}

function checkPredictor({ predictor, compression, dataType, littleEndian }: TiffPage, path: string): void {
  const refused = (
    code: 'malformed' | 'unsupported',
    expected: string,
    received: string,
    hint?: string,
  ): ArrayError => new ArrayError(code, { path, expected, received, hint });
  if (![1, 2, 3].includes(predictor))
    throw refused('unsupported', 'predictor 1, 2 or 3', `predictor ${predictor}`);
  if (predictor === 3 && !isFloat(dataType)) {
    throw refused('malformed', 'predictor 3 with floats only', `predictor 3 with ${dataType}`);
  }
  if (predictor === 3 && !littleEndian) {
    throw refused(
      'unsupported',
      'predictor 3 in a little-endian file',
      'big-endian with predictor 3',
      'Writers disagree on the order of its bytes: store it again little-endian, or without a predictor.',
    );
  }
  if (predictor !== 1 && (compression === 1 || compression === 32773)) {
    throw refused('malformed', 'a predictor with LZW or deflate only', `predictor ${predictor} without`);
  }
}

function stripRows({ rows, blockRows }: TiffPage, strip: number): number {
  return Math.min(blockRows, rows - strip * blockRows);
}

async function readPage(
  source: ByteSource,
  page: TiffPage,
  { signal }: ReadingOptions,
  path: string,
): ReturnType<StoredArray['read']> {
  const { rows, columns, blockRows, blockColumns, tiled, dataType, littleEndian, predictor } = page;
  const size = bytesPerElement(dataType);
  const method = compressions[page.compression]!;
  const bytes = new Uint8Array(rows * columns * size);
  const across = Math.ceil(columns / blockColumns);
  const longest = blockRows * blockColumns * size;
  for (let block = 0; block < page.offsets.length; block++) {
    stopIfAborted(signal);
    const length = tiled ? longest : stripRows(page, block) * columns * size;
    const packed = await source.read(page.offsets[block]!, page.byteCounts[block]!);
    const place = `${path}, strip or tile ${block}`;
    const unpacked = (await method.undo(packed, length, longest, place)).subarray(0, length);
    undoPredictor(unpacked, predictor, blockColumns, size, littleEndian);
    const top = Math.floor(block / across) * blockRows;
    const left = (block % across) * blockColumns;
    const width = Math.min(blockColumns, columns - left) * size;
    for (let row = 0; row < Math.min(blockRows, rows - top); row++) {
      const from = row * blockColumns * size;
      bytes.set(unpacked.subarray(from, from + width), ((top + row) * columns + left) * size);
    }
  }
  return decodeElements(bytes, dataType, littleEndian, path);
}

/** Some writers put many frames into one page and say so only in the description; reading one would lose the rest. */
function refuseHiddenFrames({ description = '' }: TiffPage, pages: number, path: string): void {
  const declared = /^ImageJ=/.test(description)
    ? Number(/^images=(\d+)/m.exec(description)?.[1] ?? pages)
    : /"truncated": *true/.test(description) && !claimsDescription(description)
      ? Number.POSITIVE_INFINITY
      : pages;
  if (declared === pages) return;
  throw new ArrayError('unsupported', {
    path,
    expected: 'one page for every frame',
    received: `${pages} pages, while the description declares more frames`,
    hint: 'Store it again with one page a frame.',
  });
}

function descriptionOf(
  { description, dataType }: TiffPage,
  shape: FrameShape,
  path: string,
): StoredDescription | undefined {
  if (description === undefined || !claimsDescription(description)) return undefined;
  const place = `${path}: ImageDescription`;
  const parsed = parseDescription(description, place);
  refuseOtherArray(parsed, shape, dataType, place);
  return parsed;
}

/** The missing value declared in the tag 42113, an open convention of geographic TIFF. */
function noDataOf({ noData }: TiffPage, path: string): number[] {
  const text = noData?.trim() ?? '';
  if (text === '') return [];
  const value = /^[+-]?nan$/i.test(text) ? Number.NaN : Number(text);
  if (!Number.isNaN(value) || /nan/i.test(text)) return [value];
  throw new ArrayError('malformed', { path: `${path}: no-data tag`, expected: 'a number', received: text });
}

function metadataOf(page: TiffPage, pages: number): Record<string, unknown> {
  const { description, dateTime, software, compression, predictor, tiled, littleEndian } = page;
  const texts = Object.entries({ description, dateTime, software }).filter(([, text]) => text !== undefined);
  return {
    ...Object.fromEntries(texts),
    pages,
    compression: compressions[compression]!.name,
    predictor,
    layout: tiled ? 'tiles' : 'strips',
    byteOrder: littleEndian ? 'little-endian' : 'big-endian',
  };
}
