/**
 * What goes into a frame call and what comes out of it: checks of the input, and the output views.
 */
import type { Band } from './band.js';
import { plainObject } from './check.js';
import { MeasurementError } from './errors.js';
import { refuseQuantity } from './model.js';
import { type Quantity, quantities } from './quantity.js';
import { highestTemperature, lowestTemperature } from './units.js';
import { checkView, emptyView, forEachRow, isView, sameShape, sizeOf, type View } from './view.js';

/** The view of a frame, refused unless it holds the quantity wanted. */
export function frameView(frame: unknown, reads: Quantity): View {
  if (typeof frame === 'object' && frame !== null && 'quantity' in frame) {
    const { quantity, array } = frame as { quantity: unknown; array?: unknown };
    if (!(quantities as readonly unknown[]).includes(quantity)) {
      throw new MeasurementError('wrong-quantity', {
        path: 'frame.quantity',
        expected: reads,
        received: quantity,
      });
    }
    refuseQuantity(quantity, reads, 'frame');
    const unit = (frame as { unit?: unknown }).unit;
    if (reads !== 'band radiance' && unit !== undefined && unit !== 'K') {
      throw new MeasurementError('wrong-quantity', { path: 'frame.unit', expected: "'K'", received: unit });
    }
    checkView(array, 'frame.array');
    return array;
  }
  checkView(frame, 'frame');
  return frame;
}

/** A frame of which no finite pixel can be kelvin is a slip of unit, not a cold scene: nothing is written then. */
export function refuseOtherUnits(input: View, path: string): void {
  let lowest = Number.POSITIVE_INFINITY;
  let highest = Number.NEGATIVE_INFINITY;
  const step = input.stride.at(-1) ?? 0;
  let plausible = false;
  forEachRow(input.shape, [input], ([start], length) => {
    for (let column = 0; column < length && !plausible; column++) {
      const value = input.data[start! + column * step]!;
      if (!Number.isFinite(value)) continue;
      plausible = value >= lowestTemperature && value <= highestTemperature;
      if (value < lowest) lowest = value;
      if (value > highest) highest = value;
    }
  });
  if (plausible || lowest > highest) return;
  throw new MeasurementError('out-of-range', {
    path,
    expected: `temperatures in kelvin, ${lowestTemperature}…${highestTemperature} K`,
    received: `values of ${lowest}…${highest}`,
    hint:
      highest < lowestTemperature
        ? 'They look like degrees Celsius: add 273.15 first, or read the file with { unit: "degC" }.'
        : 'They look like counts or scaled numbers: apply scale and offset first.',
  });
}

/** A frame of radiances that states a unit must state the band's: per micrometre is not in-band. */
export function refuseOtherRadiance(frame: unknown, { radianceUnit }: Band): void {
  const { unit } = frame as { unit?: unknown };
  if (unit === undefined || unit === radianceUnit) return;
  throw new MeasurementError('wrong-quantity', {
    path: 'frame.unit',
    expected: `the unit of the band's radiance, '${radianceUnit}'`,
    received: unit,
  });
}

/** The output views: those given, checked, or new ones of the frame's shape. */
export function outputOf(
  out: unknown,
  shape: readonly number[],
): { readonly temperature: View<Float32Array>; readonly flags: View<Uint8Array> } {
  const newFlags = (): View<Uint8Array> => emptyView(new Uint8Array(sizeOf(shape)), shape);
  if (out === undefined)
    return { temperature: emptyView(new Float32Array(sizeOf(shape)), shape), flags: newFlags() };
  const given = isView(out)
    ? { temperature: out }
    : (plainObject(out, 'out', Object.keys(Object(out))) as { temperature?: unknown; flags?: unknown });
  const flags = 'flags' in given ? given.flags : undefined;
  checkOutput(given.temperature, Float32Array, shape, 'out.temperature');
  if (flags !== undefined) checkOutput(flags, Uint8Array, shape, 'out.flags');
  return {
    temperature: given.temperature as View<Float32Array>,
    flags: (flags as View<Uint8Array> | undefined) ?? newFlags(),
  };
}

function checkOutput(
  out: unknown,
  type: typeof Float32Array | typeof Uint8Array,
  shape: readonly number[],
  path: string,
): void {
  checkView(out, path);
  if (!(out.data instanceof type)) {
    throw new MeasurementError('wrong-type', {
      path,
      expected: `a view of a ${type.name}`,
      received: out.data,
    });
  }
  if (!sameShape(out.shape, shape)) {
    throw new MeasurementError('wrong-shape', {
      path,
      expected: `the shape of the frame, [${shape.join(', ')}]`,
      received: out.shape,
    });
  }
}

/** The input, copied where it shares memory with the output but not its layout: in place must mean cell by cell. */
export function detached(input: View, output: View): View {
  const [a, b] = [input.data, output.data];
  if (Array.isArray(a) || Array.isArray(b) || a.buffer !== b.buffer) return input;
  const alike = a === b && input.offset === output.offset && sameShape(input.stride, output.stride);
  if (alike) return input;
  return { ...input, data: a.slice() };
}
