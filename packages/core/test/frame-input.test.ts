import { describe, expect, it } from 'vitest';
import {
  apparentFrame,
  type Conditions,
  celsius,
  frameBuffer,
  measurementModel,
  monochromaticBand,
  recorrection,
  topHatBand,
  view,
} from '../src/index.js';
import { element, flagName, flat, float32Ulp, indices, K, ramp, refused } from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };
const model = measurementModel(base);

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
