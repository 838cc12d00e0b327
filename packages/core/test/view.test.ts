import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  broadcast,
  checkView,
  emptyView,
  forEachRow,
  isView,
  rowMajorStride,
  sameShape,
  sizeOf,
  type View,
  view,
} from '../src/view.js';
import { type BadInput, expectRefused, untyped } from './support/thrown.js';

const data = (count: number): Float32Array => Float32Array.from({ length: count }, (_, i) => i);

/** Every element of a view in row-major order, read through forEachRow. */
function elements(source: View): number[] {
  const result: number[] = [];
  const step = source.stride.at(-1) ?? 0;
  forEachRow(source.shape, [source], ([start], length) => {
    for (let i = 0; i < length; i++) result.push(source.data[start! + i * step]!);
  });
  return result;
}

describe('making views', () => {
  it('lays a flat array out row by row', () => {
    const made = view(data(24), [2, 3, 4]);
    expect(made.stride).toEqual([12, 4, 1]);
    expect(made.offset).toBe(0);
    expect(elements(made)).toEqual([...data(24)]);
    expect(rowMajorStride([])).toEqual([]);
    expect(sizeOf([2, 3, 4])).toBe(24);
    expect(sizeOf([])).toBe(1);
  });

  it('takes data longer than the shape, plain arrays, 0-d and empty shapes', () => {
    expect(elements(view(data(9), [2, 3]))).toEqual([0, 1, 2, 3, 4, 5]);
    expect(elements(view([5, 6], [2]))).toEqual([5, 6]);
    expect(elements(view(data(1), []))).toEqual([0]);
    expect(elements(view(data(0), [0, 3]))).toEqual([]);
    expect(elements(view(data(0), [3, 0]))).toEqual([]);
  });

  it('copies the shape, holds the data by reference', () => {
    const shape = [2, 2];
    const numbers = data(4);
    const made = view(numbers, shape);
    shape[0] = 9;
    expect(made.shape).toEqual([2, 2]);
    expect(made.data).toBe(numbers);
    expect(emptyView(numbers, [2, 2])).toEqual(made);
  });
});

describe('strided views', () => {
  it('walks column-major, reversed, transposed and offset views', () => {
    const numbers = data(6);
    const walk = (stride: number[], offset: number, shape = [2, 3]): number[] =>
      elements({ data: numbers, shape, stride, offset });
    expect(walk([1, 2], 0)).toEqual([0, 2, 4, 1, 3, 5]);
    expect(walk([-3, -1], 5)).toEqual([5, 4, 3, 2, 1, 0]);
    expect(walk([1, 3], 0, [3, 2])).toEqual([0, 3, 1, 4, 2, 5]);
    expect(walk([3, 1], 1, [1, 2])).toEqual([1, 2]);
    expect(walk([0, 1], 3, [3, 1])).toEqual([3, 3, 3]);
  });

  it('visits each element of a random strided view once, in row-major order (index arithmetic written apart)', () => {
    const shapes = fc.array(fc.integer({ min: 0, max: 4 }), { maxLength: 4 });
    fc.assert(
      fc.property(shapes, fc.infiniteStream(fc.boolean()), (shape, flips) => {
        const stride = rowMajorStride(shape);
        let offset = 0;
        const signed = stride.map((step, axis) => {
          if (!flips.next().value || shape[axis] === 0) return step;
          offset += (shape[axis]! - 1) * step;
          return -step;
        });
        const source: View = { data: data(sizeOf(shape)), shape, stride: signed, offset };
        checkView(source, 'view');
        const expected: number[] = [];
        for (let flat = 0; flat < sizeOf(shape); flat++) {
          let rest = flat;
          let at = offset;
          for (let axis = shape.length - 1; axis >= 0; axis--) {
            at += (rest % shape[axis]!) * signed[axis]!;
            rest = Math.floor(rest / shape[axis]!);
          }
          expected.push(at);
        }
        expect(elements(source)).toEqual(expected);
      }),
    );
  });

  it('keeps several operands in step', () => {
    const frame = view(data(12), [2, 2, 3]);
    const map = broadcast(view(data(6), [2, 3]), [2, 2, 3], 'emissivity');
    const starts: number[][] = [];
    forEachRow(frame.shape, [frame, map], (at, length) => {
      starts.push([...at, length]);
    });
    expect(starts).toEqual([
      [0, 0, 3],
      [3, 3, 3],
      [6, 0, 3],
      [9, 3, 3],
    ]);
  });
});

describe('broadcast', () => {
  it('lays a 2-D map over the last axes, and a map of the full shape as it is', () => {
    expect(broadcast(view(data(6), [2, 3]), [5, 2, 3], 'm')).toEqual({ stride: [0, 3, 1], offset: 0 });
    expect(broadcast(view(data(6), [2, 3]), [2, 3], 'm')).toEqual({ stride: [3, 1], offset: 0 });
    expect(broadcast(view(data(3), [3]), [3], 'm')).toEqual({ stride: [1], offset: 0 });
  });

  const refuse = (map: number[], shape: number[], says: string): BadInput => [
    `a map of [${map}] on [${shape}]`,
    () => broadcast(view(data(sizeOf(map)), map), shape, 'emissivity'),
    'wrong-shape',
    'emissivity',
    says,
  ];
  it.each([
    refuse([3, 2], [2, 3], 'a map of shape [2, 3], got [3, 2]'),
    refuse([2, 2], [5, 2, 3], 'a map of shape [2, 3] or [5, 2, 3]'),
    refuse([3], [2, 3], 'a map of shape [2, 3]'),
    refuse([4, 2, 3], [5, 2, 3], 'or [5, 2, 3], got [4, 2, 3]'),
    refuse([2, 2, 3], [2, 3], 'a map of shape [2, 3]'),
  ])('refuses %s', (...row) => expectRefused(row));
});

describe('recognising views', () => {
  it('goes by the four fields', () => {
    expect(isView(view(data(4), [2, 2]))).toBe(true);
    expect(isView({ data: [1], shape: [1], stride: [1], offset: 0 })).toBe(true);
    for (const other of [
      null,
      7,
      [],
      {},
      { data: 'x', shape: [], stride: [], offset: 0 },
      { data: new DataView(new ArrayBuffer(8)), shape: [], stride: [], offset: 0 },
      { data: [], shape: 1, stride: [], offset: 0 },
      { data: [], shape: [], stride: 1, offset: 0 },
      { data: [], shape: [], stride: [] },
    ]) {
      expect(isView(other)).toBe(false);
    }
  });

  it('compares shapes', () => {
    expect(sameShape([2, 3], [2, 3])).toBe(true);
    expect(sameShape([2, 3], [3, 2])).toBe(false);
    expect(sameShape([2], [2, 1])).toBe(false);
  });
});

const raw =
  (shape: unknown, stride: unknown, offset: unknown, count = 6) =>
  () =>
    checkView({ data: data(count), shape, stride, offset }, 'frame');
const refused: readonly BadInput[] = [
  ['no shape', () => view(data(4), untyped(undefined)), 'wrong-type', 'view', 'Write [rows, columns]'],
  ['a number for a shape', () => view(data(4), untyped(4)), 'wrong-type', 'view', 'expected a shape, got 4'],
  ['half a row', () => view(data(4), [2, 1.5]), 'wrong-shape', 'view', 'whole extents ≥ 0, got [2, 1.5]'],
  ['an extent of −1', () => view(data(4), [-1, 2]), 'wrong-shape', 'view', 'whole extents'],
  ['an extent of NaN', () => view(data(4), [Number.NaN]), 'wrong-shape', 'view', 'got [NaN]'],
  ['an extent as text', () => view(data(4), untyped(['2', 2])), 'wrong-shape', 'view', 'whole extents'],
  [
    'data too short',
    () => view(data(5), [2, 3]),
    'wrong-shape',
    'view',
    'The shape [2, 3] reaches outside the data.',
  ],
  [
    'a huge shape, before anything is allocated',
    () => view(data(5), [1e9, 1e9]),
    'wrong-shape',
    'view',
    '0…4',
  ],
  ['empty data', () => view(data(0), [1]), 'wrong-shape', 'view', 'reaches outside the data'],
  [
    'a text for data',
    () => view(untyped('data'), [4]),
    'wrong-type',
    'view',
    'Write view(data, [rows, columns])',
  ],
  ['null for data', () => view(untyped(null), [4]), 'wrong-type', 'view', '{ data, shape, stride, offset }'],
  [
    'BigInts',
    () => view(untyped(new BigInt64Array(4)), [4]),
    'wrong-type',
    'view',
    'Float64Array.from(data, Number)',
  ],
  ['unsigned BigInts', () => view(untyped(new BigUint64Array(4)), [4]), 'wrong-type', 'view', 'Number)'],
  [
    'a nested list',
    () => checkView([[1, 2]], 'frame'),
    'wrong-type',
    'frame',
    'Write view(data, [rows, columns])',
  ],
  ['null', () => checkView(null, 'frame'), 'wrong-type', 'frame', 'got null'],
  ['too few strides', raw([2, 3], [1], 0), 'wrong-shape', 'frame', '2 whole strides and a whole offset'],
  ['half a stride', raw([2, 3], [3, 0.5], 0), 'wrong-shape', 'frame', 'got [3, 0.5]'],
  ['an offset of NaN', raw([2, 3], [3, 1], Number.NaN), 'wrong-shape', 'frame', 'a whole offset'],
  ['an offset beyond the data', raw([2, 3], [3, 1], 1), 'wrong-shape', 'frame', 'got "1…6"'],
  ['a negative reach', raw([2, 3], [-3, 1], 0), 'wrong-shape', 'frame', 'got "-3…2"'],
  ['a shape with a fraction', raw([2, 0.5], [1, 1], 0), 'wrong-shape', 'frame', 'whole extents'],
  [
    'no shape for strides',
    () => rowMajorStride(untyped(undefined)),
    'wrong-type',
    'shape',
    'Write [rows, columns]',
  ],
  ['strides of −1', () => rowMajorStride([-1]), 'wrong-shape', 'shape', 'whole extents ≥ 0'],
];

describe('views refuse bad input', () => {
  it.each(refused)('%s', (...row) => expectRefused(row));
});
