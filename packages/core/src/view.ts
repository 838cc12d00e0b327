/**
 * Strided n-dimensional views, structurally those of the ndarray package, which core never imports.
 *
 * Kernels meet negative strides, offsets, column-major order and 0-d views; extents are checked against the
 * data here, once, before any loop runs.
 */
import { MeasurementError } from './errors.js';

/** Typed arrays a view may rest on. Views on plain arrays are taken too. */
export type NumericArray =
  | Float32Array
  | Float64Array
  | Int8Array
  | Uint8Array
  | Uint8ClampedArray
  | Int16Array
  | Uint16Array
  | Int32Array
  | Uint32Array
  | number[];

/** A strided view: element (i, j, …) is `data[offset + i·stride[0] + j·stride[1] + …]`. */
export interface View<Data extends NumericArray = NumericArray> {
  readonly data: Data;
  readonly shape: readonly number[];
  readonly stride: readonly number[];
  readonly offset: number;
}

/**
 * Strides of a row-major (C order) array.
 *
 * @throws {MeasurementError} `wrong-type` when the shape is not a list, `wrong-shape` for an extent that is not a
 *   whole number ≥ 0.
 */
export function rowMajorStride(shape: readonly number[]): number[] {
  checkShape(shape, 'shape');
  const stride = new Array<number>(shape.length);
  let step = 1;
  for (let axis = shape.length - 1; axis >= 0; axis--) {
    stride[axis] = step;
    step *= shape[axis]!;
  }
  return stride;
}

/** Number of elements of a shape. */
export function sizeOf(shape: readonly number[]): number {
  return shape.reduce((product, extent) => product * extent, 1);
}

/**
 * A row-major view of a flat array.
 *
 * @param data - The elements, row by row; at least as many as the shape holds.
 * @param shape - Extents, e.g. `[rows, columns]` or `[frames, rows, columns]`.
 * @throws {MeasurementError} `wrong-type` for what is no list of numbers; `wrong-shape` when the data is too short
 *   or an extent is not a whole number ≥ 0.
 */
export function view<Data extends NumericArray>(data: Data, shape: readonly number[]): View<Data> {
  checkShape(shape, 'view');
  const result = emptyView(data, shape);
  checkView(result, 'view');
  return result;
}

/** A row-major view of data that has exactly the elements of the shape. */
export function emptyView<Data extends NumericArray>(data: Data, shape: readonly number[]): View<Data> {
  return { data, shape: [...shape], stride: rowMajorStride(shape), offset: 0 };
}

/** Whether a value has the four fields of a view. */
export function isView(value: unknown): value is View {
  if (typeof value !== 'object' || value === null) return false;
  const { data, shape, stride, offset } = value as Partial<View>;
  return (
    (Array.isArray(data) || (ArrayBuffer.isView(data) && !(data instanceof DataView))) &&
    Array.isArray(shape) &&
    Array.isArray(stride) &&
    typeof offset === 'number'
  );
}

/**
 * Checks a view's fields against each other and against its data.
 *
 * @throws {MeasurementError} `wrong-type` when it is not a view, `wrong-shape` when it reaches outside its data.
 */
export function checkView(value: unknown, path: string): asserts value is View {
  if (!isView(value)) {
    throw new MeasurementError('wrong-type', {
      path,
      expected: 'a view { data, shape, stride, offset }',
      received: value,
      hint: 'Write view(data, [rows, columns]) for a flat row-major array.',
    });
  }
  const { data, shape, stride, offset } = value;
  if (data instanceof BigInt64Array || data instanceof BigUint64Array) {
    throw new MeasurementError('wrong-type', {
      path,
      expected: 'data of numbers',
      received: data,
      hint: 'Write Float64Array.from(data, Number).',
    });
  }
  checkShape(shape, path);
  if (stride.length !== shape.length || !stride.every(Number.isInteger) || !Number.isInteger(offset)) {
    throw new MeasurementError('wrong-shape', {
      path,
      expected: `${shape.length} whole strides and a whole offset`,
      received: stride,
    });
  }
  if (shape.includes(0)) return;
  let lowest = offset;
  let highest = offset;
  for (let axis = 0; axis < shape.length; axis++) {
    const reach = (shape[axis]! - 1) * stride[axis]!;
    if (reach < 0) lowest += reach;
    else highest += reach;
  }
  if (lowest < 0 || highest >= data.length) {
    throw new MeasurementError('wrong-shape', {
      path,
      expected: `elements within 0…${data.length - 1}`,
      received: `${lowest}…${highest}`,
      hint: `The shape [${shape.join(', ')}] reaches outside the data.`,
    });
  }
}

function checkShape(shape: unknown, path: string): void {
  const hint = 'Write [rows, columns] or [frames, rows, columns].';
  if (!Array.isArray(shape)) {
    throw new MeasurementError('wrong-type', { path, expected: 'a shape', received: shape, hint });
  }
  if (shape.every((extent) => Number.isInteger(extent) && extent >= 0)) return;
  throw new MeasurementError('wrong-shape', { path, expected: 'whole extents ≥ 0', received: shape, hint });
}

/** Whether two shapes are the same. */
export function sameShape(a: readonly number[], b: readonly number[]): boolean {
  return a.length === b.length && a.every((extent, axis) => extent === b[axis]);
}

/** A view with its strides laid over the axes of a frame: axes it does not have step by 0. */
export interface Operand {
  readonly stride: readonly number[];
  readonly offset: number;
}

/** Lays a map over the last axes of a frame's shape. */
export function broadcast(map: View, shape: readonly number[], path: string): Operand {
  const missing = shape.length - map.shape.length;
  if (
    missing >= 0 &&
    sameShape(map.shape, shape.slice(missing)) &&
    (missing === 0 || map.shape.length === 2)
  ) {
    return { stride: [...new Array<number>(missing).fill(0), ...map.stride], offset: map.offset };
  }
  throw new MeasurementError('wrong-shape', {
    path,
    expected: `a map of shape [${shape.slice(-2).join(', ')}]${shape.length > 2 ? ` or [${shape.join(', ')}]` : ''}`,
    received: map.shape,
  });
}

/**
 * Walks a shape row by row: `visit` gets the start of the row in every operand and the row's length; it steps by
 * the operand's last stride.
 */
export function forEachRow(
  shape: readonly number[],
  operands: readonly Operand[],
  visit: (starts: readonly number[], length: number) => void,
): void {
  if (shape.includes(0)) return;
  const starts = operands.map((operand) => operand.offset);
  const length = shape.at(-1) ?? 1;
  const outer = shape.slice(0, -1);
  const index = outer.map(() => 0);
  for (;;) {
    visit(starts, length);
    let axis = outer.length - 1;
    for (; axis >= 0; axis--) {
      const wraps = index[axis]! + 1 === outer[axis]!;
      const by = wraps ? -index[axis]! : 1;
      operands.forEach((operand, i) => {
        starts[i]! += by * operand.stride[axis]!;
      });
      index[axis]! += by;
      if (!wraps) break;
    }
    if (axis < 0) return;
  }
}
