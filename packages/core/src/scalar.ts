/**
 * A value that is one number for a whole frame, or a map with one number a pixel.
 */
import { finiteNumber } from './check.js';
import { MeasurementError } from './errors.js';
import type { AnyKelvin } from './units.js';
import { checkView, isView, type View } from './view.js';

/**
 * A number, or a per-pixel map of it: 2-D (row, column), used for every frame, or of the frame's full shape.
 * Maps are held by reference; a cell that is NaN or out of range gives its pixel a reason code.
 */
export type Scalar = number | View;

/** A temperature in kelvin, or a per-pixel map of it. */
export type TemperatureScalar = AnyKelvin | View;

/** A place in a frame. */
export interface Pixel {
  readonly row: number;
  readonly column: number;
  /** Needed only where a map has a frame axis. */
  readonly frame?: number;
}

/** Checks a number with `check`; a map is checked as a view only, its cells when they are read. */
export function scalar<T extends Scalar>(
  value: unknown,
  path: string,
  check: (value: unknown, path: string) => number,
): T {
  if (isView(value)) {
    checkView(value, path);
    if (value.shape.length >= 2) return value as unknown as T;
    throw new MeasurementError('wrong-shape', {
      path,
      expected: 'a map of two axes (row, column) or of the frame’s shape',
      received: value.shape,
    });
  }
  return check(value, path) as T;
}

/** Position of a pixel in a map. */
export function mapIndex(map: View, pixel: Pixel, path: string): number {
  if (typeof pixel !== 'object' || pixel === null) {
    throw new MeasurementError('wrong-type', {
      path: 'pixel',
      expected: 'a pixel { row, column }',
      received: pixel,
    });
  }
  const place = [pixel.frame, pixel.row, pixel.column].slice(map.shape.length === 2 ? 1 : 0);
  let index = map.offset;
  for (let axis = 0; axis < map.shape.length; axis++) {
    const at = place[axis];
    if (at === undefined || !Number.isInteger(at) || at < 0 || at >= map.shape[axis]!) {
      throw new MeasurementError('out-of-range', {
        path,
        expected: `a pixel within [${map.shape.join(', ')}]`,
        received: `[${place.join(', ')}]`,
      });
    }
    index += at * map.stride[axis]!;
  }
  return index;
}

/** The value of a scalar at a pixel; a map without a pixel throws. */
export function scalarAt(value: Scalar, pixel: Pixel | undefined, path: string): number {
  if (typeof value === 'number') return value;
  if (pixel === undefined) {
    throw new MeasurementError('needs-pixel', {
      path,
      expected: 'a pixel { row, column }, because this input is a map',
      hint: 'Use model.at({ row, column }).',
    });
  }
  return finiteNumber(value.data[mapIndex(value, pixel, path)], `${path}[${pixel.row}][${pixel.column}]`);
}
