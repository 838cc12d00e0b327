import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  ellipse,
  mapFromRegions,
  maskRegion,
  type Place,
  polygon,
  type Region,
  rectangle,
  regionMask,
  view,
} from '../src/index.js';
import { checkedRegion, regionBounds } from '../src/regions.js';
import { flat, laidOut, refused } from './support/measurement.js';

const grid = (text: string): number[] => [...text.replace(/\s/g, '')].map((mark) => (mark === '#' ? 1 : 0));

/** Whether a place lies inside a triangle, by the side of each edge; places on an edge are left to other tests. */
function inTriangle(
  [a, b, c]: readonly [Place, Place, Place],
  row: number,
  column: number,
): boolean | 'edge' {
  const side = (p: Place, q: Place): number =>
    (q.row - p.row) * (column - p.column) - (q.column - p.column) * (row - p.row);
  const sides = [side(a, b), side(b, c), side(c, a)];
  if (sides.some((value) => value === 0)) return 'edge';
  return sides.every((value) => value > 0) || sides.every((value) => value < 0);
}

describe('the convention: pixel (r, c) has its centre at (r, c) and covers r ± 0.5, c ± 0.5', () => {
  it('rectangle(10, 20, 5, 8) covers rows 10–14, columns 20–27', () => {
    const mask = regionMask(rectangle(10, 20, 5, 8), [30, 40]);
    expect(mask.data).toBeInstanceOf(Uint8Array);
    for (let row = 0; row < 30; row++) {
      for (let column = 0; column < 40; column++) {
        const inside = row >= 10 && row <= 14 && column >= 20 && column <= 27;
        expect(mask.data[row * 40 + column]).toBe(inside ? 1 : 0);
      }
    }
  });

  it('a rectangle of fractions has the pixels whose centres it covers, its near edge with it and its far edge not', () => {
    // From row 0.5 − 0.5 = 0 to 2.5 − … : [0, 2) holds centres 0 and 1, not 2.
    expect(flat(regionMask(rectangle(0.5, 0.5, 2, 2), [3, 3]))).toEqual(grid('##. ##. ...'));
    expect(flat(regionMask(rectangle(0.6, 0.4, 1.2, 0.8), [3, 3]))).toEqual(grid('... #.. ...'));
    expect(flat(regionMask(rectangle(1.2, 1.2, 0.2, 0.2), [3, 3]))).toEqual(grid('... ... ...'));
  });

  it('rectangles that share an edge have every centre once', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1, max: 6, noNaN: true }),
        fc.double({ min: 0.1, max: 4, noNaN: true }),
        fc.double({ min: 0.1, max: 4, noNaN: true }),
        (row, first, second) => {
          // The shared edge is one number, computed once, as a caller would have it.
          const a = flat(regionMask(rectangle(row, 0, first, 8), [8, 8]));
          const b = flat(regionMask(rectangle(row + first, 0, second, 8), [8, 8]));
          expect(a.some((value, i) => value + b[i]! > 1)).toBe(false);
        },
      ),
    );
    const halves = [rectangle(0, 0, 3.5, 6), rectangle(3.5, 0, 2.5, 6)].map((region) =>
      flat(regionMask(region, [6, 6])),
    );
    expect(halves[0]!.map((value, i) => value + halves[1]![i]!)).toEqual(new Array(36).fill(1));
  });

  it('an ellipse has the centres within it, its rim too', () => {
    expect(flat(regionMask(ellipse({ row: 2, column: 2 }, { row: 2, column: 1 }), [5, 5]))).toEqual(
      grid('..#.. ..#.. .###. ..#.. ..#..'),
    );
    fc.assert(
      fc.property(
        fc.double({ min: -2, max: 12, noNaN: true }),
        fc.double({ min: -2, max: 12, noNaN: true }),
        fc.double({ min: 0.2, max: 8, noNaN: true }),
        fc.double({ min: 0.2, max: 8, noNaN: true }),
        (row, column, height, width) => {
          const mask = flat(regionMask(ellipse({ row, column }, { row: height, column: width }), [10, 11]));
          mask.forEach((value, i) => {
            const distance = Math.hypot((Math.floor(i / 11) - row) / height, ((i % 11) - column) / width);
            if (Math.abs(distance - 1) > 1e-9) expect(value).toBe(distance < 1 ? 1 : 0);
          });
        },
      ),
    );
  });

  it('a mask has the pixels that are not 0, whatever its layout', () => {
    const values = [0, 1, 2, 0, -1, 0];
    const strided = laidOut(values, [2, 3], (length) => new Int16Array(length), {
      order: 'F',
      reversed: [0, 1],
    });
    expect(flat(regionMask(maskRegion(strided), [2, 3]))).toEqual([0, 1, 1, 0, 1, 0]);
  });
});

describe('polygons', () => {
  const corner = fc.record({
    row: fc.integer({ min: -3, max: 13 }),
    column: fc.integer({ min: -3, max: 13 }),
  });

  it('a triangle has the centres on the inner side of its edges', () => {
    fc.assert(
      fc.property(fc.tuple(corner, corner, corner), (points) => {
        const mask = flat(regionMask(polygon(points), [10, 11]));
        mask.forEach((value, i) => {
          const expected = inTriangle(points, Math.floor(i / 11), i % 11);
          if (expected !== 'edge') expect(value).toBe(expected ? 1 : 0);
        });
      }),
      { numRuns: 300 },
    );
  });

  it('two that share an edge have every centre on it once: a fan of triangles covers a square like the square', () => {
    const ring: Place[] = [
      { row: 0, column: 0 },
      { row: 0, column: 98 },
      { row: 98, column: 98 },
      { row: 98, column: 0 },
    ];
    const whole = flat(regionMask(polygon(ring), [99, 99]));
    const inner = fc.integer({ min: 1, max: 97 });
    // Inner points on pixel centres put many centres exactly on an edge; both neighbours walk it in turn.
    fc.assert(
      fc.property(inner, inner, (row, column) => {
        const sum = new Array<number>(99 * 99).fill(0);
        ring.forEach((point, i) => {
          const part = polygon([point, ring[(i + 1) % 4]!, { row, column }]);
          flat(regionMask(part, [99, 99])).forEach((value, k) => {
            sum[k]! += value;
          });
        });
        expect(sum.findIndex((value, i) => value !== whole[i])).toBe(-1);
      }),
    );
  });

  it('cut along any line through pixel centres: each centre to one part', () => {
    const outline = (points: Place[]) => flat(regionMask(polygon(points), [8, 8]));
    const whole = outline([
      { row: -1, column: -1 },
      { row: -1, column: 8 },
      { row: 8, column: 8 },
      { row: 8, column: -1 },
    ]);
    expect(whole).toEqual(new Array(64).fill(1));
    for (const [top, bottom] of [
      [3, 3],
      [0, 7],
      [7, 0],
      [2, 5],
    ] as const) {
      const left = outline([
        { row: -1, column: -1 },
        { row: -1, column: top },
        { row: 8, column: bottom },
        { row: 8, column: -1 },
      ]);
      const right = outline([
        { row: -1, column: 8 },
        { row: -1, column: top },
        { row: 8, column: bottom },
        { row: 8, column: 8 },
      ]);
      expect(left.map((value, i) => value + right[i]!)).toEqual(whole);
    }
  });

  it('crossing itself: the even–odd rule leaves the middle of a five-pointed star out', () => {
    const star = Array.from({ length: 5 }, (_, k) => {
      const angle = (4 * Math.PI * k) / 5 + 0.1;
      return { row: 20 + 18 * Math.cos(angle), column: 20 + 18 * Math.sin(angle) };
    });
    const mask = regionMask(polygon(star), [41, 41]);
    expect(mask.data[20 * 41 + 20]).toBe(0);
    const [tip] = star;
    const near = {
      row: Math.round(20 + (tip!.row - 20) * 0.7),
      column: Math.round(20 + (tip!.column - 20) * 0.7),
    };
    expect(mask.data[near.row * 41 + near.column]).toBe(1);
  });

  it('the order and the start of the points do not matter', () => {
    fc.assert(
      fc.property(fc.array(corner, { minLength: 3, maxLength: 7 }), fc.nat(6), (points, turn) => {
        const at = turn % points.length;
        const turned = [...points.slice(at), ...points.slice(0, at)].reverse();
        expect(flat(regionMask(polygon(turned), [10, 10]))).toEqual(
          flat(regionMask(polygon(points), [10, 10])),
        );
      }),
    );
  });
});

describe('bounds', () => {
  it('no pixel of a region lies outside them', () => {
    const place = fc.record({
      row: fc.double({ min: -5, max: 15, noNaN: true }),
      column: fc.double({ min: -5, max: 15, noNaN: true }),
    });
    const size = fc.double({ min: 0.1, max: 9, noNaN: true });
    const any: fc.Arbitrary<Region> = fc.oneof(
      fc.tuple(place, size, size).map(([at, height, width]) => rectangle(at.row, at.column, height, width)),
      fc.tuple(place, size, size).map(([at, row, column]) => ellipse(at, { row, column })),
      fc.array(place, { minLength: 3, maxLength: 6 }).map(polygon),
    );
    fc.assert(
      fc.property(any, (region) => {
        const big = regionMask(region, [12, 12]);
        const { rows, columns } = regionBounds(region, [12, 12]);
        flat(big).forEach((value, i) => {
          const [row, column] = [Math.floor(i / 12), i % 12];
          const within = row >= rows[0] && row <= rows[1] && column >= columns[0] && column <= columns[1];
          if (value === 1) expect(within).toBe(true);
        });
      }),
    );
  });
});

describe('mapFromRegions', () => {
  it('has the background outside and the value of the later region inside', () => {
    const map = mapFromRegions([3, 4], 0.93, [
      { region: rectangle(0, 0, 2, 3), value: 0.7 },
      { region: rectangle(1, 1, 2, 2), value: 0.4 },
    ]);
    expect(map.data).toBeInstanceOf(Float64Array);
    expect(flat(map)).toEqual([0.7, 0.7, 0.7, 0.93, 0.7, 0.4, 0.4, 0.93, 0.93, 0.4, 0.4, 0.93]);
    expect(flat(mapFromRegions([2, 0], 1, []))).toEqual([]);
  });
});

describe('bad input', () => {
  const shape = [4, 4] as const;

  it('numbers', () => {
    refused(() => rectangle(0, 0, 0, 2), 'out-of-range', 'region.height', '> 0');
    refused(() => rectangle(0, 0, 2, -1), 'out-of-range', 'region.width');
    refused(() => rectangle('0' as never, 0, 1, 1), 'wrong-type', 'region.row', '"0"');
    refused(() => rectangle(0, Number.NaN, 1, 1), 'not-finite', 'region.column');
    refused(
      () => ellipse({ row: 0, column: 0 }, { row: 0, column: 1 }),
      'out-of-range',
      'region.semiAxes.row',
    );
    refused(() => ellipse({ row: 0 } as never, { row: 1, column: 1 }), 'wrong-type', 'region.centre.column');
    refused(() => ellipse(5 as never, { row: 1, column: 1 }), 'wrong-type', 'region.centre', 'row, column');
    refused(() => polygon([{ row: 0, column: 0 }]), 'wrong-type', 'region.points', 'three or more points');
    refused(() => polygon('abc' as never), 'wrong-type', 'region.points');
    refused(
      () =>
        polygon([
          { row: 0, column: 0 },
          { row: 1, column: 0 },
          { row: Number.POSITIVE_INFINITY, column: 1 },
        ]),
      'not-finite',
      'region.points[2].row',
    );
  });

  it('plain data: kinds and keys', () => {
    refused(
      () => regionMask({ kind: 'rectangel' } as never, shape),
      'out-of-range',
      'region.kind',
      "Did you mean 'rectangle'?",
    );
    refused(() => regionMask(null as never, shape), 'wrong-type', 'region.kind', "'ellipse'");
    refused(() => regionMask(undefined as never, shape), 'wrong-type', 'region.kind');
    refused(
      () => regionMask({ kind: 'rectangle', row: 0, column: 0, heigth: 1, width: 1 } as never, shape),
      'unknown-key',
      'region.heigth',
      "Did you mean 'height'?",
    );
    refused(
      () => polygon([{ row: 0, colum: 1 } as never, { row: 1, column: 0 }, { row: 2, column: 2 }]),
      'unknown-key',
      'region.points[0].colum',
      "'column'",
    );
    expect(checkedRegion({ kind: 'rectangle', row: 0, column: 0, height: 1, width: 1 })).toEqual(
      rectangle(0, 0, 1, 1),
    );
  });

  it('masks', () => {
    refused(() => maskRegion([1, 0] as never), 'wrong-type', 'region.mask', 'a view');
    refused(() => maskRegion(view([1, 0], [2])), 'wrong-shape', 'region.mask', '(row, column)');
    refused(
      () => regionMask(maskRegion(view([1, 0], [1, 2])), shape),
      'wrong-shape',
      'region.mask',
      '[4, 4]',
      '[1, 2]',
    );
  });

  it('shapes and lists of values', () => {
    for (const bad of [[-1, 2], [2.5, 2], [3], [1, 2, 3], undefined, 4]) {
      refused(
        () => regionMask(rectangle(0, 0, 1, 1), bad as never),
        'wrong-shape',
        'shape',
        '[rows, columns]',
      );
      refused(() => mapFromRegions(bad as never, 1, []), 'wrong-shape', 'shape', '[rows, columns]');
    }
    refused(() => mapFromRegions(shape, Number.NaN, []), 'not-finite', 'background');
    refused(() => mapFromRegions(shape, 1, undefined as never), 'wrong-type', 'values', '{ region, value }');
    refused(() => mapFromRegions(shape, 1, [undefined] as never), 'wrong-type', 'values[0]');
    refused(
      () => mapFromRegions(shape, 1, [{ region: rectangle(0, 0, 1, 1), value: '1' as never }]),
      'wrong-type',
      'values[0].value',
    );
    refused(
      () => mapFromRegions(shape, 1, [{ region: { kind: 'ellipse' } as never, value: 1 }]),
      'wrong-type',
      'values[0].region.centre',
    );
    refused(
      () => mapFromRegions(shape, 1, [{ region: rectangle(0, 0, 1, 1), valeu: 1 } as never]),
      'unknown-key',
      'values[0].valeu',
      "'value'",
    );
  });
});
