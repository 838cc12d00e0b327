import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bandFraction,
  blackbodyExitance,
  peakWavelength,
  photonsPerJoule,
  planck,
  planckSlope,
  spectralPhotonRadiance,
  spectralRadiance,
  spectralRadiancePerWavenumber,
  spectralRadianceSlope,
  spectralTemperature,
} from '../src/planck.js';
import { kelvin } from '../src/units.js';
import { integral, textbookPlanck } from './support/integral.js';
import { fixtureCsv, fixtureJson, relativeError, Worst } from './support/reference.js';
import { type BadInput, expectRefused, untyped } from './support/thrown.js';

describe('spectral radiance against tables', () => {
  // Computed; astropy 5.2.1 BlackBody agrees to 1.3e-14. 15 wavelengths × 12 temperatures, 15 digits printed.
  const table = fixtureCsv('reference/spectral-radiance.csv', [
    'lambda_um',
    'T_K',
    'Llambda_W_m2_sr_um',
    'dLlambda_dT_W_m2_sr_um_K',
  ]);

  it('radiance, slope and inverse agree with spectral-radiance.csv (rtol 1e-12)', () => {
    expect(table).toHaveLength(180);
    const [radiance, slope, inverse] = [new Worst(), new Worst(), new Worst()];
    for (const row of table) {
      const { lambda_um: wavelength, Llambda_W_m2_sr_um: printed } = row;
      const at = `${wavelength} µm, ${row.T_K} K`;
      const temperature = kelvin(row.T_K);
      radiance.add(relativeError(spectralRadiance(wavelength, temperature), printed), at);
      slope.add(
        relativeError(spectralRadianceSlope(wavelength, temperature), row.dLlambda_dT_W_m2_sr_um_K),
        at,
      );
      inverse.add(relativeError(spectralTemperature(wavelength, printed), row.T_K), at);
    }
    radiance.within(1e-12);
    slope.within(1e-12);
    inverse.within(1e-12);
  });

  // Published: printed output of an independent implementation with older constants (tolerance 1e-6), and the same
  // with the exact constants, to its 10 printed digits.
  it.each([
    [300, 9573176.935, 9573180.197],
    [301, 9714686.576, 9714689.879],
  ])(
    'at 11 µm and %d K agrees with an independent implementation (rtol 1e-6), exact constants (rtol 1e-10)',
    (temperature, older, exact) => {
      const perMetre = spectralRadiance(11, kelvin(temperature)) * 1e6;
      expect(relativeError(perMetre, older)).toBeLessThanOrEqual(1e-6);
      expect(relativeError(perMetre, exact)).toBeLessThanOrEqual(1e-10);
    },
  );
});

describe('spectral radiance against vectors in 45-digit arithmetic', () => {
  // Computed: fixtures/generate/vectors.py (mpmath). The rounding of x = c₂/(λT) ≤ 34 comes out of exp(x) as
  // x·1.1e-16 = 4e-15; 2e-14 leaves room for the rest of the operations and for the exp of another engine.
  const rounding = 2e-14;
  const vectors = fixtureJson<{
    per_wavelength: Record<string, number>[];
    per_wavenumber: Record<string, number>[];
    band_fraction: Record<string, number>[];
  }>('vectors/spectral.json');

  it('per wavelength: energy, slope, photons (rtol 2e-14)', () => {
    const [radiance, slope, photons] = [new Worst(), new Worst(), new Worst()];
    for (const row of vectors.per_wavelength) {
      const wavelength = row.wavelength_um!;
      const temperature = kelvin(row.temperature_K!);
      const at = `${wavelength} µm, ${temperature} K`;
      const { spectral_radiance_W_m2_sr_um, slope_W_m2_sr_um_K } = row;
      radiance.add(
        relativeError(spectralRadiance(wavelength, temperature), spectral_radiance_W_m2_sr_um!),
        at,
      );
      slope.add(relativeError(spectralRadianceSlope(wavelength, temperature), slope_W_m2_sr_um_K!), at);
      photons.add(
        relativeError(
          spectralPhotonRadiance(wavelength, temperature),
          row.photon_spectral_radiance_per_s_m2_sr_um!,
        ),
        at,
      );
    }
    expect(radiance.count).toBe(49);
    radiance.within(rounding);
    slope.within(rounding);
    photons.within(rounding);
  });

  it('per wavenumber, with the Jacobian (rtol 2e-14)', () => {
    const worst = new Worst();
    for (const row of vectors.per_wavenumber) {
      const value = spectralRadiancePerWavenumber(row.wavenumber_per_cm!, kelvin(row.temperature_K!));
      worst.add(
        relativeError(value, row.spectral_radiance_W_m2_sr_per_cm!),
        `${row.wavenumber_per_cm} cm⁻¹, ${row.temperature_K} K`,
      );
    }
    expect(worst.count).toBe(42);
    worst.within(rounding);
  });

  it('band fraction (rtol 2e-14)', () => {
    const worst = new Worst();
    for (const row of vectors.band_fraction) {
      worst.add(
        relativeError(bandFraction(row.wavelength_temperature_um_K!), row.fraction_below!),
        `${row.wavelength_temperature_um_K} µm·K`,
      );
    }
    expect(worst.count).toBe(8);
    worst.within(rounding);
  });
});

describe('band fraction, exitance, peak', () => {
  // Computed; 12 digits printed.
  it('agrees with band-fraction.csv at all arguments (rtol 1e-9)', () => {
    const worst = new Worst();
    const table = fixtureCsv('reference/band-fraction.csv', ['lambdaT_um_K', 'F_0_lambdaT']);
    for (const row of table) {
      worst.add(relativeError(bandFraction(row.lambdaT_um_K), row.F_0_lambdaT), `${row.lambdaT_um_K} µm·K`);
    }
    expect(worst.count).toBe(69);
    worst.within(1e-9);
  });

  // From memory: Incropera, Table 12.1. It differs from the computed table by up to 4.2e-5, so 5e-5.
  it.each([
    [1000, 0.000321],
    [2000, 0.066728],
    [2898, 0.250108],
    [3000, 0.273232],
    [5000, 0.633747],
    [10000, 0.914199],
  ])('at λT = %d µm·K agrees with the handbook row %d (from memory; atol 5e-5)', (product, fraction) => {
    expect(Math.abs(bandFraction(product) - fraction)).toBeLessThanOrEqual(5e-5);
  });

  it('joins its two series at x = 1 without a step, and ends at 0 and 1', () => {
    const join = 14387.7687750393; // c₂ in µm·K
    const below = bandFraction(join * (1 - 1e-12));
    const above = bandFraction(join * (1 + 1e-12));
    expect(above - below).toBeGreaterThan(0);
    expect(above - below).toBeLessThan(1e-12);
    expect(bandFraction(1)).toBe(0);
    expect(bandFraction(1e12)).toBe(1);
  });

  it('rises with λT', () => {
    const product = fc.double({ min: 100, max: 1e6, noNaN: true });
    fc.assert(
      fc.property(product, fc.double({ min: 1.0001, max: 2, noNaN: true }), (at, factor) => {
        expect(bandFraction(at * factor)).toBeGreaterThan(bandFraction(at));
      }),
    );
  });

  it('σT⁴ is the integral of the textbook form of Planck’s law, times π (independent quadrature; rtol 1e-9)', () => {
    // In y = ln λ, from e⁻⁶ to e⁸ of the peak. Left out: nothing at the short end, and 2.4e-10 at the long one,
    // 1 − F = 5x³/π⁴ at λT = 8.6e6 µm·K.
    for (const temperature of [200, 300, 1000]) {
      const peak = peakWavelength(kelvin(temperature));
      const whole = integral(
        (y) => textbookPlanck(Math.exp(y), temperature) * Math.exp(y),
        Math.log(peak) - 6,
        Math.log(peak) + 8,
      );
      expect(relativeError(Math.PI * whole, blackbodyExitance(kelvin(temperature)))).toBeLessThan(1e-9);
    }
  });

  // Computed by hand from the published σ and b: σ·300⁴ and b/300.
  it('at 300 K: 459.300327953939 W/m², peak at 9.65923985061723 µm (σ, b published, CODATA)', () => {
    expect(relativeError(blackbodyExitance(kelvin(300)), 5.67037441918443e-8 * 81e8)).toBeLessThan(5e-15);
    expect(relativeError(peakWavelength(kelvin(300)), 2897.77195518517 / 300)).toBeLessThan(5e-15);
    expect(blackbodyExitance(kelvin(300))).toBeCloseTo(459.300327953939, 11);
  });

  it('the spectral radiance is largest at the peak wavelength', () => {
    fc.assert(
      fc.property(fc.double({ min: 150, max: 3500, noNaN: true }), (value) => {
        const temperature = kelvin(value);
        const peak = peakWavelength(temperature);
        const most = spectralRadiance(peak, temperature);
        expect(spectralRadiance(peak * 1.001, temperature)).toBeLessThan(most);
        expect(spectralRadiance(peak * 0.999, temperature)).toBeLessThan(most);
      }),
    );
  });
});

describe('properties of Planck’s law', () => {
  const wavelength = fc.double({ min: 1, max: 20, noNaN: true });
  const temperature = fc.double({ min: 213, max: 3500, noNaN: true });

  it('spectralTemperature is the inverse of spectralRadiance (rtol 1e-12)', () => {
    fc.assert(
      fc.property(wavelength, temperature, (lambda, value) => {
        const back = spectralTemperature(lambda, spectralRadiance(lambda, kelvin(value)));
        expect(relativeError(back, value)).toBeLessThanOrEqual(1e-12);
      }),
    );
  });

  it('agrees with its textbook form, written apart (rtol 1e-11: 1 − e⁻ˣ cancels at small x)', () => {
    fc.assert(
      fc.property(wavelength, temperature, (lambda, value) => {
        const here = spectralRadiance(lambda, kelvin(value));
        expect(relativeError(here, textbookPlanck(lambda, value))).toBeLessThanOrEqual(1e-11);
      }),
    );
  });

  it('the slope is the numerical derivative (central difference, step 1e-4 of T; rtol 1e-5)', () => {
    // Error of the difference: h²·L‴/6L′ ≈ (x·1e-4)²/6 with x = c₂/(λT) ≤ 68: 8e-6.
    fc.assert(
      fc.property(wavelength, temperature, (lambda, value) => {
        const step = 1e-4 * value;
        const difference =
          (spectralRadiance(lambda, kelvin(value + step)) - spectralRadiance(lambda, kelvin(value - step))) /
          (2 * step);
        expect(relativeError(spectralRadianceSlope(lambda, kelvin(value)), difference)).toBeLessThan(1e-5);
      }),
    );
  });

  it('rises with temperature at every wavelength', () => {
    fc.assert(
      fc.property(wavelength, temperature, (lambda, value) => {
        expect(spectralRadiance(lambda, kelvin(value * 1.0001))).toBeGreaterThan(
          spectralRadiance(lambda, kelvin(value)),
        );
      }),
    );
  });

  it('photons and wavenumbers are the same radiance: L·λ/(hc), and |dλ/dν̃| = λ²/10⁴', () => {
    fc.assert(
      fc.property(wavelength, temperature, (lambda, value) => {
        const energy = spectralRadiance(lambda, kelvin(value));
        // hc from the exact SI constants, in J·µm.
        const photonEnergy = (6.62607015e-34 * 299792458 * 1e6) / lambda;
        expect(
          relativeError(spectralPhotonRadiance(lambda, kelvin(value)) * photonEnergy, energy),
        ).toBeLessThan(1e-14);
        const perWavenumber = spectralRadiancePerWavenumber(1e4 / lambda, kelvin(value));
        // The wavelength is rounded twice on the way, which exp(x) magnifies by x ≤ 68.
        expect(relativeError(perWavenumber, (energy * lambda ** 2) / 1e4)).toBeLessThan(1e-13);
      }),
    );
  });

  it('the kernels for loops give what the checked functions give', () => {
    expect(planck(10, 300)).toBe(spectralRadiance(10, kelvin(300)));
    expect(planckSlope(10, 300)).toBe(spectralRadianceSlope(10, kelvin(300)));
    // Computed: 1 µm/(hc) with the exact constants.
    expect(relativeError(photonsPerJoule(1), 5.034116567542709e18)).toBeLessThan(1e-12);
  });

  it('is a number ≥ 0 for every λ and T of 1e-30…1e30, and 0 where it is too small for a double', () => {
    const power = fc.double({ min: -30, max: 30, noNaN: true }).map((exponent) => 10 ** exponent);
    fc.assert(
      fc.property(power, power, (lambda, value) => {
        expect(spectralRadiance(lambda, kelvin(value))).toBeGreaterThanOrEqual(0);
        expect(spectralRadianceSlope(lambda, kelvin(value))).toBeGreaterThanOrEqual(0);
        expect(bandFraction(lambda * value)).toBeGreaterThanOrEqual(0);
        expect(bandFraction(lambda * value)).toBeLessThanOrEqual(1);
      }),
    );
    expect(spectralRadiance(0.1, kelvin(100))).toBe(0);
  });
});

const T = kelvin(300);
const refused: readonly BadInput[] = [
  ['a wavelength as text', () => spectralRadiance(untyped('10'), T), 'wrong-type', 'wavelength', 'a number'],
  ['wavelength 0', () => spectralRadiance(0, T), 'out-of-range', 'wavelength', 'a number > 0, got 0'],
  [
    'a temperature of NaN',
    () => spectralRadiance(10, untyped(Number.NaN)),
    'not-finite',
    'temperature',
    'NaN',
  ],
  ['Celsius −5 as kelvin', () => spectralRadiance(10, untyped(-5)), 'out-of-range', 'temperature', '> 0'],
  [
    'no temperature',
    () => untyped(spectralRadiance(10, untyped(undefined))),
    'wrong-type',
    'temperature',
    'a number',
  ],
  ['slope at wavelength −1', () => spectralRadianceSlope(-1, T), 'out-of-range', 'wavelength', 'got -1'],
  ['slope at 0 K', () => spectralRadianceSlope(1, kelvin(0)), 'out-of-range', 'temperature', '> 0'],
  ['radiance 0', () => spectralTemperature(10, 0), 'out-of-range', 'radiance', 'a number > 0'],
  ['radiance −1', () => spectralTemperature(10, -1), 'out-of-range', 'radiance', 'a number > 0'],
  ['radiance as text', () => spectralTemperature(10, untyped('9')), 'wrong-type', 'radiance', 'got "9"'],
  ['wavelength 0 in the inverse', () => spectralTemperature(0, 1), 'out-of-range', 'wavelength', '> 0'],
  [
    'photons at Infinity µm',
    () => spectralPhotonRadiance(Number.POSITIVE_INFINITY, T),
    'not-finite',
    'wavelength',
    'finite',
  ],
  ['wavenumber 0', () => spectralRadiancePerWavenumber(0, T), 'out-of-range', 'wavenumber', '> 0'],
  [
    'wavenumber as list',
    () => spectralRadiancePerWavenumber(untyped([1]), T),
    'wrong-type',
    'wavenumber',
    '[1]',
  ],
  [
    'temperature as object',
    () => spectralRadiancePerWavenumber(1000, untyped({})),
    'wrong-type',
    'temperature',
    'an empty object',
  ],
  ['fraction of 0', () => bandFraction(0), 'out-of-range', 'wavelengthTemperature', '> 0'],
  ['fraction of NaN', () => bandFraction(Number.NaN), 'not-finite', 'wavelengthTemperature', 'finite'],
  ['exitance at −1 K', () => blackbodyExitance(untyped(-1)), 'out-of-range', 'temperature', '> 0'],
  ['exitance of a text', () => blackbodyExitance(untyped('hot')), 'wrong-type', 'temperature', '"hot"'],
  ['peak at 0 K', () => peakWavelength(kelvin(0)), 'out-of-range', 'temperature', '> 0'],
];

describe('Planck’s law refuses bad input', () => {
  it.each(refused)('%s', (...row) => expectRefused(row));
});
