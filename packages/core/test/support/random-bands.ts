/** Random bands inside 2…15 µm, the range the library's accuracy is stated for. */
import fc from 'fast-check';
import { type Band, monochromaticBand, sampledBand, topHatBand } from '../../src/band.js';

/** A pair of limits at least 1 nm apart; half of them narrow. [µm] */
export const limits: fc.Arbitrary<readonly [number, number]> = fc
  .tuple(
    fc.double({ min: 2, max: 14.9, noNaN: true }),
    fc.oneof(fc.double({ min: 0.001, max: 0.1, noNaN: true }), fc.double({ min: 0.1, max: 13, noNaN: true })),
  )
  .map(([from, width]) => [from, Math.min(15, from + width)] as const);

const detector = fc.constantFrom('energy' as const, 'photon' as const);

/** A top hat, energy or photon. */
export const topHats: fc.Arbitrary<Band> = fc
  .tuple(limits, detector)
  .map(([[from, to], kind]) => topHatBand(from, to, { detector: kind }));

/** Samples of a response: abscissae ascending, values from 0 over many decades to 1, one at least above 0. */
export interface Samples {
  readonly abscissa: readonly number[];
  readonly responsivity: readonly number[];
  readonly in: 'wavelength' | 'wavenumber';
}

/**
 * Random samples, in µm or in cm⁻¹, at least 0.1 nm apart. Of samples much closer the rounding of the wavelength
 * itself, 2e-15 µm, makes a noticeable share: at 5e-11 µm two ways to compute the same line differ by 1e-5 of it.
 */
export const samples: fc.Arbitrary<Samples> = fc
  .tuple(
    limits,
    fc.array(
      fc.tuple(
        fc.double({ min: 0, max: 1, noNaN: true }),
        fc.oneof(
          fc.constant(0),
          fc.double({ min: 0, max: 1, noNaN: true }),
          fc.double({ min: -9, max: 0, noNaN: true }).map((power) => 10 ** power),
        ),
      ),
      { minLength: 1, maxLength: 8 },
    ),
    fc.constantFrom('wavelength' as const, 'wavenumber' as const),
  )
  .map(([[from, to], inner, kind]) => {
    const ends = kind === 'wavelength' ? [from, to] : [1e4 / to, 1e4 / from];
    const [first, last] = ends as [number, number];
    const inside: number[] = [];
    for (const x of inner.map(([share]) => first + share * (last - first)).sort((a, b) => a - b)) {
      // 0.1 nm, in the abscissa at hand; see the note at `samples`.
      const apart = kind === 'wavelength' ? 1e-4 : x * x * 1e-8;
      if (x - (inside.at(-1) ?? first) > apart && last - x > apart) inside.push(x);
    }
    const values = inside.map((_, i) => inner[i]![1]);
    return { abscissa: [first, ...inside, last], responsivity: [0.5, ...values, 0.25], in: kind };
  });

/** The band of samples. */
export function bandOf(given: Samples, kind: 'energy' | 'photon' = 'energy'): Band {
  const { abscissa, responsivity } = given;
  return given.in === 'wavelength'
    ? sampledBand({ wavelength: abscissa, responsivity, detector: kind })
    : sampledBand({ wavenumber: abscissa, responsivity, detector: kind });
}

/** A sampled band, energy or photon. */
export const sampledBands: fc.Arbitrary<Band> = fc
  .tuple(samples, detector)
  .map(([given, kind]) => bandOf(given, kind));

/** A single wavelength. */
export const lines: fc.Arbitrary<Band> = fc
  .double({ min: 2, max: 15, noNaN: true })
  .map((wavelength) => monochromaticBand(wavelength));

/** Any band with wavelengths. */
export const bands: fc.Arbitrary<Band> = fc.oneof(topHats, sampledBands, lines);

/** Temperatures between two limits. [K] */
export function temperatures(from: number, to: number): fc.Arbitrary<number> {
  return fc.double({ min: from, max: to, noNaN: true });
}
