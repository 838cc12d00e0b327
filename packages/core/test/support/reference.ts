/** Reading the figures in `fixtures`, and comparing with them. */
import { readFileSync } from 'node:fs';

/** Text of a file below `fixtures`. */
export function fixtureText(path: string): string {
  return readFileSync(new URL(`../../../../fixtures/${path}`, import.meta.url), 'utf8');
}

/** A JSON file below `fixtures`, in the shape the test knows it to have. */
export function fixtureJson<Shape>(path: string): Shape {
  return JSON.parse(fixtureText(path)) as Shape;
}

/** A CSV file of numbers below `fixtures`: one record a row, by column name. Fails on a cell that is no number. */
export function fixtureCsv<Column extends string>(
  path: string,
  columns: readonly Column[],
): Record<Column, number>[] {
  const [head = '', ...lines] = fixtureText(path).trim().split(/\r?\n/);
  const names = head.split(',');
  return lines.map((line, index) => {
    const cells = line.split(',');
    return Object.fromEntries(
      columns.map((column) => {
        const value = Number(cells[names.indexOf(column)] ?? Number.NaN);
        if (Number.isNaN(value)) throw new Error(`${path}: no number in row ${index + 1}, column ${column}`);
        return [column, value];
      }),
    ) as Record<Column, number>;
  });
}

/** |value / reference − 1|; Infinity where that is no number, so that no NaN slips through a comparison. */
export function relativeError(value: number, reference: number): number {
  const error = Math.abs(value / reference - 1);
  return Number.isNaN(error) ? Number.POSITIVE_INFINITY : error;
}

/** The largest of some errors and what it belongs to, so that a failing test says where. */
export class Worst {
  error = 0;
  at = 'nothing compared';
  count = 0;

  /** Takes an error into account. A NaN counts as infinite. */
  add(error: number, at: string): void {
    this.count += 1;
    const size = Number.isNaN(error) ? Number.POSITIVE_INFINITY : Math.abs(error);
    if (this.count > 1 && size <= this.error) return;
    this.error = size;
    this.at = at;
  }

  /** Throws when an error was beyond the tolerance, or when nothing was compared. */
  within(tolerance: number): void {
    if (this.count > 0 && this.error <= tolerance) return;
    throw new Error(
      `worst error ${this.error} at ${this.at}, tolerance ${tolerance}, ${this.count} compared`,
    );
  }
}
