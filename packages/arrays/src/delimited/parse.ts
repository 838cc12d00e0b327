/**
 * Text of numbers to a grid: which delimiter and decimal sign, which rows are comments, header and numbers.
 *
 * Every combination of delimiter and decimal sign is tried on the first rows; one that reads them as numbers is
 * taken. Where two would, the caller is asked.
 */
import { ArrayError } from '../errors.js';
import type { TableOptions } from '../format.js';
import { checkShape, type Limits } from '../limits.js';

/** How the numbers of a text are written. */
export interface Dialect {
  readonly delimiter: ',' | ';' | '\t' | ' ';
  readonly decimal: '.' | ',';
}

/** Numbers of a text: frames are separated by blank lines. */
export interface Grid {
  readonly shape: readonly [frames: number, rows: number, columns: number];
  readonly values: Float64Array;
  readonly dialect: Dialect;
  /** Whether every row ends with a delimiter, which then closes the row and begins no further cell. */
  readonly closing: boolean;
  /** Lines that start with # or %, without that sign. */
  readonly comments: readonly string[];
  /** Cells of a first row that is not of numbers. */
  readonly header: readonly string[] | undefined;
}

interface Row {
  readonly line: number;
  readonly text: string;
}

const missingTokens: ReadonlySet<string> = new Set('|nan|na|n/a|#n/a|null|none|missing|-|--|---'.split('|'));

/**
 * Parses a text.
 *
 * @throws {ArrayError} `malformed`, `wrong-shape`, `empty`, `not-recognised`, `missing-option`, `limit-exceeded`.
 */
export function parseGrid(text: string, options: TableOptions, limits: Limits, path: string): Grid {
  const { blocks, comments } = blocksOf(text);
  const first = blocks[0]?.[0];
  if (first === undefined)
    throw new ArrayError('empty', { path, expected: 'rows of numbers', received: 'none' });
  const dialect = dialectOf(blocks.flat(), options, path);
  const firstCells = cellsOf(first.text, dialect);
  const header = blocks.flat().length > 1 && isWordRow(firstCells, dialect) ? firstCells : undefined;
  const [head, ...rest] = blocks as [Row[], ...Row[][]];
  const body = header === undefined ? head : head.slice(1);
  const frames = body.length === 0 ? rest : [body, ...rest];
  if (frames.length === 0)
    throw new ArrayError('empty', { path, expected: 'rows of numbers', received: 'a header' });
  return { ...gridOf(frames, dialect, limits, path), dialect, comments, header };
}

/** Rows in blocks between blank lines; comments apart. */
function blocksOf(text: string): { blocks: Row[][]; comments: string[] } {
  const blocks: Row[][] = [];
  const comments: string[] = [];
  let block: Row[] = [];
  let line = 0;
  for (let from = 0; from <= text.length; ) {
    let to = from;
    while (to < text.length && text.charCodeAt(to) !== 10 && text.charCodeAt(to) !== 13) to++;
    const row = text.slice(from, to);
    from = text.charCodeAt(to) === 13 && text.charCodeAt(to + 1) === 10 ? to + 2 : to + 1;
    line++;
    const trimmed = row.trim();
    if (trimmed === '') {
      // A row of nothing but tabs is a row of missing cells, not a blank line.
      if (row.includes('\t') && block.length > 0) block.push({ line, text: row });
      else if (block.length > 0) [block] = [[], blocks.push(block)];
    } else if (/^[#%]/.test(trimmed)) comments.push(trimmed.slice(1).trim());
    else block.push({ line, text: row });
  }
  if (block.length > 0) blocks.push(block);
  return { blocks, comments };
}

const dialects: readonly Dialect[] = [
  { delimiter: '\t', decimal: '.' },
  { delimiter: '\t', decimal: ',' },
  { delimiter: ';', decimal: '.' },
  { delimiter: ';', decimal: ',' },
  { delimiter: ',', decimal: '.' },
  { delimiter: ' ', decimal: '.' },
  { delimiter: ' ', decimal: ',' },
];

/** The dialect that reads the first rows as numbers; where none does, the rows behind a header. */
function dialectOf(rows: readonly Row[], { delimiter, decimal }: TableOptions, path: string): Dialect {
  if (delimiter !== undefined && delimiter === decimal) {
    throw new ArrayError('wrong-option', {
      path: 'table.decimal',
      expected: 'another sign than the delimiter',
      received: decimal,
    });
  }
  if (delimiter !== undefined && decimal !== undefined) return { delimiter, decimal };
  const candidates = dialects.filter(
    (one) => (delimiter ?? one.delimiter) === one.delimiter && (decimal ?? one.decimal) === one.decimal,
  );
  const readingsOf = (sample: readonly Row[]): { dialect: Dialect; text: string; columns: number }[] =>
    candidates.flatMap((dialect) => {
      const cells = sample.map((row) => cellsOf(row.text, dialect));
      const sound = cells.every((row) => row.every((cell) => numberOf(cell, dialect) !== undefined));
      const numbers = cells.some((row) => row.some((cell) => !missingTokens.has(cell.toLowerCase())));
      const text = cells.map((row) => row.map((cell) => numberOf(cell, dialect)).join()).join(';');
      return sound && numbers ? [{ dialect, text, columns: cells[0]!.length }] : [];
    });
  const whole = readingsOf(rows.slice(0, 32));
  const sample = whole.length > 0 || rows.length === 1 ? rows.slice(0, 32) : rows.slice(1, 33);
  const readings = whole.length > 0 ? whole : readingsOf(sample);
  const [best, ...others] = readings.sort((a, b) => b.columns - a.columns);
  if (best === undefined) {
    throw new ArrayError('malformed', {
      path: `${path}: line ${sample[0]!.line}`,
      expected: 'numbers between commas, semicolons, tabs or spaces',
      received: sample[0]!.text,
      hint: 'Comment lines start with #; missing cells are empty or NaN.',
    });
  }
  // `21,5`: two whole numbers, or one with a decimal comma.
  const rival = others.find(({ text }) => text !== best.text);
  if (rival === undefined) return best.dialect;
  throw new ArrayError('missing-option', {
    path: 'table',
    expected: `to be told the delimiter and the decimal sign, as ${path} can be read in two ways`,
    received: sample[0]!.text,
    hint: `Write { table: ${dialectText(best.dialect)} } or { table: ${dialectText(rival.dialect)} }.`,
  });
}

function dialectText({ delimiter, decimal }: Dialect): string {
  return `{ delimiter: '${delimiter === '\t' ? '\\t' : delimiter}', decimal: '${decimal}' }`;
}

function cellsOf(row: string, { delimiter }: Dialect): string[] {
  if (delimiter === ' ') return row.trim().split(/ +/);
  const cells = row.split(delimiter);
  return cells.map((cell) => cell.trim().replace(/^"(.*)"$/, '$1'));
}

/** A number, NaN for a missing cell, undefined for anything else. */
function numberOf(cell: string, { decimal }: Dialect): number | undefined {
  if (missingTokens.has(cell.toLowerCase())) return Number.NaN;
  const text = cell.replace(/^\u2212/, '-');
  const plain = decimal === ',' ? text.replace(',', '.') : text;
  if (decimal === ',' && text.includes('.')) return undefined;
  if (/^[+-]?(\d+\.?\d*|\.\d+)(e[+-]?\d+)?$/i.test(plain)) return Number(plain);
  const infinite = /^([+-]?)inf(inity)?$/i.exec(plain);
  return infinite === null
    ? undefined
    : infinite[1] === '-'
      ? Number.NEGATIVE_INFINITY
      : Number.POSITIVE_INFINITY;
}

function withoutSpaces(text: string): string {
  let end = text.length;
  while (end > 0 && text[end - 1] === ' ') end--;
  return text.slice(0, end);
}

/** Whether a row is a header: words, none of which begins like a number, and no number. A damaged number is none. */
function isWordRow(cells: readonly string[], dialect: Dialect): boolean {
  const words = cells.filter((cell) => !missingTokens.has(cell.toLowerCase()));
  return (
    words.length > 0 &&
    words.every(
      (cell) => numberOf(cell, dialect) === undefined && /\p{L}/u.test(cell) && !/^[\d+.,-]/.test(cell),
    )
  );
}

function gridOf(
  frames: readonly (readonly Row[])[],
  dialect: Dialect,
  limits: Limits,
  path: string,
): Pick<Grid, 'shape' | 'values' | 'closing'> {
  const rows = frames[0]!.length;
  const closing = frames.every((frame) =>
    frame.every(({ text }) => dialect.delimiter !== ' ' && withoutSpaces(text).endsWith(dialect.delimiter)),
  );
  const columns = cellsOf(frames[0]![0]!.text, dialect).length - (closing ? 1 : 0);
  checkShape([frames.length, rows, columns], limits, path);
  const values = new Float64Array(frames.length * rows * columns);
  let place = 0;
  for (const frame of frames) {
    if (frame.length !== rows) {
      throw new ArrayError('wrong-shape', {
        path: `${path}: line ${frame[0]!.line}`,
        expected: `${rows} rows in every frame (a blank line begins a new one)`,
        received: `${frame.length} rows`,
        hint: 'Take blank lines out of a single grid.',
      });
    }
    for (const row of frame) {
      const cells = cellsOf(row.text, dialect);
      if (closing) cells.pop();
      if (cells.length !== columns) {
        throw new ArrayError('wrong-shape', {
          path: `${path}: line ${row.line}`,
          expected: `${columns} cells, as in the first row`,
          received: `${cells.length} cells`,
        });
      }
      for (const cell of cells) {
        const value = numberOf(cell, dialect);
        if (value === undefined) {
          throw new ArrayError('malformed', {
            path: `${path}: line ${row.line}`,
            expected: `a number with a decimal ${dialect.decimal === '.' ? 'point' : 'comma'}, or NaN`,
            received: cell,
            hint: 'Write units into the header, not into the cells.',
          });
        }
        values[place++] = value;
      }
    }
  }
  return { shape: [frames.length, rows, columns], values, closing };
}
