import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type Band, bandFromDescriptor, isBand, topHatBand } from '../src/band.js';
import type { BandDescriptor } from '../src/descriptor.js';
import { bandFraction } from '../src/planck.js';
import { celsius, kelvin } from '../src/units.js';
import { integral, textbookPlanck } from './support/integral.js';
import { bandOf, bands, limits, lines, samples, temperatures } from './support/random-bands.js';
import { fixtureCsv, fixtureJson, relativeError, Worst } from './support/reference.js';

describe('four flat bands against the table in-band radiance', () => {
  // Computed twice: exponential series (Chang and Rhee 1984) and mpmath quadrature with 40 digits, which agree to
  // 2e-31. 15 digits are printed.
  const table = fixtureCsv('reference/inband-radiance.csv', [
    'lambda1_um',
    'lambda2_um',
    't_C',
    'T_K',
    'L_W_m2_sr',
    'dLdT_W_m2_sr_K',
    'Lphoton_ph_s_m2_sr',
    'fraction_of_sigmaT4_over_pi',
  ]);
  const found = new Set<string>();
  const worst = {
    radiance: new Worst(),
    slope: new Worst(),
    photons: new Worst(),
    fraction: new Worst(),
    inverse: new Worst(),
    celsius: new Worst(),
  };
  for (const row of table) {
    const band = topHatBand(row.lambda1_um, row.lambda2_um);
    const temperature = kelvin(row.T_K);
    const at = `${row.lambda1_um}–${row.lambda2_um} µm, ${row.T_K} K`;
    found.add(`${row.lambda1_um}–${row.lambda2_um}`);
    worst.radiance.add(relativeError(band.radiance(temperature), row.L_W_m2_sr), at);
    worst.slope.add(relativeError(band.slope(temperature), row.dLdT_W_m2_sr_K), at);
    worst.photons.add(relativeError(band.photonRadiance(temperature), row.Lphoton_ph_s_m2_sr), at);
    const fraction = bandFraction(row.lambda2_um * row.T_K) - bandFraction(row.lambda1_um * row.T_K);
    worst.fraction.add(fraction - row.fraction_of_sigmaT4_over_pi, at);
    worst.inverse.add(band.temperature(row.L_W_m2_sr) - row.T_K, at);
    worst.celsius.add(celsius(row.t_C) - row.T_K, at);
  }

  it('the table has all four bands, −40…1500 °C', () => {
    expect([...found].sort()).toEqual(['3–5', '7.5–13', '8–12', '8–14']);
    expect(table).toHaveLength(116);
    worst.celsius.within(1e-12 * 1773);
  });
  it('radiance (rtol 1e-10)', () => worst.radiance.within(1e-10));
  it('slope (rtol 1e-10)', () => worst.slope.within(1e-10));
  it('photon radiance (rtol 1e-10)', () => worst.photons.within(1e-10));
  it('fraction of σT⁴/π, as a difference of band fractions (atol 1e-14)', () => worst.fraction.within(1e-14));
  it('temperature of the printed radiance (1e-9 K)', () => worst.inverse.within(1e-9));
});

describe('eight bands nobody listed, against vectors in 45-digit arithmetic', () => {
  // Computed: fixtures/generate/vectors.py (mpmath Gauss–Legendre, agreeing with series and adaptive quadrature to
  // 1e-24). 2e-14: what double arithmetic leaves; the rounding of x = c₂/(λT) ≤ 34 comes out of exp(x) as 4e-15.
  const rounding = 2e-14;
  const vectors = fixtureJson<{
    bands: {
      name: string;
      band: BandDescriptor;
      middle_wavelength_um: number;
      rows: {
        temperature_K: number;
        radiance_W_m2_sr: number;
        slope_W_m2_sr_K: number;
        photon_radiance_per_s_m2_sr: number;
      }[];
    }[];
  }>('vectors/bands.json').bands;

  it('there are eight of them with 21 temperatures each', () => {
    expect(vectors.map(({ rows }) => rows.length)).toEqual(new Array(8).fill(21));
  });

  it.each(vectors)('$name: radiance, slope, photon radiance (rtol 2e-14), temperature (1e-9 K)', (vector) => {
    const band = bandFromDescriptor(vector.band);
    const { from, to } = band.limits!;
    expect((from + to) / 2).toBeCloseTo(vector.middle_wavelength_um, 12);
    const [radiance, slope, photons, inverse] = [new Worst(), new Worst(), new Worst(), new Worst()];
    for (const row of vector.rows) {
      const temperature = kelvin(row.temperature_K);
      const at = `${row.temperature_K} K`;
      radiance.add(relativeError(band.radiance(temperature), row.radiance_W_m2_sr), at);
      slope.add(relativeError(band.slope(temperature), row.slope_W_m2_sr_K), at);
      photons.add(relativeError(band.photonRadiance(temperature), row.photon_radiance_per_s_m2_sr), at);
      inverse.add(band.temperature(row.radiance_W_m2_sr) - row.temperature_K, at);
    }
    radiance.within(rounding);
    slope.within(rounding);
    photons.within(rounding);
    inverse.within(1e-9);
  });
});

describe('accuracy of the quadrature over the whole range 150…3500 K', () => {
  it('a band agrees with the difference of band fractions, L = σT⁴/π·ΔF (rtol 1e-10 of the larger part)', () => {
    fc.assert(
      fc.property(limits, temperatures(150, 3500), ([from, to], value) => {
        const whole = (5.67037441918443e-8 * value ** 4) / Math.PI; // σ: published, CODATA
        const series = bandFraction(to * value) - bandFraction(from * value);
        const radiance = topHatBand(from, to).radiance(kelvin(value));
        // The difference of two nearly equal fractions is good to one rounding of the larger one only.
        const tolerance = 1e-10 * radiance + 1e-14 * whole * bandFraction(to * value);
        expect(Math.abs(radiance - whole * series)).toBeLessThanOrEqual(tolerance);
      }),
      { numRuns: 300 },
    );
  });

  it('a sampled band is the sum of its linear pieces, by adaptive quadrature of the textbook form (rtol 1e-10)', () => {
    fc.assert(
      fc.property(samples, fc.boolean(), temperatures(150, 3500), (given, photon, value) => {
        const { abscissa, responsivity } = given;
        const edges = given.in === 'wavelength' ? abscissa : abscissa.map((x) => 1e4 / x);
        const middle = (Math.min(...edges) + Math.max(...edges)) / 2;
        let sum = 0;
        for (let i = 1; i < abscissa.length; i++) {
          const [x0, x1] = [abscissa[i - 1]!, abscissa[i]!];
          const [y0, y1] = [responsivity[i - 1]!, responsivity[i]!];
          const piece = (wavelength: number): number => {
            const x = given.in === 'wavelength' ? wavelength : 1e4 / wavelength;
            const weight = (y0 * (x1 - x) + y1 * (x - x0)) / (x1 - x0);
            return weight * (photon ? wavelength / middle : 1) * textbookPlanck(wavelength, value);
          };
          sum += Math.abs(integral(piece, edges[i - 1]!, edges[i]!));
        }
        const band = bandOf(given, photon ? 'photon' : 'energy');
        expect(relativeError(band.radiance(kelvin(value)), sum)).toBeLessThanOrEqual(1e-10);
      }),
      { numRuns: 60 },
    );
  });
});

describe('temperature ↔ radiance, any band inside 2–15 µm', () => {
  const roundTrip = (from: number, to: number, tolerance: number): void => {
    fc.assert(
      fc.property(bands, temperatures(from, to), (band, value) => {
        expect(Math.abs(band.temperature(band.radiance(kelvin(value))) - value)).toBeLessThanOrEqual(
          tolerance,
        );
      }),
      { numRuns: 500 },
    );
  };

  it('temperature(radiance(T)) is within 0.1 mK of T, −40…2000 °C', () => roundTrip(233.15, 2273.15, 1e-4));
  it('and within 1 mK, −60…3000 °C', () => roundTrip(213.15, 3273.15, 1e-3));
  // What it does in truth: Newton's method to 3e-11 K, and at the very ends of the range, where its step leaves the
  // bracket for rounding, bisection to 1e-12 of T, which is 3.5e-9 K.
  it('and in fact within 4e-9 K, 150…3500 K', () => roundTrip(150, 3500, 4e-9));

  it('the ends of the range come back as temperatures of the range', () => {
    fc.assert(
      fc.property(fc.oneof(bands, lines), (band) => {
        const { from, to } = band.range;
        for (const end of [from, to]) {
          const back = band.temperature(band.radiance(end));
          expect(back).toBeGreaterThanOrEqual(from);
          expect(back).toBeLessThanOrEqual(to);
          expect(Math.abs(back - end)).toBeLessThan(4e-9);
        }
      }),
    );
  });

  it('radiance rises with temperature', () => {
    fc.assert(
      fc.property(bands, temperatures(150, 3499), (band, value) => {
        expect(band.radiance(kelvin(value + 0.001))).toBeGreaterThan(band.radiance(kelvin(value)));
      }),
    );
  });

  it('slope is the numerical derivative (fourth order, step 1e-3 of T; rtol 1e-7)', () => {
    // Error of the difference: (x·1e-3)⁴/30 with x = c₂/(λT) ≤ 34, which is 5e-8.
    fc.assert(
      fc.property(bands, temperatures(213, 3273), (band, value) => {
        const h = 1e-3 * value;
        const at = (t: number): number => band.radiance(kelvin(t));
        const difference =
          (8 * (at(value + h) - at(value - h)) - (at(value + 2 * h) - at(value - 2 * h))) / (12 * h);
        expect(relativeError(band.slope(kelvin(value)), difference)).toBeLessThanOrEqual(1e-7);
      }),
    );
  });

  it('adjacent bands add up (rtol 1e-12)', () => {
    fc.assert(
      fc.property(
        limits,
        fc.double({ min: 0.01, max: 0.99 }),
        temperatures(150, 3500),
        ([a, c], share, value) => {
          const b = a + share * (c - a);
          fc.pre(b > a && b < c);
          const t = kelvin(value);
          const sum = topHatBand(a, b).radiance(t) + topHatBand(b, c).radiance(t);
          expect(relativeError(sum, topHatBand(a, c).radiance(t))).toBeLessThanOrEqual(1e-12);
        },
      ),
    );
  });

  it('a narrow band is its width times the single wavelength in its middle (second order in the width)', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 2, max: 15, noNaN: true }),
        temperatures(233, 2273),
        (wavelength, value) => {
          const width = 1e-4 * wavelength;
          const narrow = topHatBand(wavelength - width / 2, wavelength + width / 2).radiance(kelvin(value));
          const { radiance } = bandFromDescriptor({ kind: 'monochromatic', wavelength });
          // x²·(width/λ)²/24 with x ≤ 31: 4e-7 and less.
          expect(relativeError(narrow, width * radiance(kelvin(value)))).toBeLessThanOrEqual(1e-6);
        },
      ),
    );
  });
});

describe('weighting by a curve', () => {
  const flat = (band: Band, value: number) => {
    const { from, to } = band.limits!;
    return { wavelength: from === to ? [from - 1, from + 1] : [from, to], value: [value, value] };
  };

  it('by 1 changes nothing, to the bit; by c it scales, never renormalised (rtol 1e-14)', () => {
    const share = fc.double({ min: 1e-6, max: 1, noNaN: true });
    fc.assert(
      fc.property(bands, share, temperatures(150, 3500), (band, c, value) => {
        const t = kelvin(value);
        expect(band.weightedBy(flat(band, 1)).radiance(t)).toBe(band.radiance(t));
        const weighted = band.weightedBy(flat(band, c));
        expect(relativeError(weighted.radiance(t), c * band.radiance(t))).toBeLessThanOrEqual(1e-14);
        expect(relativeError(weighted.slope(t), c * band.slope(t))).toBeLessThanOrEqual(1e-14);
        expect(relativeError(weighted.photonRadiance(t), c * band.photonRadiance(t))).toBeLessThanOrEqual(
          1e-14,
        );
        expect(weighted.radianceUnit).toBe(band.radianceUnit);
      }),
    );
  });

  it('with a step at 10 µm is the sum of two flat bands, each with its own weight (rtol 1e-12)', () => {
    const curve = { wavelength: [8, 10, 10, 14], value: [0.3, 0.3, 0.9, 0.9] };
    const t = celsius(80);
    const sum = 0.3 * topHatBand(8, 10).radiance(t) + 0.9 * topHatBand(10, 14).radiance(t);
    expect(relativeError(topHatBand(8, 14).weightedBy(curve).radiance(t), sum)).toBeLessThanOrEqual(1e-12);
  });

  it('twice is by the product: two curves in a row agree with adaptive quadrature (rtol 1e-11)', () => {
    const first = { wavelength: [7, 9, 15], value: [0.2, 1, 0.4] };
    const second = { wavenumber: [600, 1000, 1500], value: [1, 0.5, 0.9] };
    const twice = topHatBand(8, 14).weightedBy(first).weightedBy(second);
    const weight = (wavelength: number): number => {
      const one = wavelength < 9 ? 0.2 + 0.4 * (wavelength - 7) : 1 - 0.1 * (wavelength - 9);
      const wavenumber = 1e4 / wavelength;
      const two = wavenumber < 1000 ? 1 - (wavenumber - 600) / 800 : 0.5 + (wavenumber - 1000) / 1250;
      return one * two;
    };
    const pieces = [8, 9, 10, 14];
    const sum = pieces
      .slice(1)
      .reduce(
        (total, to, i) => total + integral((x) => weight(x) * textbookPlanck(x, 350), pieces[i]!, to, 1e-13),
        0,
      );
    expect(relativeError(twice.radiance(kelvin(350)), sum)).toBeLessThanOrEqual(1e-11);
  });

  it('takes a curve in wavenumbers that ends at the band’s limits but for rounding', () => {
    fc.assert(
      fc.property(limits, ([from, to]) => {
        const curve = { wavenumber: [1e4 / to, 1e4 / from], value: [1, 1] };
        const weighted = topHatBand(from, to).weightedBy(curve);
        const t = kelvin(300);
        // A limit moved by one rounding moves the radiance by a share of 1e-16·λ/width, width ≥ 1 nm: 2e-12.
        expect(relativeError(weighted.radiance(t), topHatBand(from, to).radiance(t))).toBeLessThan(1e-11);
      }),
    );
  });

  it('a single wavelength takes the value of the curve there', () => {
    const line = bandFromDescriptor({ kind: 'monochromatic', wavelength: 10 });
    const weighted = line.weightedBy({ wavelength: [8, 12], value: [0.2, 0.6] });
    expect(relativeError(weighted.radiance(kelvin(300)), 0.4 * line.radiance(kelvin(300)))).toBeLessThan(
      1e-14,
    );
  });

  it('keeps a copy: changing the caller’s lists later changes neither band nor descriptor', () => {
    const value = [0.5, 0.5];
    const weighted = topHatBand(8, 14).weightedBy({ wavelength: [8, 14], value });
    value[0] = 1;
    expect(weighted.descriptor).toMatchObject({ curve: { value: [0.5, 0.5] } });
  });

  it('by nothing leaves a band without radiance, which no temperature solves', () => {
    const dark = topHatBand(8, 14).weightedBy({ wavelength: [8, 14], value: [0, 0] });
    expect(dark.radiance(kelvin(300))).toBe(0);
    expect(() => dark.temperature(0)).toThrow(/expected a radiance of/);
  });
});

describe('a band as an object', () => {
  it('is frozen, knows itself, and builds its table once', () => {
    const band = topHatBand(8, 14);
    expect(Object.isFrozen(band)).toBe(true);
    expect(Object.isFrozen(band.descriptor)).toBe(true);
    expect(isBand(band)).toBe(true);
    expect(band.kind).toBe('top-hat');
    expect(band.limits).toEqual({ from: 8, to: 14 });
    expect(band.range).toEqual({ from: 150, to: 3500 });
    expect(band.fast).toBe(band.fast);
  });

  it('nothing else is a band', () => {
    for (const other of [null, 8, 'top-hat', {}, topHatBand(8, 14).descriptor])
      expect(isBand(other)).toBe(false);
  });
});
