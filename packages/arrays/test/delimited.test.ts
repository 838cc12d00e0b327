import { describe, expect, it } from 'vitest';
import { type ReadOptions, readFrames } from '../src/frames.js';
import { errorOf } from './support/fixtures.js';

const read = async (text: string, table?: ReadOptions['table']): Promise<number[][][]> => {
  const { array, shape } = await readFrames(new TextEncoder().encode(text), {
    quantity: 'band radiance',
    table,
  });
  const [frames, rows, columns] = shape;
  const list = (length: number): number[] => Array.from({ length }, (_, i) => i);
  return list(frames).map((k) => list(rows).map((i) => list(columns).map((j) => array.get(k, i, j))));
};
const { NaN: missing } = Number;

describe('delimited grids', () => {
  it.each([
    [
      'commas and blanks',
      '1.5, 2 ,3\n4,5,6\n',
      [
        [
          [1.5, 2, 3],
          [4, 5, 6],
        ],
      ],
    ],
    [
      'semicolons, decimal comma',
      '1,5;2\n3;4,25',
      [
        [
          [1.5, 2],
          [3, 4.25],
        ],
      ],
    ],
    [
      'tabs, decimal comma',
      '1,5\t2\n3\t4,25',
      [
        [
          [1.5, 2],
          [3, 4.25],
        ],
      ],
    ],
    [
      'blanks, decimal comma',
      '1,5  2,25\n 3,5 4,75\n',
      [
        [
          [1.5, 2.25],
          [3.5, 4.75],
        ],
      ],
    ],
    ['one column', '20\n21\n', [[[20], [21]]]],
    ['one row', '20;21', [[[20, 21]]]],
    [
      'returns of old machines',
      '1;2\r3;4\r',
      [
        [
          [1, 2],
          [3, 4],
        ],
      ],
    ],
    [
      'a blank line between frames',
      '1;2\n3;4\n\n5;6\n7;8\n\n\n',
      [
        [
          [1, 2],
          [3, 4],
        ],
        [
          [5, 6],
          [7, 8],
        ],
      ],
    ],
    [
      'comments among the rows',
      '% made by hand\n1;2\n# half time\n3;4',
      [
        [
          [1, 2],
          [3, 4],
        ],
      ],
    ],
    [
      'missing cells',
      '1;NaN;\nn/a;-;NULL\n7;8;9',
      [
        [
          [1, missing, missing],
          [missing, missing, missing],
          [7, 8, 9],
        ],
      ],
    ],
    [
      'a row of missing cells between tabs',
      '1\t2\n\t\n3\t4',
      [
        [
          [1, 2],
          [missing, missing],
          [3, 4],
        ],
      ],
    ],
    [
      'a delimiter at the end of every row',
      '1;2;\n3;4;\n',
      [
        [
          [1, 2],
          [3, 4],
        ],
      ],
    ],
    [
      'signs, exponents, infinities',
      '+1e2;-.5;5.\n\u22121.5E-1;inf;-Infinity',
      [
        [
          [100, -0.5, 5],
          [-0.15, Infinity, -Infinity],
        ],
      ],
    ],
    ['a header of words over numbers', 'left;right\n1;2\n', [[[1, 2]]]],
    [
      'a header in quotes',
      '"left","right"\n1,2\n3,4\n',
      [
        [
          [1, 2],
          [3, 4],
        ],
      ],
    ],
  ])('%s', async (_, text, wanted) => {
    const table = text.includes('"') ? ({ delimiter: ',', decimal: '.' } as const) : undefined;
    expect(await read(text, table)).toEqual(
      wanted
        .map((frame) => frame.map((row) => row.map(Math.fround)))
        .map((frame, k) => frame.map((row, i) => row.map((_value, j) => wanted[k]![i]![j]!))),
    );
  });

  it('two readings are settled by the caller', async () => {
    const text = '21,5\n22,7\n';
    const error = await errorOf(read(text));
    expect(error.code).toBe('missing-option');
    expect(error.hint).toBe(
      "Write { table: { delimiter: ',', decimal: '.' } } or { table: { delimiter: '\\t', decimal: ',' } }.",
    );
    expect(await read(text, { decimal: ',' })).toEqual([[[21.5], [22.7]]]);
    expect(await read(text, { delimiter: ',' })).toEqual([
      [
        [21, 5],
        [22, 7],
      ],
    ]);
  });

  it.each([
    ['frames of different heights', '1;2\n3;4\n\n5;6\n', undefined, 'wrong-shape'],
    ['frames of different widths', '1;2\n3;4\n\n5;6;7\n8;9;0\n', undefined, 'wrong-shape'],
    ['a unit in a cell', '1;2\n3;21.5°C\n', undefined, 'malformed'],
    ['a number with two commas', '1,2,3;4\n5;6\n', undefined, 'malformed'],
    ['thousands', '1;2\n1.234,5;6\n', undefined, 'malformed'],
    ['hexadecimal', '1;2\n0x10;6\n', undefined, 'malformed'],
    ['words after numbers', '1;2\n3;4\nend of file\n', undefined, 'malformed'],
    ['nothing but missing cells', '# 1\n;;\n;;\n', undefined, 'malformed'],
    ['a ragged second row of missing cells', ';0\n;;\n', undefined, 'wrong-shape'],
    ['a letter for a digit in the first row', '2O.5;21\n22;23\n', undefined, 'malformed'],
    ['a letter for a digit in one column', '2O.5\n21\n22\n', undefined, 'malformed'],
    ['a first row of words and numbers', 'row;1;2\n3;4;5\n', undefined, 'malformed'],
    ['a header alone', 'left1;right\n', undefined, 'malformed'],
    ['a header alone, told how', 'left1;right\n', { delimiter: ';', decimal: '.' }, 'malformed'],
    ['one sign for both', '1,5\n', { delimiter: ',', decimal: ',' }, 'wrong-option'],
    ['the wrong delimiter', '1;2\n3;4\n', { delimiter: ',', decimal: '.' }, 'malformed'],
    ['comments', '# 1;2\n', undefined, 'empty'],
  ] as const)('%s: refused', async (_, text, table, code) => {
    const error = await errorOf(read(text, table));
    expect(error.code, error.message).toBe(code);
  });

  it('a long text of blanks and commas does not hold it up', async () => {
    const start = performance.now();
    for (const text of [
      `1;2\n${' '.repeat(500_000)}x`,
      `1${','.repeat(300_000)}\n1,2`,
      `${'1 '.repeat(200_000)}\n1`,
    ]) {
      expect((await errorOf(read(text))).code).toMatch(/malformed|wrong-shape|limit-exceeded|missing-option/);
    }
    expect(performance.now() - start).toBeLessThan(5000);
  });
});
