import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  type Conditions,
  celsius,
  frameBuffer,
  measurementModel,
  topHatBand,
  type View,
  view,
} from '../src/index.js';
import { flat, K, laidOut, ramp, refused, worstAgainstSpot } from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };
const model = measurementModel(base);
const expectSpot = (frame: View, result: { temperature: View; flags: View }, own = model): void => {
  expect(worstAgainstSpot(own, frame, result).worst).toBeLessThan(1e-4);
};

describe('layouts', () => {
  const shapes: number[][] = [[], [1], [7], [3, 5], [2, 3, 4], [2, 2, 3, 2], [1, 1, 1]];

  it.each(shapes.map((shape) => [shape]))(
    'shape %j comes back in the same shape, every pixel as the spot',
    (shape) => {
      const count = shape.reduce((a, b) => a * b, 1);
      const frame = view(Float32Array.from(ramp(count)), shape);
      const result = model.surfaceFrame(frame);
      expect(result.temperature.shape).toEqual(shape);
      expect(result.flags.shape).toEqual(shape);
      expect(result.temperature.data).toBeInstanceOf(Float32Array);
      expect(result.flags.data).toBeInstanceOf(Uint8Array);
      expect(result.array).toBe(result.temperature);
      expect(result).toMatchObject({ quantity: 'surface temperature', unit: 'K', unsolved: 0 });
      expect(result.counts.ok).toBe(count);
      expectSpot(frame, result);
    },
  );

  it('offsets, spacing, negative strides and column-major order give what a plain array gives', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: 1, max: 4 }), { minLength: 1, maxLength: 4 }),
        fc.constantFrom('C' as const, 'F' as const),
        fc.integer({ min: 1, max: 3 }),
        fc.array(fc.boolean(), { minLength: 4, maxLength: 4 }),
        (shape, order, spacing, reversals) => {
          const values = ramp(shape.reduce((a, b) => a * b, 1));
          const reversed = shape.map((_, axis) => axis).filter((axis) => reversals[axis]);
          const layout = { order, reversed, spacing };
          const strided = laidOut(values, shape, (length) => new Float64Array(length), layout);
          const plain = model.surfaceFrame(view(values, shape));
          expect(flat(model.surfaceFrame(strided).temperature)).toEqual(flat(plain.temperature));
          // Into an output laid out like that too.
          const out = {
            temperature: laidOut(values, shape, (length) => new Float32Array(length), layout),
            flags: laidOut(values, shape, (length) => new Uint8Array(length), layout),
          };
          const result = model.surfaceFrame(view(values, shape), out);
          expect(result.temperature).toBe(out.temperature);
          expect(result.flags).toBe(out.flags);
          expect(flat(out.temperature)).toEqual(flat(plain.temperature));
        },
      ),
    );
  });

  it('integers, plain arrays and every typed array', () => {
    const kelvins = [200, 240, 251];
    for (const data of [
      kelvins,
      Uint8Array.from(kelvins),
      Uint8ClampedArray.from(kelvins),
      Int16Array.from(kelvins),
      Uint16Array.from(kelvins),
      Int32Array.from(kelvins),
      Uint32Array.from(kelvins),
      Float32Array.from(kelvins),
      Float64Array.from(kelvins),
    ]) {
      const frame = view(data, [1, 3]);
      expectSpot(
        frame,
        measurementModel({ ...base, reflectedApparentTemperature: K(200) }).surfaceFrame(frame),
        measurementModel({ ...base, reflectedApparentTemperature: K(200) }),
      );
    }
  });

  it('an empty frame gives an empty frame', () => {
    for (const shape of [[0], [0, 5], [5, 0], [2, 0, 3]]) {
      const result = model.surfaceFrame(view(new Float32Array(0), shape));
      expect(result.temperature.shape).toEqual(shape);
      expect(result.counts.ok).toBe(0);
      expect(result.unsolved).toBe(0);
    }
  });
});

describe('where the answer goes', () => {
  const shape = [3, 4];
  const values = ramp(12);
  const expected = flat(model.surfaceFrame(view(Float32Array.from(values), shape)).temperature);

  it('a buffer, an earlier result, both reused', () => {
    const buffer = frameBuffer(shape);
    const first = model.surfaceFrame(view(values, shape), buffer);
    expect(first.temperature).toBe(buffer);
    expect(flat(buffer)).toEqual(expected);
    buffer.data.fill(0);
    const second = model.surfaceFrame(view(values, shape), first);
    expect(second.temperature).toBe(buffer);
    expect(second.flags).toBe(first.flags);
    expect(flat(second.temperature)).toEqual(expected);
  });

  it('the input itself', () => {
    const frame = view(Float32Array.from(values), shape);
    const result = model.surfaceFrame(frame, frame);
    expect(result.temperature).toBe(frame);
    expect(flat(frame)).toEqual(expected);
    const reversed = laidOut(values, shape, (length) => new Float32Array(length), {
      order: 'F',
      reversed: [1],
    });
    model.surfaceFrame(reversed, reversed);
    expect(flat(reversed)).toEqual(expected);
  });

  it('the memory of the input, laid out otherwise: transposed, reversed, shifted, or another type on it', () => {
    const square = ramp(9);
    const transposed = (data: Float32Array): View<Float32Array> => ({
      data,
      shape: [3, 3],
      stride: [1, 3],
      offset: 0,
    });
    const data = Float32Array.from(square);
    const out = transposed(data);
    const plain = flat(model.surfaceFrame(view(Float32Array.from(square), [3, 3])).temperature);
    model.surfaceFrame(view(data, [3, 3]), out);
    expect(flat(out)).toEqual(plain);

    const back = Float32Array.from(square);
    const reversed = { data: back, shape: [9], stride: [-1], offset: 8 };
    model.surfaceFrame(view(back, [9]), reversed);
    expect(flat(reversed)).toEqual(plain);

    const long = Float32Array.from([...square, 0, 0]);
    const shifted = { data: long, shape: [9], stride: [1], offset: 2 };
    model.surfaceFrame(view(long, [9]), shifted);
    expect(flat(shifted)).toEqual(plain);

    const memory = new ArrayBuffer(9 * 8);
    const wide = new Float64Array(memory);
    wide.set(square);
    const narrow = view(new Float32Array(memory, 0, 9), [9]);
    model.surfaceFrame(view(wide, [9]), narrow);
    expect(flat(narrow)).toEqual(plain);
  });

  it('a reused output that does not fit is refused', () => {
    const frame = view(values, shape);
    refused(() => model.surfaceFrame(frame, frameBuffer([4, 3])), 'wrong-shape', 'out.temperature', '[3, 4]');
    refused(
      () => model.surfaceFrame(frame, view(new Float64Array(12), shape) as never),
      'wrong-type',
      'out.temperature',
      'a view of a Float32Array',
      'Float64Array',
    );
    const temperature = frameBuffer(shape);
    refused(
      () => model.surfaceFrame(frame, { temperature, flags: view(new Uint8Array(11), [11]) }),
      'wrong-shape',
      'out.flags',
    );
    refused(
      () => model.surfaceFrame(frame, { temperature, flags: frameBuffer(shape) } as never),
      'wrong-type',
      'out.flags',
      'Uint8Array',
    );
    refused(() => model.surfaceFrame(frame, {} as never), 'wrong-type', 'out.temperature', 'a view');
    refused(() => model.surfaceFrame(frame, null as never), 'wrong-type', 'out');
    refused(() => model.surfaceFrame(frame, 5 as never), 'wrong-type', 'out');
    refused(() => frameBuffer([2, -1]), 'wrong-shape', 'shape', 'whole extents ≥ 0');
    refused(() => frameBuffer([1.5]), 'wrong-shape', 'shape');
    refused(() => frameBuffer(4 as never), 'wrong-shape', 'shape');
  });
});
