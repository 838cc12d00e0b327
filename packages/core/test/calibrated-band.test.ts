import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Band, calibratedBand, topHatBand } from '../src/band.js';
import { celsius, kelvin } from '../src/units.js';
import { temperatures } from './support/random-bands.js';
import { fixtureJson, relativeError } from './support/reference.js';

describe('calibrated bands', () => {
  it('K1/K2 give the brightness temperatures of the satellite scene (constants published in metadata.txt, figures computed with NumPy to 7 decimals)', () => {
    const { bands: scene } = fixtureJson<{
      bands: { scale: number; offset: number; k1: number; k2: number }[];
    }>('satellite/scene.json');
    const { bands: expected } = fixtureJson<{
      bands: Record<
        'counts' | 'radiance_W_m2_sr_um' | 'brightness_temperature_K',
        { least: number; greatest: number; mean: number; at_20_20: number }
      >[];
    }>('satellite/expected.json');
    scene.forEach(({ scale, offset, k1, k2 }, i) => {
      const band = calibratedBand({ form: 'k1k2', k1, k2, radianceUnit: 'W·m⁻²·sr⁻¹·µm⁻¹' });
      expect(band.radianceUnit).toBe('W·m⁻²·sr⁻¹·µm⁻¹');
      const figures = expected[i]!;
      for (const place of ['least', 'greatest', 'at_20_20'] as const) {
        const radiance = scale * figures.counts[place] + offset;
        expect(radiance).toBeCloseTo(figures.radiance_W_m2_sr_um[place], 7);
        const brightness = figures.brightness_temperature_K[place];
        expect(Math.abs(band.temperature(radiance) - brightness)).toBeLessThanOrEqual(6e-8);
        expect(relativeError(band.radiance(kelvin(brightness)), radiance)).toBeLessThan(1e-9);
      }
    });
    expect(scene).toHaveLength(2);
  });

  const textbook = fixtureJson<
    {
      band: [number, number];
      A_um: number;
      B_umK: number;
      C_tied_at_100C: number;
      t_C: number[];
      err_K_formulaAB_C_at_100C: number[];
      'fit_-40..300C': { C: number; A_um: number; B_umK: number; max_abs_err_K: number };
    }[]
  >('reference/sakuma-hattori.json');

  /** Error of a calibration as the file counts it, to first order: (signal − L)/L′. [K] */
  const errorAt = (calibrated: Band, truth: Band, degrees: number): number => {
    const temperature = celsius(degrees);
    return (calibrated.radiance(temperature) - truth.radiance(temperature)) / truth.slope(temperature);
  };

  // Formula published (CCT-WG5 2008); coefficients and errors computed. 1e-10 K: the rounding of both sides.
  it.each(textbook)(
    'Sakuma–Hattori, textbook A and B, $band µm: errs by what the file says (1e-10 K)',
    (row) => {
      const truth = topHatBand(...row.band);
      const { A_um: a, B_umK: b, C_tied_at_100C: c } = row;
      const band = calibratedBand({ form: 'sakuma-hattori', a, b, c, radianceUnit: 'W·m⁻²·sr⁻¹' });
      expect(row.t_C).toHaveLength(11);
      row.t_C.forEach((degrees, i) => {
        const stated = row.err_K_formulaAB_C_at_100C[i]!;
        expect(Math.abs(errorAt(band, truth, degrees) - stated)).toBeLessThanOrEqual(1e-10);
      });
    },
  );

  it.each(textbook)(
    'Sakuma–Hattori, fitted, $band µm: largest error up to 300 °C is the file’s (1e-10 K)',
    (row) => {
      const truth = topHatBand(...row.band);
      const { A_um: a, B_umK: b, C: c, max_abs_err_K: stated } = row['fit_-40..300C'];
      const band = calibratedBand({ form: 'sakuma-hattori', a, b, c });
      const errors = row.t_C
        .filter((degrees) => degrees <= 300)
        .map((degrees) => Math.abs(errorAt(band, truth, degrees)));
      expect(Math.abs(Math.max(...errors) - stated)).toBeLessThanOrEqual(1e-10);
    },
  );

  it('textbook A and B convert a radiance wrongly by 0.6 K at 300 °C, 8–14 µm, as the docs warn', () => {
    const { A_um: a, B_umK: b, C_tied_at_100C: c } = textbook[0]!;
    const radiance = topHatBand(8, 14).radiance(celsius(300));
    const converted = calibratedBand({ form: 'sakuma-hattori', a, b, c }).temperature(radiance);
    expect(converted - celsius(300)).toBeCloseTo(0.61, 2);
  });

  const calibrations = fc.oneof(
    fc.record({
      form: fc.constant('k1k2' as const),
      k1: fc.double({ min: 1, max: 1e6, noNaN: true }),
      k2: fc.double({ min: 900, max: 7000, noNaN: true }),
    }),
    fc.record({
      form: fc.constant('sakuma-hattori' as const),
      a: fc.double({ min: 2, max: 15, noNaN: true }),
      b: fc.double({ min: -100, max: 300, noNaN: true }),
      c: fc.double({ min: 1, max: 1e6, noNaN: true }),
    }),
  );

  it('invert exactly, rise, and have their numerical slope', () => {
    fc.assert(
      fc.property(calibrations, temperatures(213, 3273), (calibration, value) => {
        const band = calibratedBand(calibration);
        const at = (t: number): number => band.radiance(kelvin(t));
        expect(Math.abs(band.temperature(at(value)) - value)).toBeLessThanOrEqual(1e-9);
        expect(at(value + 0.001)).toBeGreaterThan(at(value));
        const h = 1e-3 * value;
        const difference =
          (8 * (at(value + h) - at(value - h)) - (at(value + 2 * h) - at(value - 2 * h))) / (12 * h);
        // c₂/(aT + b) ≤ 44 here; (44·1e-3)⁴/30 = 1.2e-7.
        expect(relativeError(band.slope(kelvin(value)), difference)).toBeLessThanOrEqual(5e-7);
        expect(band.fast).toBe(band.exact);
      }),
    );
  });

  it('keep to the range they are stated for', () => {
    const range = { from: celsius(0), to: celsius(100) };
    const band = calibratedBand({ form: 'k1k2', k1: 700, k2: 1300, range });
    expect(band.range).toEqual({ from: 273.15, to: 373.15 });
    expect(band.limits).toBeUndefined();
    expect(band.responsivity).toBeUndefined();
    const back = band.temperature(band.radiance(range.to));
    expect(back).toBeLessThanOrEqual(373.15);
    (range as { from: number }).from = 1;
    expect(band.descriptor).toMatchObject({ range: { from: 273.15 } });
  });
});
