/**
 * Regions of a frame in pixel coordinates, masks of them, and maps built from them.
 *
 * Convention: pixel (r, c) has its centre at row r, column c and covers r ± 0.5, c ± 0.5, row 0 first. A pixel
 * belongs to a region when its centre does; of two regions that share an edge only one gets a centre on it.
 */
import { finiteNumber, oneOf, plainObject, positive } from './check.js';
import { MeasurementError } from './errors.js';
import { checkView, sameShape, type View, view } from './view.js';

/** A place between pixels: fractional rows and columns. */
export interface Place {
  readonly row: number;
  readonly column: number;
}

/** A part of a frame, as plain data. */
export type Region =
  | {
      readonly kind: 'rectangle';
      /** First pixel. */
      readonly row: number;
      readonly column: number;
      /** Extent in pixels, > 0. */
      readonly height: number;
      readonly width: number;
    }
  | {
      readonly kind: 'ellipse';
      readonly centre: Place;
      /** Half of the height and of the width, in pixels. */
      readonly semiAxes: Place;
    }
  | { readonly kind: 'polygon'; readonly points: readonly Place[] }
  | {
      readonly kind: 'mask';
      /** (row, column); a pixel belongs to it where the value is not 0. */
      readonly mask: View;
    };

/**
 * A rectangle of pixels: rectangle(10, 20, 5, 8) covers rows 10–14, columns 20–27.
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite`; `out-of-range` for an extent that is not above 0.
 */
export function rectangle(row: number, column: number, height: number, width: number): Region {
  return checkedRegion({ kind: 'rectangle', row, column, height, width });
}

/** An ellipse about a centre, its axes along rows and columns. */
export function ellipse(centre: Place, semiAxes: Place): Region {
  return checkedRegion({ kind: 'ellipse', centre, semiAxes });
}

/** A polygon of three or more points; where it crosses itself the even–odd rule holds. */
export function polygon(points: readonly Place[]): Region {
  return checkedRegion({ kind: 'polygon', points });
}

/** The pixels where a (row, column) view is not 0. Held by reference. */
export function maskRegion(mask: View): Region {
  return checkedRegion({ kind: 'mask', mask });
}

/**
 * Checks a region given as plain data.
 *
 * @throws {MeasurementError} `wrong-type`, `out-of-range`, `not-finite`, `unknown-key`, `wrong-shape`.
 */
export function checkedRegion(region: unknown, path = 'region'): Region {
  const kinds = ['rectangle', 'ellipse', 'polygon', 'mask'] as const;
  const kind = oneOf((region as { kind?: unknown } | null | undefined)?.kind, `${path}.kind`, kinds);
  switch (kind) {
    case 'rectangle': {
      const given = plainObject(region, path, ['kind', 'row', 'column', 'height', 'width']);
      for (const key of ['row', 'column']) finiteNumber(given[key], `${path}.${key}`);
      for (const key of ['height', 'width']) positive(given[key], `${path}.${key}`);
      break;
    }
    case 'ellipse': {
      const given = plainObject(region, path, ['kind', 'centre', 'semiAxes']);
      checkPlace(given.centre, `${path}.centre`, finiteNumber);
      checkPlace(given.semiAxes, `${path}.semiAxes`, positive);
      break;
    }
    case 'polygon': {
      const { points } = plainObject(region, path, ['kind', 'points']);
      if (!Array.isArray(points) || points.length < 3) {
        throw new MeasurementError('wrong-type', {
          path: `${path}.points`,
          expected: 'three or more points { row, column }',
          received: points,
        });
      }
      points.forEach((point, i) => {
        checkPlace(point, `${path}.points[${i}]`, finiteNumber);
      });
      break;
    }
    case 'mask': {
      const { mask } = plainObject(region, path, ['kind', 'mask']);
      checkView(mask, `${path}.mask`);
      if (mask.shape.length !== 2) {
        throw new MeasurementError('wrong-shape', {
          path: `${path}.mask`,
          expected: '(row, column)',
          received: mask.shape,
        });
      }
    }
  }
  return Object.freeze(region as Region);
}

/** Whether a place belongs to a region. */
function contains(region: Region, row: number, column: number): boolean {
  switch (region.kind) {
    case 'rectangle': {
      const [r, c] = [row - (region.row - 0.5), column - (region.column - 0.5)];
      return r >= 0 && r < region.height && c >= 0 && c < region.width;
    }
    case 'ellipse': {
      const { centre, semiAxes } = region;
      return (
        ((row - centre.row) / semiAxes.row) ** 2 + ((column - centre.column) / semiAxes.column) ** 2 <= 1
      );
    }
    case 'polygon':
      return insidePolygon(region.points, row, column);
    case 'mask': {
      const { data, stride, offset } = region.mask;
      return data[offset + row * stride[0]! + column * stride[1]!] !== 0;
    }
  }
}

/** Even–odd rule: how many edges a ray along the row crosses. An edge owns its upper end, not its lower one. */
function insidePolygon(points: readonly Place[], row: number, column: number): boolean {
  let inside = false;
  points.forEach((b, i) => {
    const a = points[(i + points.length - 1) % points.length]!;
    if (a.row > row === b.row > row) return;
    // From the upper end whichever way the edge is walked: two polygons that share it must round alike.
    const [top, bottom] = a.row < b.row ? [a, b] : [b, a];
    const left =
      (column - top.column) * (bottom.row - top.row) < (row - top.row) * (bottom.column - top.column);
    if (left) inside = !inside;
  });
  return inside;
}

/** First and last row and column a region can have pixels in, within a frame. */
export interface PixelBounds {
  readonly rows: readonly [first: number, last: number];
  readonly columns: readonly [first: number, last: number];
}

/** Bounds of a region clipped to a frame; `last < first` where nothing of it is inside. */
export function regionBounds(region: Region, [rows, columns]: readonly [number, number]): PixelBounds {
  const extent = (): [top: number, bottom: number, left: number, right: number] => {
    switch (region.kind) {
      case 'rectangle':
        return [
          region.row - 0.5,
          region.row - 0.5 + region.height,
          region.column - 0.5,
          region.column - 0.5 + region.width,
        ];
      case 'ellipse': {
        const { centre, semiAxes } = region;
        return [
          centre.row - semiAxes.row,
          centre.row + semiAxes.row,
          centre.column - semiAxes.column,
          centre.column + semiAxes.column,
        ];
      }
      case 'polygon': {
        let box: [number, number, number, number] = [Infinity, -Infinity, Infinity, -Infinity];
        for (const { row, column } of region.points) {
          box = [
            Math.min(box[0], row),
            Math.max(box[1], row),
            Math.min(box[2], column),
            Math.max(box[3], column),
          ];
        }
        return box;
      }
      case 'mask':
        return [0, rows - 1, 0, columns - 1];
    }
  };
  const [top, bottom, left, right] = extent();
  return {
    rows: [Math.max(0, Math.ceil(top)), Math.min(rows - 1, Math.floor(bottom))],
    columns: [Math.max(0, Math.ceil(left)), Math.min(columns - 1, Math.floor(right))],
  };
}

/**
 * Calls `visit` for every pixel of a region that lies inside a frame, row by row.
 *
 * @throws {MeasurementError} `wrong-shape` when a mask has another shape than the frame.
 */
export function forEachPixel(
  region: Region,
  shape: readonly [rows: number, columns: number],
  visit: (row: number, column: number) => void,
): void {
  checkMaskFits(region, shape, 'region');
  const { rows, columns } = regionBounds(region, shape);
  for (let row = rows[0]; row <= rows[1]; row++) {
    for (let column = columns[0]; column <= columns[1]; column++) {
      if (contains(region, row, column)) visit(row, column);
    }
  }
}

/** Throws where a mask has another shape than the frame. */
export function checkMaskFits(region: Region, shape: readonly number[], path: string): void {
  if (region.kind !== 'mask' || sameShape(region.mask.shape, shape)) return;
  throw new MeasurementError('wrong-shape', {
    path: `${path}.mask`,
    expected: `the shape of the frame, [${shape.join(', ')}]`,
    received: region.mask.shape,
  });
}

/**
 * The mask of a region: 1 inside, 0 outside.
 *
 * @param shape - Rows and columns of the frame.
 * @returns uint8 view (row, column).
 * @throws {MeasurementError} as {@link rectangle}; `wrong-shape`.
 */
export function regionMask(
  region: Region,
  shape: readonly [rows: number, columns: number],
): View<Uint8Array> {
  checkPlane(shape);
  const mask = view(new Uint8Array(shape[0] * shape[1]), shape);
  forEachPixel(checkedRegion(region), shape, (row, column) => {
    mask.data[row * shape[1] + column] = 1;
  });
  return mask;
}

/**
 * A per-pixel map with one value in each region; where regions overlap the later one holds.
 *
 * @param shape - Rows and columns of the frame.
 * @param background - Value outside all regions.
 * @returns float64 view (row, column), to be used as emissivity, transmittance, temperature …
 * @throws {MeasurementError} as {@link rectangle}; `wrong-shape`.
 * @example
 * mapFromRegions([120, 160], 0.93, [{ region: rectangle(10, 20, 5, 8), value: 0.78 }])
 */
export function mapFromRegions(
  shape: readonly [rows: number, columns: number],
  background: number,
  values: readonly { readonly region: Region; readonly value: number }[],
): View<Float64Array> {
  checkPlane(shape);
  const map = view(new Float64Array(shape[0] * shape[1]).fill(finiteNumber(background, 'background')), shape);
  if (!Array.isArray(values)) {
    throw new MeasurementError('wrong-type', {
      path: 'values',
      expected: 'an array of { region, value }',
      received: values,
    });
  }
  values.forEach((given: unknown, i) => {
    const { region, value } = plainObject(given, `values[${i}]`, ['region', 'value']) as {
      region: Region;
      value: number;
    };
    finiteNumber(value, `values[${i}].value`);
    forEachPixel(checkedRegion(region, `values[${i}].region`), shape, (row, column) => {
      map.data[row * shape[1] + column] = value;
    });
  });
  return map;
}

function checkPlane(shape: unknown): void {
  const whole = (extent: unknown): boolean => Number.isInteger(extent) && (extent as number) >= 0;
  if (Array.isArray(shape) && shape.length === 2 && shape.every(whole)) return;
  throw new MeasurementError('wrong-shape', {
    path: 'shape',
    expected: '[rows, columns], whole numbers ≥ 0',
    received: shape,
  });
}

function checkPlace(value: unknown, path: string, check: (value: unknown, path: string) => number): void {
  const { row, column } = plainObject(value, path, ['row', 'column']);
  check(row, `${path}.row`);
  check(column, `${path}.column`);
}
