import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  apparentFrame,
  type Conditions,
  calibratedBand,
  celsius,
  frameBuffer,
  frameFlag,
  infraredWindow,
  measurementModel,
  monochromaticBand,
  recorrection,
  topHatBand,
  type View,
  view,
} from '../src/index.js';
import {
  element,
  flagName,
  flat,
  float32Ulp,
  indices,
  K,
  laidOut,
  refused,
  worstAgainstSpot,
} from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };
const model = measurementModel(base);
const ramp = (count: number, from = 280): number[] =>
  Array.from({ length: count }, (_, i) => from + 1.25 * i);
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

describe('reason codes', () => {
  it('every code is reached, each pixel says its own, and the counts add up', () => {
    const shiny = measurementModel({
      ...base,
      emissivity: view([0.2, 0.2, 0.2, 0.2, 0.2, 0.2, 0.2, 0.2, 0.2, Number.NaN, 0.2], [1, 11]),
      reflectedApparentTemperature: celsius(20),
      instrument: { measuringRange: { from: celsius(-40), to: celsius(300) } },
    });
    // Surroundings alone, 0.8·L(20 °C), show the first; a cold surface of 200 K on top shows the second.
    const nothing = band.temperature(0.8 * band.radiance(celsius(20)) * 0.999);
    const cold = band.temperature(0.8 * band.radiance(celsius(20)) + 0.2 * band.radiance(K(200)));
    const values = [
      300,
      Number.NaN,
      Number.POSITIVE_INFINITY,
      149.9,
      3500.5,
      nothing,
      cold,
      3000,
      573.15,
      300,
      Number.NEGATIVE_INFINITY,
    ];
    const frame = view(Float64Array.from(values), [1, 11]);
    const result = shiny.surfaceFrame(frame);
    expect(flat(result.flags).map(flagName)).toEqual([
      'ok',
      'missing',
      'not-finite',
      'reading-below-range',
      'reading-above-range',
      'no-solution',
      'result-below-range',
      'result-above-range',
      'saturated',
      'invalid-input',
      'not-finite',
    ]);
    expect(new Set(flat(result.flags)).size).toBe(Object.keys(frameFlag).length);
    expect(result.counts).toEqual({
      ok: 1,
      missing: 1,
      'not-finite': 2,
      'reading-below-range': 1,
      'reading-above-range': 1,
      'no-solution': 1,
      'result-below-range': 1,
      'result-above-range': 1,
      'invalid-input': 1,
      saturated: 1,
    });
    expect(result.unsolved).toBe(9);
    flat(result.temperature).forEach((value, i) => {
      const flag = element(result.flags, [0, i]);
      expect(Number.isNaN(value)).toBe(flag !== frameFlag.ok && flag < 128);
    });
    expect(result.cautions.map((caution) => caution.code)).toEqual(['saturated']);
    expect(result.cautions[0]!.message).toContain('1 pixels are');
  });

  it('flag and spot agree on why, for any conditions and readings', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.01, max: 1, noNaN: true }),
        fc.double({ min: 150, max: 2000, noNaN: true }),
        fc.double({ min: 0.05, max: 1, noNaN: true }),
        fc.array(fc.double({ min: 100, max: 4000 }), { minLength: 1, maxLength: 30 }),
        (emissivity, reflected, transmittance, values) => {
          const own = measurementModel({
            band,
            emissivity,
            reflectedApparentTemperature: K(reflected),
            path: [air({ transmittance, temperature: celsius(25) })],
          });
          const frame = view(Float64Array.from([300, ...values]), [values.length + 1]);
          const result = own.surfaceFrame(frame);
          // At the very ends of the ranges a table and quadrature may disagree by less than 0.1 mK about the side.
          expect(worstAgainstSpot(own, frame, result).worst).toBeLessThan(1e-4);
        },
      ),
    );
  });

  it('a calibrated band has its own range, for readings and for results', () => {
    const own = measurementModel({
      ...base,
      emissivity: 0.5,
      band: calibratedBand({
        form: 'k1k2',
        k1: 774.8853,
        k2: 1321.0789,
        range: { from: K(240), to: K(400) },
      }),
    });
    const frame = view([230, 272, 300, 390, 410], [5]);
    const result = own.surfaceFrame(frame);
    expect(flat(result.flags).map(flagName)).toEqual([
      'reading-below-range',
      'ok',
      'ok',
      'result-above-range',
      'reading-above-range',
    ]);
    expectSpot(frame, result, own);
    const cold = own.surfaceFrame(view([300, 262], [2]));
    expect(flat(cold.flags).map(flagName)).toEqual(['ok', 'result-below-range']);
  });
});

describe('saturation', () => {
  const range = { from: celsius(-20), to: celsius(120) };
  const own = measurementModel({ ...base, instrument: { measuringRange: range } });

  it('at either end, also as float32 that lies just inside, and beyond', () => {
    const ends = [range.from, Math.fround(range.from), range.to, Math.fround(range.to), 252, 394];
    const inside = [range.from + 0.01, range.to - 0.01, 300];
    const result = own.surfaceFrame(view(Float64Array.from([...ends, ...inside]), [9]));
    expect(flat(result.flags).map(flagName)).toEqual([
      ...ends.map(() => 'saturated'),
      ...inside.map(() => 'ok'),
    ]);
    expect(result.counts).toMatchObject({ saturated: 6, ok: 3 });
    expect(result.unsolved).toBe(0);
    expect(flat(result.temperature).every(Number.isFinite)).toBe(true);
    expect(result.cautions.at(-1)).toMatchObject({ code: 'saturated' });
    expect(Math.fround(range.to)).toBeLessThan(range.to); // so the case above is the one meant
  });

  it('recorded frames: ends of apparent temperature are carried over to recorded temperature', () => {
    const told = { emissivity: 0.95, reflectedApparentTemperature: celsius(20) };
    const again = recorrection(told, { ...base, instrument: { measuringRange: range } });
    const asStored = measurementModel({ band, ...told });
    const [from, to] = [asStored.surfaceTemperature(range.from), asStored.surfaceTemperature(range.to)];
    expect(to).toBeGreaterThan(range.to + 1); // the stored end is another number
    const frame = view(Float32Array.from([from, to, to + 3, to - 0.01, from + 0.01, range.to]), [6]);
    expect(flat(again.surfaceFrame(frame).flags).map(flagName)).toEqual([
      'saturated',
      'saturated',
      'saturated',
      'ok',
      'ok',
      'ok',
    ]);
  });

  it('recorded frames: a range of the recorded settings is of recorded temperature, rounding widens the ends', () => {
    const told = {
      emissivity: 0.95,
      reflectedApparentTemperature: celsius(20),
      instrument: { measuringRange: range },
      resolution: 0.1,
    };
    const again = recorrection(told, base);
    const values = [range.to, range.to - 0.04, range.to - 0.06, range.from + 0.04, range.from + 0.06];
    expect(flat(again.surfaceFrame(view(values, [5])).flags).map(flagName)).toEqual([
      'saturated',
      'saturated',
      'ok',
      'saturated',
      'ok',
    ]);
  });

  it('recorded frames: an end that no stored temperature reaches never saturates', () => {
    const told = { emissivity: 0.3, reflectedApparentTemperature: celsius(90) };
    const again = recorrection(told, {
      ...base,
      instrument: { measuringRange: { from: celsius(-20), to: K(3400) } },
    });
    const result = again.surfaceFrame(view([230, 300, 600], [3]));
    expect(result.counts.saturated).toBe(0);
  });
});

describe('maps', () => {
  const frame = view(Float32Array.from(ramp(24, 300)), [4, 2, 3]);
  const plane = [0.5, 0.6, 0.7, 0.8, 0.9, 1];

  it('two axes hold for every frame; the full shape holds pixel by pixel', () => {
    const flatMap = measurementModel({ ...base, emissivity: view(plane, [2, 3]) });
    expectSpot(frame, flatMap.surfaceFrame(frame), flatMap);
    const full = measurementModel({
      ...base,
      emissivity: view(
        Float64Array.from(ramp(24, 30), (value) => value / 100),
        [4, 2, 3],
      ),
    });
    expectSpot(frame, full.surfaceFrame(frame), full);
    const four = view(Float32Array.from(ramp(24, 300)), [1, 4, 2, 3]);
    expect(flat(flatMap.surfaceFrame(four).temperature)).toEqual(
      flat(flatMap.surfaceFrame(frame).temperature),
    );
  });

  it('of a strided layout, and shared by reference', () => {
    const strided = laidOut(plane, [2, 3], (length) => new Float64Array(length), {
      order: 'F',
      reversed: [0],
    });
    const own = measurementModel({ ...base, emissivity: strided });
    const before = flat(own.surfaceFrame(frame).temperature);
    expect(before).toEqual(
      flat(measurementModel({ ...base, emissivity: view(plane, [2, 3]) }).surfaceFrame(frame).temperature),
    );
    strided.data.fill(1);
    const after = flat(own.surfaceFrame(frame).temperature);
    const reading = flat(frame);
    after.forEach((value, i) => {
      expect(Math.abs(value - reading[i]!)).toBeLessThan(1e-4); // emissivity 1: the reading comes back
    });
  });

  it('of a wrong shape are refused before anything is written', () => {
    const own = measurementModel({ ...base, emissivity: view(plane, [3, 2]) });
    refused(
      () => own.surfaceFrame(frame, frame),
      'wrong-shape',
      'emissivity',
      'a map of shape [2, 3] or [4, 2, 3]',
      '[3, 2]',
    );
    expect(flat(frame)).toEqual(flat(view(Float32Array.from(ramp(24, 300)), [4, 2, 3])));
    const deep = measurementModel({ ...base, emissivity: view(plane, [1, 2, 3]) });
    refused(
      () => deep.surfaceFrame(view(ramp(6, 300), [2, 3])),
      'wrong-shape',
      'emissivity',
      'a map of shape [2, 3]',
    );
    refused(
      () =>
        measurementModel({ ...base, emissivity: view(plane, [2, 3]) }).surfaceFrame(view(ramp(6, 300), [6])),
      'wrong-shape',
      'emissivity',
    );
    refused(
      () => measurementModel({ ...base, emissivity: view(plane, [6]) }),
      'wrong-shape',
      'emissivity',
      'two axes',
    );
    const middle = measurementModel({
      ...base,
      emissivity: view(
        ramp(12).map(() => 0.5),
        [2, 2, 3],
      ),
    });
    refused(() => middle.surfaceFrame(view(ramp(24, 300), [2, 2, 2, 3])), 'wrong-shape', 'emissivity');
  });

  it('bad cells: NaN, out of range, or at odds with another input, each for its kind', () => {
    const at = (value: number) => view([value, value], [1, 2]);
    const one = view([340, 340], [1, 2]);
    const flagged = (conditions: Partial<Conditions>): string | undefined =>
      flagName(measurementModel({ ...base, ...conditions } as Conditions).surfaceFrame(one).flags.data[0]!);
    for (const bad of [Number.NaN, 0, -0.1, 1.1, 95, Number.POSITIVE_INFINITY]) {
      expect(flagged({ emissivity: at(bad) }), `emissivity ${bad}`).toBe('invalid-input');
    }
    for (const bad of [Number.NaN, 21, 4000, Number.NEGATIVE_INFINITY]) {
      expect(flagged({ reflectedApparentTemperature: at(bad) }), `reflected ${bad}`).toBe('invalid-input');
    }
    for (const bad of [Number.NaN, -1, Number.POSITIVE_INFINITY]) {
      const conditions = { band, emissivity: 0.8, reflectedRadiance: at(bad) };
      expect(flagName(measurementModel(conditions).surfaceFrame(one).flags.data[0]!), `radiance ${bad}`).toBe(
        'invalid-input',
      );
    }
    const film = (transmittance: number) => ({
      surface: { transmittance: at(transmittance), backgroundApparentTemperature: celsius(40) },
    });
    expect(flagged(film(-0.1))).toBe('invalid-input');
    expect(flagged(film(0.1))).toBe('ok');
    expect(flagged(film(0.25)), 'ε 0.8 + τ 0.25 > 1').toBe('invalid-input');
    const window = (transmittance: number) => ({
      path: [
        infraredWindow({
          transmittance: at(transmittance),
          reflectance: 0.3,
          temperature: celsius(20),
          mirroredTemperature: celsius(20),
        }),
      ],
    });
    expect(flagged(window(0.7))).toBe('ok');
    expect(flagged(window(0.75)), 'τ 0.75 + ρ 0.3 > 1').toBe('invalid-input');
  });

  it('the spot says the same of such a cell', () => {
    const pixel = { row: 0, column: 1 };
    const spot = (emissivity: View) =>
      measurementModel({ ...base, emissivity }).surfaceTemperature(K(340), pixel);
    refused(() => spot(view([0.9, Number.NaN], [1, 2])), 'not-finite', 'emissivity[0][1]', 'NaN');
    refused(() => spot(view([0.9, 95], [1, 2])), 'out-of-range', 'emissivity', 'Write 0.95 for 95 %.');
    const surface = { transmittance: view([0, 0.4], [1, 2]), backgroundApparentTemperature: celsius(40) };
    refused(
      () => measurementModel({ ...base, surface }).at(pixel),
      'out-of-range',
      '[0][1]',
      'emissivity + transmittance of the target ≤ 1',
    );
  });

  it('maps of recorded settings', () => {
    const told = { emissivity: view(plane, [2, 3]), reflectedApparentTemperature: celsius(25) };
    const again = recorrection(told, { ...base, emissivity: 0.7 });
    expect(worstAgainstSpot(again, frame, again.surfaceFrame(frame)).worst).toBeLessThan(1e-4);
    const bad = recorrection({ ...told, emissivity: view([...plane.slice(0, 5), 0], [2, 3]) }, base);
    expect(bad.surfaceFrame(frame).counts['invalid-input']).toBe(4);
  });
});

describe('what a frame holds', () => {
  const array = view(Float32Array.from(ramp(6, 300)), [2, 3]);

  it('apparent temperature in kelvin is taken, with and without its unit', () => {
    const expected = flat(model.surfaceFrame(array).temperature);
    expect(
      flat(model.surfaceFrame({ array, quantity: 'apparent temperature', unit: 'K' }).temperature),
    ).toEqual(expected);
    expect(flat(model.surfaceFrame({ array, quantity: 'apparent temperature' }).temperature)).toEqual(
      expected,
    );
    const again = recorrection({ emissivity: 1, reflectedApparentTemperature: celsius(20) }, base);
    expect(
      flat(again.surfaceFrame({ array, quantity: 'recorded temperature', unit: 'K' }).temperature),
    ).toEqual(expected);
  });

  it('every other quantity and unit is refused with the way out', () => {
    const give = (quantity: string, unit?: string) => () =>
      model.surfaceFrame({ array, quantity, unit } as never);
    refused(give('surface temperature', 'K'), 'already-corrected', 'frame', 'already');
    refused(give('recorded temperature', 'K'), 'wrong-quantity', 'frame', 'recorrection(recorded, actual)');
    refused(give('counts', '1'), 'wrong-quantity', 'frame', 'calibration');
    refused(give('band radiance'), 'wrong-quantity', 'frame', 'apparentFrame(frame, band)');
    refused(give('temperature'), 'wrong-quantity', 'frame.quantity', '"temperature"');
    refused(give('apparent temperature', 'degC'), 'wrong-quantity', 'frame.unit', "'K'", '"degC"');
    const again = recorrection({ emissivity: 1, reflectedApparentTemperature: celsius(20) }, base);
    refused(
      () => again.surfaceFrame({ array, quantity: 'apparent temperature' }),
      'wrong-quantity',
      'frame',
      'measurementModel(conditions)',
    );
  });

  it('no view at all', () => {
    refused(() => model.surfaceFrame([1, 2] as never), 'wrong-type', 'frame', 'view(data, [rows, columns])');
    refused(() => model.surfaceFrame(undefined as never), 'wrong-type', 'frame');
    refused(
      () => model.surfaceFrame({ quantity: 'apparent temperature' } as never),
      'wrong-type',
      'frame.array',
    );
    refused(
      () => model.surfaceFrame({ data: [1], shape: [2], stride: [1], offset: 0 }),
      'wrong-shape',
      'frame',
      'reaches outside',
    );
    refused(
      () => model.surfaceFrame({ data: BigInt64Array.of(300n), shape: [1], stride: [1], offset: 0 } as never),
      'wrong-type',
      'frame',
    );
  });

  it('a frame in degrees Celsius is refused and the output is left as it was', () => {
    const frame = view(Float32Array.from([20.5, 62.4, Number.NaN, 149]), [2, 2]);
    const out = { temperature: frameBuffer([2, 2]), flags: view(new Uint8Array(4).fill(77), [2, 2]) };
    out.temperature.data.fill(7);
    refused(
      () => model.surfaceFrame(frame, out),
      'out-of-range',
      'frame',
      '150…3500 K',
      '20.5',
      'degrees Celsius: add 273.15',
    );
    expect(flat(out.temperature)).toEqual([7, 7, 7, 7]);
    expect(flat(out.flags)).toEqual([77, 77, 77, 77]);
    refused(() => model.surfaceFrame(frame, frame), 'out-of-range', 'frame');
    expect(flat(frame)[1]).toBe(Math.fround(62.4));
  });

  it('scaled integers are refused, a frame of which one pixel is kelvin or none is finite is not', () => {
    refused(
      () => model.surfaceFrame(view(Uint16Array.of(30215, 31000), [2])),
      'out-of-range',
      'frame',
      'scale and offset',
    );
    expect(model.surfaceFrame(view([20, 300], [2])).counts).toMatchObject({
      'reading-below-range': 1,
      ok: 1,
    });
    expect(model.surfaceFrame(view([Number.NaN, Number.POSITIVE_INFINITY], [2])).counts).toMatchObject({
      missing: 1,
      'not-finite': 1,
    });
  });
});

describe('apparentFrame', () => {
  it('turns radiances into the temperature of the blackbody, flagged as for temperatures', () => {
    const values = [
      band.radiance(K(300)),
      band.radiance(K(213)),
      0,
      -1,
      Number.NaN,
      Number.POSITIVE_INFINITY,
      1e-9,
      1e9,
    ];
    const result = apparentFrame(view(values, [2, 4]), band);
    expect(flat(result.flags).map(flagName)).toEqual([
      'ok',
      'ok',
      'no-solution',
      'no-solution',
      'missing',
      'not-finite',
      'result-below-range',
      'result-above-range',
    ]);
    expect(Math.abs(element(result.temperature, [0, 0]) - 300)).toBeLessThan(1e-4);
    expect(Math.abs(element(result.temperature, [0, 1]) - 213)).toBeLessThan(1e-4);
    expect(result).toMatchObject({ quantity: 'apparent temperature', unit: 'K', unsolved: 6 });
    expect(flagName(model.surfaceFrame(result).flags.data[0]!)).toBe('ok'); // it knows its quantity
  });

  it('is the inverse of band.radiance within 0.1 mK + 1 ulp, −60…3000 °C, and may write to its input', () => {
    for (const own of [band, topHatBand(3, 5), monochromaticBand(10.6)]) {
      const kelvins = Array.from({ length: 60 }, (_, i) => 213.15 + i * 51.8);
      const frame = view(
        Float32Array.from(kelvins, (value) => own.radiance(K(value))),
        [60],
      );
      const exact = flat(frame).map((radiance) => own.temperature(radiance));
      const result = apparentFrame(
        { array: frame, quantity: 'band radiance', unit: own.radianceUnit },
        own,
        frame,
      );
      expect(result.temperature).toBe(frame);
      [...indices([60])].forEach((index, i) => {
        expect(Math.abs(element(frame, index) - exact[i]!)).toBeLessThan(1e-4 + float32Ulp(exact[i]!));
      });
    }
  });

  it('refuses another quantity, another unit of radiance, and no band', () => {
    const array = view([40], [1]);
    refused(
      () => apparentFrame({ array, quantity: 'band radiance', unit: 'W·m⁻²·sr⁻¹·µm⁻¹' }, band),
      'wrong-quantity',
      'frame.unit',
      "'W·m⁻²·sr⁻¹'",
    );
    refused(
      () => apparentFrame({ array, quantity: 'counts' }, band),
      'wrong-quantity',
      'frame',
      'calibration',
    );
    refused(
      () => apparentFrame({ array, quantity: 'surface temperature' }, band),
      'already-corrected',
      'frame',
    );
    refused(
      () => apparentFrame({ array, quantity: 'apparent temperature' }, band),
      'wrong-quantity',
      'frame',
    );
    refused(() => apparentFrame(array, undefined as never), 'wrong-type', 'band', 'topHatBand(8, 14)');
    refused(() => apparentFrame(null as never, band), 'wrong-type', 'frame');
  });
});
