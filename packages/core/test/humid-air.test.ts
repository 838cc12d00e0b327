import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Band, topHatBand } from '../src/band.js';
import type { Curve } from '../src/curve.js';
import { airStandardUncertainty, type HumidAirInput, humidAir } from '../src/humid-air.js';
import { air as givenAir, infraredWindow } from '../src/layer.js';
import { apparentTemperature, measurementModel } from '../src/measurement.js';
import { recompute } from '../src/record.js';
import { measurementResult } from '../src/result.js';
import { type AnyKelvin, celsius } from '../src/units.js';

const folder = new URL('../../../fixtures/reference/atmosphere/', import.meta.url);
const text = (name: string): string => readFileSync(new URL(name, folder), 'utf8');
const longWave = topHatBand(8, 14);
const base = { band: longWave, emissivity: 0.9, reflectedApparentTemperature: celsius(20) };
const air = (distance: number, temperature = 20, rest: Partial<HumidAirInput> = {}) =>
  humidAir({ temperature: celsius(temperature), relativeHumidity: 0.5, distance, ...rest });
const shown = (path: Parameters<typeof measurementModel>[0]['path']): number =>
  apparentTemperature(celsius(90), { ...base, path: path! });
const wavenumberBand = (from: number, to: number): Band => topHatBand(1e4 / to, 1e4 / from);

interface Golden {
  readonly T_K: number;
  readonly RH: number;
  readonly p_Pa: number;
  readonly L_m: number;
  readonly CO2_ppm: number;
  readonly visibility_km: number | null;
  readonly bands: Record<string, number>;
  readonly bins: Record<string, number>;
}

// Evaluated by an independent script from the same coefficients (fixtures/reference/README.md): 2e-5.
describe('six conditions of an independent script', () => {
  const { cases } = JSON.parse(text('golden.json')) as { cases: Golden[] };
  it.each(cases)('$T_K K, $RH %, $L_m m: bands and bins within 2e-5', (golden) => {
    const layer = humidAir({
      temperature: golden.T_K as AnyKelvin,
      relativeHumidity: golden.RH / 100,
      distance: golden.L_m,
      pressure: golden.p_Pa,
      carbonDioxide: golden.CO2_ppm * 1e-6,
      ...(golden.visibility_km === null ? {} : { visibility: golden.visibility_km }),
    });
    for (const [limits, expected] of Object.entries(golden.bands)) {
      const [from, to] = limits.split('-').map(Number) as [number, number];
      const own = layer.bandTransmittance(topHatBand(from, to), 300 as AnyKelvin);
      expect(Math.abs(own - expected), limits).toBeLessThan(2e-5);
    }
    const curve = layer.spectralTransmittance() as { wavenumber: number[]; value: number[] };
    for (const [edge, expected] of Object.entries(golden.bins)) {
      const place = curve.wavenumber.lastIndexOf(Number(edge));
      expect(Math.abs(curve.value[place]! - expected), edge).toBeLessThan(2e-5);
    }
  });
});

// RRTMG-LW correlated-k transmittances (Iacono et al. 2008), evaluated for this project; tolerances of the reference
// README: the data set's continuum is older, its gas amounts differ a little, and it is flat inside wide bands.
describe('published correlated-k transmittances', () => {
  const [head, ...lines] = text('kdist.csv').trim().split('\n');
  const names = head!.split(',');
  const rows = lines.map((line) =>
    Object.fromEntries(line.split(',').map((cell, i) => [names[i]!, Number(cell)])),
  );
  const inRange = rows.filter(
    (row) => row.T_K! >= 243.15 && row.T_K! <= 333.15 && row.p_Pa! >= 6e4 && row.L_m! <= 1000,
  );
  const composites = [
    [700, 1180, 0.008, 0.022],
    [820, 1390, 0.02, 0.03],
    [2080, 3250, 0.02, 0.03],
  ] as const;

  it('there are conditions to compare with', () => {
    expect(inRange.length).toBeGreaterThan(50);
  });

  it.each(composites)('%i–%i cm⁻¹ within %f to 100 m and %f to 1 km', (from, to, near, far) => {
    const band = wavenumberBand(from, to);
    for (const row of inRange) {
      const layer = humidAir({
        temperature: row.T_K! as AnyKelvin,
        relativeHumidity: row.RH_percent! / 100,
        distance: row.L_m!,
        pressure: row.p_Pa!,
        carbonDioxide: row.CO2_ppm! * 1e-6,
      });
      const off = Math.abs(layer.bandTransmittance(band, 300 as AnyKelvin) - row[`tauC_${from}-${to}`]!);
      expect(off, JSON.stringify(row)).toBeLessThan(row.L_m! <= 100 ? near : far);
    }
  });
});

// Roberts, Selby and Biberman 1976 (from memory): 20 °C, 50 %: 0.110 km⁻¹ at 900 cm⁻¹, 0.078 at 1000.
it.each([
  [900, 0.11],
  [1000, 0.078],
])(
  'the water continuum at %i cm⁻¹ is within 35 %% of Roberts, Selby and Biberman',
  (wavenumber, perKilometre) => {
    const curve = air(1000).spectralTransmittance() as { wavenumber: number[]; value: number[] };
    const exponent = -Math.log(curve.value[curve.wavenumber.lastIndexOf(wavenumber)]!);
    expect(Math.abs(exponent / perKilometre - 1)).toBeLessThan(0.35);
  },
);

describe('properties', () => {
  it('transmittance falls with distance and with humidity, and is 1 without distance', () => {
    const meters = fc.double({ min: 0.1, max: 1000, noNaN: true });
    fc.assert(
      fc.property(meters, fc.double({ min: 0, max: 0.9, noNaN: true }), (distance, relativeHumidity) => {
        const tau = (d: number, rh: number): number =>
          air(d, 25, { relativeHumidity: rh }).bandTransmittance(longWave, celsius(50));
        expect(tau(distance * 1.1, relativeHumidity)).toBeLessThan(tau(distance, relativeHumidity));
        expect(tau(distance, relativeHumidity + 0.1)).toBeLessThan(tau(distance, relativeHumidity));
      }),
      { numRuns: 20 },
    );
    expect(shown([air(0)])).toBeCloseTo(shown([]), 9);
    expect(air(1e-6).bandTransmittance(longWave, celsius(50))).toBeGreaterThan(1 - 1e-6);
  });

  it('splitting a stretch of one temperature changes nothing, also around a clear window', () => {
    const whole = shown([air(100)]);
    expect(shown([air(40), air(60)])).toBeCloseTo(whole, 9);
    expect(shown([air(40), infraredWindow({ transmittance: 1 }), air(60)])).toBeCloseTo(whole, 9);
    expect(shown([air(50), air(30), air(20)])).toBeCloseTo(whole, 9);
  });

  it('the same air as a given transmittance would multiply: the band model must not', () => {
    const [half, whole] = [50, 100].map((distance) => air(distance).bandTransmittance(longWave, celsius(50)));
    expect(half! * half!).toBeLessThan(whole! - 0.005);
  });

  it('a 60 °C stretch behind 10 °C air differs from the swapped order', () => {
    expect(Math.abs(shown([air(50, 60), air(50, 10)]) - shown([air(50, 10), air(50, 60)]))).toBeGreaterThan(
      0.1,
    );
  });

  it('everything at one temperature gives that temperature', () => {
    const isothermal = { ...base, path: [air(300, 20)] };
    expect(apparentTemperature(celsius(20), isothermal)).toBeCloseTo(293.15, 9);
  });

  it('sensitivities to air temperature and transmittance equal numerical derivatives, absorption held in place', () => {
    const path = [air(80, 30), air(20, 10)];
    const apparent = celsius(70);
    const { sensitivities } = measurementModel({ ...base, path });
    const fixed = path.map((layer, k) => layer.transmittanceBehind(path.slice(k + 1)) as Curve);
    const surface = (kelvin: number, shift: number): number => {
      const [first, second] = fixed as [Curve, Curve];
      const shifted = { ...second, value: second.value.map((value) => Math.max(0, value + shift)) };
      const held = [
        givenAir({ transmittance: first, temperature: kelvin as AnyKelvin }),
        givenAir({ transmittance: shifted, temperature: celsius(10) }),
      ];
      return measurementModel({ ...base, path: held }).surfaceTemperature(apparent);
    };
    const own = sensitivities(apparent);
    expect((surface(304.15, 0) - surface(302.15, 0)) / 2).toBeCloseTo(own['path[0].temperature']!, 4);
    expect((surface(303.15, 0) - surface(303.15, -1e-4)) / 1e-4).toBeCloseTo(
      own['path[1].transmittance']!,
      1,
    );
  });
});

describe('uncertainty and cautions', () => {
  it('the model’s own uncertainty is a row of the budget, and can be set', () => {
    const conditions = { ...base, path: [air(200)] };
    const row = measurementResult(celsius(60), conditions).budget.find(
      ({ name }) => name === 'path[0].transmittance',
    )!;
    const transmittance = air(200).bandTransmittance(longWave, celsius(60));
    expect(row.standardUncertainty).toBeCloseTo(airStandardUncertainty(transmittance), 12);
    expect(row.standardUncertainty).toBeCloseTo(0.06 * (1 - transmittance), 12);
    expect(row.origin).toContain('air band model');
    const none = measurementResult(celsius(60), conditions, { path: [{ transmittance: 0 }] });
    expect(none.standardUncertainty).toBe(0);
  });

  it('haze carries 100 %', () => {
    const [clear, hazy] = [{}, { visibility: 23 }].map(
      (rest) =>
        measurementResult(celsius(60), { ...base, path: [air(500, 20, rest)] }).budget[0]!
          .standardUncertainty,
    );
    const exponent = (3.912 / 23) * (0.55 / 11) ** 1.3 * 0.5;
    const own = air(500, 20, { visibility: 23 }).bandTransmittance(longWave, celsius(60));
    expect(hazy).toBeCloseTo(Math.hypot(airStandardUncertainty(own), own * exponent), 9);
    expect(hazy).toBeGreaterThan(clear!);
  });

  it('a filter of a few bins raises a caution with its uncertainty', () => {
    const narrow = { ...base, band: topHatBand(10.4, 10.7), path: [air(100)] };
    const { cautions } = measurementResult(celsius(60), narrow);
    expect(cautions.find(({ code }) => code === 'narrow-band')?.message).toMatch(
      /27 cm⁻¹ wide.*uncertain by 0\.\d+/,
    );
    expect(measurementResult(celsius(60), { ...base, path: [air(100)] }).cautions).toEqual([]);
  });

  it('a record with computed air re-computes to the same number', () => {
    const result = measurementResult(
      celsius(60),
      { ...base, path: [air(100, 25, { visibility: 30 })] },
      { apparent: 1 },
    );
    const record = JSON.parse(JSON.stringify(result));
    expect(recompute(record, { humidAir }).temperature).toBe(result.temperature);
    expect(() => recompute(record)).toThrow(
      expect.objectContaining({
        code: 'missing-input',
        path: 'path[0].kind',
        hint: expect.stringContaining('humidAir'),
      }),
    );
  });
});

describe('bad input', () => {
  it.each([
    ['Celsius as kelvin', { temperature: 20 as AnyKelvin }, 'celsius(20)'],
    ['too hot', { temperature: celsius(80) }, '243.15…333.15 K'],
    ['percent', { relativeHumidity: 50 }, 'Write 0.5 for 50 %'],
    ['too far', { distance: 2500 }, '0…2000 m'],
    ['too thin', { pressure: 50_000 }, '60000…105000 Pa'],
    ['carbon dioxide in ppm', { carbonDioxide: 400 }, '0.0003…0.001'],
    ['fog', { visibility: 3 }, 'Measure the transmittance'],
    ['an unknown key', { humidity: 0.5 }, 'Did you mean'],
    ['not a number', { distance: Number.NaN }, 'finite'],
  ] as const)('%s', (_, change, words) => {
    const input = {
      temperature: celsius(20),
      relativeHumidity: 0.5,
      distance: 10,
      ...change,
    } as HumidAirInput;
    expect(() => humidAir(input)).toThrow(
      expect.objectContaining({ message: expect.stringContaining(words) }),
    );
  });

  it('haze above 0.05 in the band is refused, below it is not', () => {
    const hazy = [air(1500, 20, { visibility: 8 })];
    expect(() => measurementModel({ ...base, band: topHatBand(3, 5), path: hazy })).toThrow(
      expect.objectContaining({ code: 'out-of-range', path: 'humidAir.visibility' }),
    );
    expect(measurementModel({ ...base, path: hazy }).gain).toBe(0.9);
  });

  it('a band beyond the model is refused', () => {
    expect(() => measurementModel({ ...base, band: topHatBand(8, 16), path: [air(10)] })).toThrow(
      /covers the band/,
    );
  });
});
