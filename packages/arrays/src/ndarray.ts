/**
 * Frames as an array of the ndarray package, or as a plain view where ndarray cannot work.
 *
 * ndarray compiles its constructors with `new Function`, which a strict content security policy refuses. The plain
 * view has the same fields and is taken by every call of this library; only the methods are missing.
 */
import type { View } from '@graybody/core';
import ndarray from 'ndarray';
import type { ElementArray } from './element-type.js';

/**
 * A strided array. Its methods are those of the ndarray package; under a content security policy that refuses
 * `new Function` they are absent, which `Frames.warnings` says.
 */
export interface FrameArray<Data extends ElementArray = ElementArray> extends View<Data> {
  readonly data: Data;
  readonly shape: number[];
  readonly stride: number[];
  readonly offset: number;
  readonly dtype: string;
  readonly size: number;
  readonly dimension: number;
  get(...index: number[]): number;
  set(...indexAndValue: number[]): number;
  index(...index: number[]): number;
  lo(...from: number[]): FrameArray<Data>;
  hi(...to: number[]): FrameArray<Data>;
  step(...by: number[]): FrameArray<Data>;
  transpose(...axes: number[]): FrameArray<Data>;
  pick(...index: (number | null)[]): FrameArray<Data>;
}

/** What is said when ndarray's methods are missing. */
export const withoutMethods: string =
  'A content security policy refuses `new Function`, so the array has no ndarray methods: read array.data with array.shape, array.stride and array.offset.';

/** A row-major array; `plain` when ndarray could not construct it. */
export function frameArray(
  data: ElementArray,
  shape: readonly number[],
): { array: FrameArray; plain: boolean } {
  try {
    return { array: ndarray(data, [...shape]) as unknown as FrameArray, plain: false };
  } catch {
    const stride = shape.map((_, axis) => shape.slice(axis + 1).reduce((step, extent) => step * extent, 1));
    const dtype = data.constructor.name.replace('Array', '').toLowerCase();
    const view = { data, shape: [...shape], stride, offset: 0, dtype };
    return { array: view as unknown as FrameArray, plain: true };
  }
}
