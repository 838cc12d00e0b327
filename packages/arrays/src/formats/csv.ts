/**
 * Delimited grids: numbers as text, between commas, semicolons, tabs or spaces, with a decimal point or comma.
 *
 * One line is one row of pixels; a blank line begins a new frame. Lines that start with # or % are comments and are
 * kept as metadata; a first row of words is a header. Empty cells and NaN, NA, null, - are missing. UTF-8, UTF-16
 * with its mark, else Latin-1. The text is read as a whole.
 */
import { parseGrid } from '../delimited/parse.js';
import { type DataType, dataTypes, elementArray, isFloat } from '../element-type.js';
import { ArrayError } from '../errors.js';
import type { FormatReader, FormatWriter, FramesToWrite, StoredArray, TableOptions } from '../format.js';
import { checkBytes } from '../limits.js';
import {
  checkedDescription,
  claimsDescription,
  refuseOtherArray,
  type StoredDescription,
} from '../stored-description.js';

/** Reads delimited grids. */
export const csvReader: FormatReader = {
  async open(source, { limits, table }) {
    checkBytes(source.size, limits, source.name, 'the text of a grid');
    const text = decodeText(await source.read(0, source.size));
    const written = claimsDescription(text.slice(0, 4096));
    const grid = parseGrid(text, written ? { ...ourDialect, ...given(table) } : table, limits, source.name);
    const { shape, values, dialect, comments, header, closing } = grid;
    const entries = comments.flatMap((comment): [string, string][] => {
      const match = /^([\w .-]{1,60}?)\s*[:=]\s*(.*)$/.exec(comment);
      return match === null ? [] : [[match[1]!, match[2]!]];
    });
    const description = descriptionOf(comments, entries, source.name);
    const dataType = (description?.dataType ?? 'float64') as DataType;
    if (description !== undefined) refuseOtherArray(description, shape, dataType, source.name);
    const pixels = shape[1] * shape[2];
    const stored: StoredArray = {
      shape,
      dataType,
      description,
      noData: [],
      metadata: {
        ...dialect,
        rowsEndWithDelimiter: closing,
        ...(comments.length > 0 ? { comments, entries: Object.fromEntries(entries) } : {}),
        ...(header === undefined ? {} : { header }),
      },
      async read(index) {
        const frame = elementArray(dataType, pixels);
        frame.set(values.subarray(index * pixels, (index + 1) * pixels));
        return frame;
      },
    };
    return stored;
  },
};

/** How the writer below writes. */
const ourDialect = { delimiter: ',', decimal: '.' } as const;

function given(table: TableOptions): TableOptions {
  return Object.fromEntries(Object.entries(table).filter(([, value]) => value !== undefined));
}

/** Text by its mark; without one UTF-8 where the bytes are, else Latin-1 (a degree sign of an older program). */
function decodeText(bytes: Uint8Array): string {
  if (bytes[0] === 0xff && bytes[1] === 0xfe) return new TextDecoder('utf-16le').decode(bytes);
  if (bytes[0] === 0xfe && bytes[1] === 0xff) return new TextDecoder('utf-16be').decode(bytes);
  try {
    return new TextDecoder('utf-8', { fatal: true }).decode(bytes);
  } catch {
    return new TextDecoder('windows-1252').decode(bytes);
  }
}

const jsonKeys: readonly string[] = ['version', 'shape', 'times', 'provenance'];

function descriptionOf(
  comments: readonly string[],
  entries: readonly (readonly [string, string])[],
  path: string,
): StoredDescription | undefined {
  if (!comments.some(claimsDescription)) return undefined;
  const description = Object.fromEntries(
    entries.map(([key, value]) => {
      if (!jsonKeys.includes(key)) return [key, value];
      try {
        return [key, JSON.parse(value) as unknown];
      } catch (cause) {
        throw new ArrayError('malformed', {
          path: `${path}: ${key}`,
          expected: 'JSON',
          received: value,
          cause,
        });
      }
    }),
  );
  const checked = checkedDescription(description, path);
  if ((dataTypes as readonly string[]).includes(checked.dataType)) return checked;
  throw new ArrayError('malformed', {
    path: `${path}: dataType`,
    expected: dataTypes.join(', '),
    received: checked.dataType,
  });
}

/** Writes delimited grids: commas, a decimal point, the description in comment lines, a blank line between frames. */
export const csvWriter: FormatWriter = {
  write: (frames) => ({ chunks: csvChunks(frames) }),
};

function* csvChunks(frames: FramesToWrite): Generator<Uint8Array> {
  const { shape, dataType, description } = frames;
  const [count, rows, columns] = shape;
  const encoder = new TextEncoder();
  const lines = Object.entries(description).map(([key, value]) => {
    return `# ${key}: ${jsonKeys.includes(key) ? JSON.stringify(value) : String(value)}\n`;
  });
  yield encoder.encode(lines.join(''));
  const textOf = isFloat(dataType) ? (dataType === 'float32' ? shortest32 : shortest64) : String;
  for (let index = 0; index < count; index++) {
    const values = frames.frame(index);
    const text: string[] = index === 0 ? [] : [''];
    for (let row = 0; row < rows; row++) {
      const cells: string[] = [];
      for (let column = 0; column < columns; column++) cells.push(textOf(values[row * columns + column]!));
      text.push(cells.join(','));
    }
    yield encoder.encode(`${text.join('\n')}\n`);
  }
}

function shortest64(value: number): string {
  if (Number.isFinite(value)) return Object.is(value, -0) ? '-0' : String(value);
  return Number.isNaN(value) ? 'NaN' : value > 0 ? 'inf' : '-inf';
}

/** Six to nine digits, the fewest that give the same float32 again. */
function shortest32(value: number): string {
  if (!Number.isFinite(value) || value === 0) return shortest64(value);
  for (let digits = 6; digits < 9; digits++) {
    const text = Number(value.toPrecision(digits));
    if (Math.fround(text) === value) return String(text);
  }
  return String(Number(value.toPrecision(9)));
}
