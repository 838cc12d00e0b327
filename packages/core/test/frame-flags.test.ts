import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  calibratedBand,
  celsius,
  frameFlag,
  measurementModel,
  recorrection,
  topHatBand,
  view,
} from '../src/index.js';
import { element, flagName, flat, K, worstAgainstSpot } from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };

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
    expect(worstAgainstSpot(own, frame, result).worst).toBeLessThan(1e-4);
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
