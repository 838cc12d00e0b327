/**
 * Types of the stored numbers, and bytes of either order to typed arrays and back.
 */
import { ArrayError } from './errors.js';

/** Typed arrays that numbers are read into. 64-bit integers become float64, exactly. */
export type ElementArray =
  | Float32Array
  | Float64Array
  | Int8Array
  | Uint8Array
  | Int16Array
  | Uint16Array
  | Int32Array
  | Uint32Array;

/** Types of numbers in a file. */
export const dataTypes = [
  'float16',
  'float32',
  'float64',
  'int8',
  'uint8',
  'int16',
  'uint16',
  'int32',
  'uint32',
  'int64',
  'uint64',
] as const;

/** A type of numbers in a file. */
export type DataType = (typeof dataTypes)[number];

/** Bytes of one number. */
export function bytesPerElement(type: DataType): number {
  return Number(/\d+$/.exec(type)![0]) / 8;
}

/** Whether a type is a floating point type. */
export function isFloat(type: DataType): boolean {
  return type.startsWith('float');
}

/** A type that has a typed array of its own. */
export type ArrayType = Exclude<DataType, 'float16' | 'int64' | 'uint64'>;

const constructors = {
  float32: Float32Array,
  float64: Float64Array,
  int8: Int8Array,
  uint8: Uint8Array,
  int16: Int16Array,
  uint16: Uint16Array,
  int32: Int32Array,
  uint32: Uint32Array,
} as const;

/** A typed array of zeros that holds every number of a type. */
export function elementArray(type: DataType, length: number): ElementArray {
  return new constructors[arrayType(type)](length);
}

/** The type of the array that numbers of a type are read into. */
export function arrayType(type: DataType): ArrayType {
  if (type === 'float16') return 'float32';
  return type === 'int64' || type === 'uint64' ? 'float64' : type;
}

/** The type of a typed array's or a plain array's numbers. */
export function typeOfArray(data: ArrayLike<number>): ArrayType {
  for (const [type, arrayClass] of Object.entries(constructors)) {
    if (data instanceof arrayClass) return type as ArrayType;
  }
  return data instanceof Uint8ClampedArray ? 'uint8' : 'float64';
}

const littleEndianHere = new Uint8Array(new Uint16Array([1]).buffer)[0] === 1;

/**
 * Numbers of bytes. The bytes may be overwritten: the caller must own them.
 *
 * @param bytes - A whole number of elements, from byte offset 0 of its buffer.
 * @throws {ArrayError} `unsupported` for a 64-bit integer beyond ±2⁵³.
 */
export function decodeElements(
  bytes: Uint8Array,
  type: DataType,
  littleEndian: boolean,
  path: string,
): ElementArray {
  const size = bytesPerElement(type);
  const { buffer, byteOffset } = (
    bytes.byteOffset % size === 0 ? bytes : new Uint8Array(bytes)
  ) as Uint8Array<ArrayBuffer>;
  const count = Math.floor(bytes.length / size);
  if (littleEndian !== littleEndianHere && size > 1)
    swapBytes(new Uint8Array(buffer, byteOffset, count * size), size);
  if (type === 'float16') return Float32Array.from(new Uint16Array(buffer, byteOffset, count), float16);
  if (type === 'int64') return exactly(new BigInt64Array(buffer, byteOffset, count), path);
  if (type === 'uint64') return exactly(new BigUint64Array(buffer, byteOffset, count), path);
  return new constructors[type as ArrayType](buffer, byteOffset, count);
}

/** Little-endian bytes of a typed array; on most machines the same memory. */
export function encodeElements(elements: ElementArray): Uint8Array {
  const bytes = new Uint8Array(elements.buffer, elements.byteOffset, elements.byteLength);
  if (littleEndianHere) return bytes;
  const swapped = new Uint8Array(bytes);
  swapBytes(swapped, elements.BYTES_PER_ELEMENT);
  return swapped;
}

/** Turns the order of the bytes of every element round, in place. */
export function swapBytes(bytes: Uint8Array, size: number): void {
  for (let start = 0; start + size <= bytes.length; start += size) {
    for (let low = start, high = start + size - 1; low < high; low++, high--) {
      const byte = bytes[low]!;
      bytes[low] = bytes[high]!;
      bytes[high] = byte;
    }
  }
}

/** Value of a half-precision number. [IEEE 754-2019, binary16] */
export function float16(bits: number): number {
  const sign = bits & 0x8000 ? -1 : 1;
  const exponent = (bits >> 10) & 0x1f;
  const fraction = bits & 0x3ff;
  if (exponent === 0x1f) return fraction === 0 ? sign * Number.POSITIVE_INFINITY : Number.NaN;
  return exponent === 0 ? sign * fraction * 2 ** -24 : sign * (1024 + fraction) * 2 ** (exponent - 25);
}

function exactly(values: BigInt64Array | BigUint64Array, path: string): Float64Array {
  const result = new Float64Array(values.length);
  for (let i = 0; i < result.length; i++) {
    const value = Number(values[i]!);
    if (!Number.isSafeInteger(value)) {
      throw new ArrayError('unsupported', {
        path,
        expected: '64-bit integers within ±2⁵³',
        received: values[i]!,
        hint: 'Store them as float64 or int32.',
      });
    }
    result[i] = value;
  }
  return result;
}
