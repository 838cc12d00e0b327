/**
 * The table of formats, and recognition by content. A format is one file in `formats/` and one row here.
 */
import { ArrayError } from './errors.js';
import type { Format, FormatId } from './format.js';
import { nearest } from './options.js';

const startsWith = (head: Uint8Array, ...bytes: number[]): boolean =>
  bytes.every((byte, i) => head[i] === byte);

/** The formats this package knows. The last takes any text, so it stays last. */
export const formats: readonly Format[] = [
  {
    id: 'npy',
    name: 'NPY',
    extensions: ['.npy'],
    streams: true,
    recognise: (head) => startsWith(head, 0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59),
    reader: async () => (await import('./formats/npy.js')).npyReader,
    writer: async () => (await import('./formats/npy.js')).npyWriter,
  },
  {
    id: 'tiff',
    name: 'TIFF',
    extensions: ['.tif', '.tiff'],
    streams: true,
    recognise: (head) =>
      startsWith(head, 0x49, 0x49, 42, 0) ||
      startsWith(head, 0x4d, 0x4d, 0, 42) ||
      startsWith(head, 0x49, 0x49, 43, 0) ||
      startsWith(head, 0x4d, 0x4d, 0, 43),
    reader: async () => (await import('./formats/tiff.js')).tiffReader,
    writer: async () => (await import('./formats/tiff.js')).tiffWriter,
  },
  {
    id: 'csv',
    name: 'delimited grid (CSV, TSV)',
    extensions: ['.csv', '.tsv', '.txt', '.asc'],
    streams: false,
    recognise: looksLikeGrid,
    reader: async () => (await import('./formats/csv.js')).csvReader,
    writer: async () => (await import('./formats/csv.js')).csvWriter,
  },
];

/** Text of numbers: no control characters, a digit somewhere, and not the start of a document of another kind. */
function looksLikeGrid(head: Uint8Array): boolean {
  if (startsWith(head, 0xff, 0xfe) || startsWith(head, 0xfe, 0xff)) return true; // UTF-16 with its mark
  const text = new TextDecoder('latin1').decode(startsWith(head, 0xef, 0xbb, 0xbf) ? head.subarray(3) : head);
  if (/[^\t\n\v\f\r\x20-\x7e\x80-\xff]/.test(text)) return false;
  return !/^\s*[<{[]/.test(text) && !/^\s*%(PDF|!)/.test(text) && /\d/.test(text);
}

/** Beginnings of files that are met by mistake, to say what came. */
const others: readonly (readonly [name: string, hint: string, ...bytes: number[]])[] = [
  ['a ZIP archive (NPZ is one)', 'Save a single array with numpy.save.', 0x50, 0x4b],
  ['a gzip file', 'Unpack it first.', 0x1f, 0x8b],
  ['a PNG picture', 'A picture holds colours, not temperatures.', 0x89, 0x50, 0x4e, 0x47],
  ['a JPEG picture', 'A picture holds colours, not temperatures.', 0xff, 0xd8, 0xff],
  ['an HDF5 file', 'Store the array as NPY or TIFF.', 0x89, 0x48, 0x44, 0x46],
  ['a NetCDF file', 'Store the array as NPY or TIFF.', 0x43, 0x44, 0x46],
  ['a FITS file', 'Store the array as NPY or TIFF.', 0x53, 0x49, 0x4d, 0x50, 0x4c, 0x45],
];

/**
 * The format of some bytes, by their content.
 *
 * @throws {ArrayError} `not-recognised`.
 */
export function recognise(head: Uint8Array, path: string): Format {
  const other = others.find(([, , ...bytes]) => startsWith(head, ...bytes));
  const format = other === undefined ? formats.find((one) => one.recognise(head)) : undefined;
  if (format !== undefined) return format;
  const start = [...head.subarray(0, 8)].map((byte) => byte.toString(16).padStart(2, '0')).join(' ');
  throw new ArrayError('not-recognised', {
    path,
    expected: `${formats.map(({ name }) => name).join(', ')}`,
    received: other === undefined ? `bytes that start with ${start}` : other[0],
    hint: other?.[1],
  });
}

/** The format a name ends like; undefined for another ending. */
export function formatOfName(name: string): Format | undefined {
  const lower = name.toLowerCase();
  return formats.find(({ extensions }) => extensions.some((extension) => lower.endsWith(extension)));
}

/**
 * The format of an id.
 *
 * @throws {ArrayError} `wrong-option`.
 */
export function formatOfId(id: unknown): Format {
  const format = formats.find((one) => one.id === id);
  if (format !== undefined) return format;
  const ids = formats.map((one): FormatId => one.id);
  const close = nearest(id, ids);
  throw new ArrayError('wrong-option', {
    path: 'format',
    expected: `one of ${ids.map((one) => `'${one}'`).join(', ')}`,
    received: id,
    hint: close === undefined ? undefined : `Did you mean '${close}'?`,
  });
}
