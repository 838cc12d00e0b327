/**
 * The directories of a TIFF file, scanned before anything is read from them.   [TIFF 6.0, sections 2 and 8; BigTIFF]
 *
 * Every offset, count and size is checked against the file before memory is taken: the chain may neither loop nor
 * have more pages than the limit, and every strip or tile must lie within the file.
 */
import type { DataType } from '../element-type.js';
import { ArrayError } from '../errors.js';
import { checkShape, type Limits } from '../limits.js';
import type { ByteSource } from '../source.js';

/** One image of a file. */
export interface TiffPage {
  readonly columns: number;
  readonly rows: number;
  readonly dataType: DataType;
  readonly littleEndian: boolean;
  readonly compression: number;
  readonly predictor: number;
  /** Extents of a strip or tile; a strip is as wide as the page. */
  readonly blockColumns: number;
  readonly blockRows: number;
  readonly tiled: boolean;
  readonly offsets: readonly number[];
  readonly byteCounts: readonly number[];
  readonly description: string | undefined;
  readonly dateTime: string | undefined;
  readonly software: string | undefined;
  readonly noData: string | undefined;
}

/** Most bytes of a text in a directory. */
const longestText = 1 << 24;
/** Most strips and tiles of all pages together; their places are held in memory. */
const mostBlocks = 1 << 23;

const tags = {
  subfileType: 254,
  columns: 256,
  rows: 257,
  bitsPerSample: 258,
  compression: 259,
  photometric: 262,
  fillOrder: 266,
  description: 270,
  stripOffsets: 273,
  samplesPerPixel: 277,
  rowsPerStrip: 278,
  stripByteCounts: 279,
  software: 305,
  dateTime: 306,
  predictor: 317,
  tileColumns: 322,
  tileRows: 323,
  tileOffsets: 324,
  tileByteCounts: 325,
  sampleFormat: 339,
  depth: 32997,
  noData: 42113,
} as const;
type Tag = keyof typeof tags;

/** Bytes of one value by field type; what is not listed is not read. */
const fieldSizes: Readonly<Record<number, number>> = { 1: 1, 2: 1, 3: 2, 4: 4, 13: 4, 16: 8, 18: 8 };

/**
 * Every full-resolution image of a file, in order. Reduced copies and masks are left out.
 *
 * @throws {ArrayError} `truncated`, `malformed`, `unsupported`, `limit-exceeded`, `empty`.
 */
export async function scanTiff(source: ByteSource, limits: Limits): Promise<readonly TiffPage[]> {
  const file = await openHeader(source);
  const pages: TiffPage[] = [];
  let blocks = 0;
  const seen = new Set<number>();
  for (let at = file.first; at !== 0; ) {
    if (seen.has(at))
      throw file.malformed('a chain of directories with an end', 'a chain that returns to itself');
    if (seen.size >= limits.frames) {
      throw new ArrayError('limit-exceeded', {
        path: source.name,
        expected: `at most ${limits.frames} pages`,
        received: 'more',
      });
    }
    seen.add(at);
    const directory = await readDirectory(file, at, seen.size - 1);
    const page = await readPage(file, directory, {
      limits,
      isFirst: pages.length === 0,
      blocksLeft: mostBlocks - blocks,
    });
    if (page !== undefined) pages.push(page);
    blocks += page?.offsets.length ?? 0;
    at = directory.next;
  }
  if (pages.length === 0) {
    throw new ArrayError('empty', { path: source.name, expected: 'at least one page', received: 'none' });
  }
  return pages;
}

interface TiffFile {
  readonly source: ByteSource;
  readonly littleEndian: boolean;
  readonly big: boolean;
  readonly first: number;
  malformed(expected: string, received: unknown, place?: string): ArrayError;
}

async function openHeader(source: ByteSource): Promise<TiffFile> {
  const head = new DataView((await source.read(0, 8)).buffer);
  const littleEndian = head.getUint16(0) === 0x4949;
  const big = head.getUint16(2, littleEndian) === 43;
  const malformed: TiffFile['malformed'] = (expected, received, place) =>
    new ArrayError('malformed', {
      path: place === undefined ? source.name : `${source.name}: ${place}`,
      expected,
      received,
    });
  if (!big) return { source, littleEndian, big, first: head.getUint32(4, littleEndian), malformed };
  if (head.getUint16(4, littleEndian) !== 8)
    throw malformed('offsets of 8 bytes', head.getUint16(4, littleEndian));
  const first = Number(new DataView((await source.read(8, 8)).buffer).getBigUint64(0, littleEndian));
  return { source, littleEndian, big, first, malformed };
}

interface Field {
  readonly type: number;
  readonly count: number;
  /** Where the values lie. */
  readonly at: number;
}

interface Directory {
  readonly fields: ReadonlyMap<number, Field>;
  readonly next: number;
  readonly place: string;
}

async function readDirectory(file: TiffFile, at: number, index: number): Promise<Directory> {
  const { source, littleEndian, big } = file;
  const place = `page ${index}`;
  const countBytes = big ? 8 : 2;
  const entryBytes = big ? 20 : 12;
  const offset = (view: DataView, byte: number): number =>
    big ? Number(view.getBigUint64(byte, littleEndian)) : view.getUint32(byte, littleEndian);
  const countView = new DataView((await source.read(at, countBytes)).buffer);
  const count = big ? Number(countView.getBigUint64(0, littleEndian)) : countView.getUint16(0, littleEndian);
  if (count === 0 || count > 4096) throw file.malformed('1…4096 entries in a directory', count, place);
  const length = count * entryBytes + (big ? 8 : 4);
  const view = new DataView((await source.read(at + countBytes, length)).buffer);
  const known = new Set<number>(Object.values(tags));
  const fields = new Map<number, Field>();
  for (let entry = 0; entry < count; entry++) {
    const start = entry * entryBytes;
    const tag = view.getUint16(start, littleEndian);
    if (!known.has(tag)) continue;
    const type = view.getUint16(start + 2, littleEndian);
    const values = offset(view, start + 4);
    const size = fieldSizes[type];
    if (size === undefined)
      throw file.malformed('a type of whole numbers or text', `type ${type} of tag ${tag}`, place);
    const inline = values * size <= (big ? 8 : 4);
    const valueByte = start + (big ? 12 : 8);
    const where = inline ? at + countBytes + valueByte : offset(view, valueByte);
    if (fields.has(tag)) throw file.malformed('each tag once', `tag ${tag} twice`, place);
    fields.set(tag, { type, count: values, at: where });
  }
  return { fields, next: offset(view, count * entryBytes), place };
}

/** Numbers of a tag; more samples than a handful are none of ours. */
async function numbers(
  file: TiffFile,
  { fields, place }: Directory,
  tag: Tag,
  most = 1024,
): Promise<number[] | undefined> {
  const field = fields.get(tags[tag]);
  if (field === undefined) return undefined;
  const { type, count, at } = field;
  const size = fieldSizes[type]!;
  if (type === 2 || count === 0)
    throw file.malformed(`whole numbers in ${tag}`, `type ${type}, count ${count}`, place);
  if (count > most) throw file.malformed(`at most ${most} values in ${tag}`, count, place);
  const view = new DataView((await file.source.read(at, count * size)).buffer);
  const { littleEndian } = file;
  return Array.from({ length: count }, (_, i) => {
    if (size === 1) return view.getUint8(i);
    if (size === 2) return view.getUint16(i * 2, littleEndian);
    return size === 4 ? view.getUint32(i * 4, littleEndian) : Number(view.getBigUint64(i * 8, littleEndian));
  });
}

async function text(file: TiffFile, { fields, place }: Directory, tag: Tag): Promise<string | undefined> {
  const field = fields.get(tags[tag]);
  if (field === undefined) return undefined;
  if (field.count > longestText)
    throw file.malformed(`at most ${longestText} bytes in ${tag}`, field.count, place);
  if (field.type !== 2 && field.type !== 1)
    throw file.malformed(`text in ${tag}`, `type ${field.type}`, place);
  const bytes = await file.source.read(field.at, field.count);
  return new TextDecoder().decode(bytes).replace(/\0[\s\S]*$/, '');
}

interface PageRules {
  readonly limits: Limits;
  /** The texts of the first page alone are kept. */
  readonly isFirst: boolean;
  readonly blocksLeft: number;
}

async function readPage(
  file: TiffFile,
  directory: Directory,
  { limits, isFirst, blocksLeft }: PageRules,
): Promise<TiffPage | undefined> {
  const { place } = directory;
  const one = async (tag: Tag, otherwise?: number): Promise<number> => {
    const values = await numbers(file, directory, tag);
    const value = values?.[0] ?? otherwise;
    if (value === undefined) throw file.malformed(`the tag ${tag}`, 'none', place);
    if (values?.some((other) => other !== value))
      throw unsupported(`one value of ${tag} for all samples`, values);
    return value;
  };
  const unsupported = (expected: string, received: unknown, hint?: string): ArrayError =>
    new ArrayError('unsupported', { path: `${file.source.name}: ${place}`, expected, received, hint });
  const kind = await one('subfileType', 0);
  if ((kind & 1) !== 0 || (kind & 4) !== 0) return undefined;
  const columns = await one('columns');
  const rows = await one('rows');
  checkShape([1, rows, columns], limits, `${file.source.name}: ${place}`);
  const samples = await one('samplesPerPixel', 1);
  const photometric = await one('photometric', 1);
  if (samples !== 1 || photometric > 1) {
    throw unsupported(
      'one measured value a pixel',
      `${samples} samples, photometric interpretation ${photometric}`,
      'A colour picture holds no temperatures; store the measured values as one sample.',
    );
  }
  if ((await one('fillOrder', 1)) !== 1) throw unsupported('bits in the usual order', 'FillOrder 2');
  if ((await one('depth', 1)) !== 1) throw unsupported('flat images', 'a volume in one page');
  const dataType = typeOf(await one('sampleFormat', 1), await one('bitsPerSample', 1));
  if (dataType === undefined) {
    throw unsupported(
      'float16/32/64 or integers of 8, 16, 32 or 64 bits',
      `SampleFormat ${await one('sampleFormat', 1)}, ${await one('bitsPerSample', 1)} bits`,
    );
  }
  const tiled = directory.fields.has(tags.tileOffsets);
  const blockColumns = tiled ? await one('tileColumns') : columns;
  const blockRows = tiled ? await one('tileRows') : Math.min(await one('rowsPerStrip', rows), rows);
  if (blockColumns === 0 || blockRows === 0) {
    throw file.malformed('strips or tiles that are not empty', `${blockRows} × ${blockColumns}`, place);
  }
  const [offsetTag, countTag] = tiled
    ? (['tileOffsets', 'tileByteCounts'] as const)
    : (['stripOffsets', 'stripByteCounts'] as const);
  const blocks = Math.ceil(rows / blockRows) * Math.ceil(columns / blockColumns);
  if (blocks > blocksLeft) {
    throw new ArrayError('limit-exceeded', {
      path: file.source.name,
      expected: `at most ${mostBlocks} strips and tiles`,
      received: 'more',
    });
  }
  const declared = [offsetTag, countTag].map((tag) => directory.fields.get(tags[tag])?.count ?? 0);
  if (declared.some((count) => count !== blocks)) {
    throw file.malformed(`${blocks} offsets and byte counts of strips or tiles`, declared, place);
  }
  const offsets = (await numbers(file, directory, offsetTag, blocks))!;
  const byteCounts = (await numbers(file, directory, countTag, blocks))!;
  const textOf = async (tag: Tag): Promise<string | undefined> =>
    isFirst ? text(file, directory, tag) : undefined;
  return {
    columns,
    rows,
    dataType,
    littleEndian: file.littleEndian,
    compression: await one('compression', 1),
    predictor: await one('predictor', 1),
    blockColumns,
    blockRows,
    tiled,
    offsets,
    byteCounts,
    description: await textOf('description'),
    dateTime: await textOf('dateTime'),
    software: await textOf('software'),
    noData: await textOf('noData'),
  };
}

function typeOf(format: number, bits: number): DataType | undefined {
  const kind = { 1: 'uint', 2: 'int', 3: 'float' }[format];
  const sizes = format === 3 ? [16, 32, 64] : [8, 16, 32, 64];
  return kind !== undefined && sizes.includes(bits) ? (`${kind}${bits}` as DataType) : undefined;
}
