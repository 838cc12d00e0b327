import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { calibratedBand, topHatBand } from '../src/band.js';
import { isCurve, mapped, plainAbscissa, product, spectralFunction } from '../src/curve.js';
import { type BadInput, expectRefused, untyped } from './support/thrown.js';

describe('spectral functions', () => {
  it('are linear in the abscissa they were given in', () => {
    const inMicrometres = spectralFunction({ wavelength: [8, 12], value: [0, 1] }, 'curve');
    const inWavenumbers = spectralFunction({ wavenumber: [1e4 / 12, 1250], value: [1, 0] }, 'curve');
    expect(inMicrometres.at(10)).toBe(0.5);
    // 10 µm is 1000 cm⁻¹: (1250 − 1000)/(1250 − 833.3…) = 0.6 by hand.
    expect(inWavenumbers.at(10)).toBeCloseTo(0.6, 14);
    expect(inWavenumbers.breakpoints[0]).toBe(8);
    expect(inWavenumbers.breakpoints[1]).toBeCloseTo(12, 14);
  });

  it('give back their samples, and are held constant beyond them', () => {
    const f = spectralFunction({ wavelength: [7, 8, 9.5, 14], value: [0.1, 0.9, 0.3, 0.6] }, 'curve');
    expect([7, 8, 9.5, 14].map(f.at)).toEqual([0.1, 0.9, 0.3, 0.6]);
    expect(f.at(6)).toBe(0.1);
    expect(f.at(15)).toBe(0.6);
  });

  it('step where two samples share an abscissa', () => {
    const f = spectralFunction({ wavelength: [8, 10, 10, 14], value: [0.3, 0.3, 0.9, 0.9] }, 'curve');
    expect(f.breakpoints).toEqual([8, 10, 14]);
    expect(f.at(10 - 1e-9)).toBeCloseTo(0.3, 12);
    expect(f.at(10 + 1e-9)).toBeCloseTo(0.9, 12);
  });

  it('multiply over the part they share, with the breakpoints of both', () => {
    const a = spectralFunction({ wavelength: [7, 9, 14], value: [0.2, 1, 0.5] }, 'a');
    const b = spectralFunction({ wavelength: [8, 9, 11, 15], value: [1, 0.5, 0.5, 0] }, 'b');
    const both = product(a, b);
    expect(both.breakpoints).toEqual([8, 9, 11, 14]);
    fc.assert(
      fc.property(fc.double({ min: 8, max: 14, noNaN: true }), (wavelength) => {
        expect(both.at(wavelength)).toBe(a.at(wavelength) * b.at(wavelength));
      }),
    );
    expect(mapped(a, (value) => 1 - value).at(9)).toBe(0);
    expect(mapped(a, (value) => 1 - value).breakpoints).toBe(a.breakpoints);
  });

  it('leave the caller’s lists alone, and are not changed with them', () => {
    const wavelength = [8, 14];
    const f = spectralFunction({ wavelength, value: [0, 1] }, 'curve');
    wavelength[1] = 9;
    expect(f.at(11)).toBe(0.5);
    expect(f.breakpoints).toEqual([8, 14]);
    expect(plainAbscissa({ wavelength: [8, 9] })).toEqual({ wavelength: [8, 9] });
    expect(plainAbscissa({ wavenumber: [800, 900] })).toEqual({ wavenumber: [800, 900] });
    expect(plainAbscissa({})).toEqual({ wavenumber: [] });
  });

  it('are recognised by their keys', () => {
    expect(isCurve({ wavelength: [], value: [] })).toBe(true);
    expect(isCurve({ wavenumber: [], value: [] })).toBe(true);
    for (const other of [null, 0.95, {}, { wavelength: [] }, { value: [] }])
      expect(isCurve(other)).toBe(false);
  });
});

const band = topHatBand(8, 14);
const calibrated = calibratedBand({ form: 'k1k2', k1: 774.8853, k2: 1321.0789 });
const by = (curve: unknown) => (): unknown => band.weightedBy(untyped(curve));
const curves: readonly BadInput[] = [
  ['a number', by(0.5), 'wrong-type', 'curve', 'an object with wavelength, wavenumber, value, got 0.5'],
  ['no abscissa', by({ value: [1, 1] }), 'missing-input', 'curve.wavelength', 'exactly one of wavelength'],
  [
    'both abscissae',
    by({ wavelength: [8, 14], wavenumber: [700, 1300], value: [1, 1] }),
    'conflicting-inputs',
    'curve.wavelength',
    'exactly one',
  ],
  [
    'an unknown key',
    by({ wavelenght: [8, 14], value: [1, 1] }),
    'unknown-key',
    'curve.wavelenght',
    "Did you mean 'wavelength'?",
  ],
  [
    'values of other length',
    by({ wavelength: [8, 10, 14], value: [1, 1] }),
    'wrong-shape',
    'curve.value',
    'as many values as wavelengths, at least 2, got "2 for 3"',
  ],
  ['one sample', by({ wavelength: [8], value: [1] }), 'wrong-shape', 'curve.value', 'at least 2'],
  [
    'a text for a list',
    by({ wavelength: '8, 14', value: [1, 1] }),
    'wrong-type',
    'curve.wavelength',
    'a list of numbers',
  ],
  ['no values', by({ wavelength: [8, 14] }), 'wrong-type', 'curve.value', 'a list of numbers'],
  [
    'NaN',
    by({ wavelength: [8, Number.NaN], value: [1, 1] }),
    'not-finite',
    'curve.wavelength[1]',
    'a finite number',
  ],
  [
    'a text in the values',
    by({ wavelength: [8, 14], value: [1, '1'] }),
    'wrong-type',
    'curve.value[1]',
    'a number',
  ],
  [
    'a percentage',
    by({ wavelength: [8, 14], value: [0.9, 95] }),
    'out-of-range',
    'curve.value[1]',
    'Write 0.95 for 95 %.',
  ],
  [
    'a value below 0',
    by({ wavelength: [8, 14], value: [-0.1, 1] }),
    'out-of-range',
    'curve.value[0]',
    '0 ≤ value ≤ 1',
  ],
  [
    'a value of 1000',
    by({ wavelength: [8, 14], value: [1000, 1] }),
    'out-of-range',
    'curve.value[0]',
    'got 1000.',
  ],
  [
    'a descending abscissa',
    by({ wavelength: [14, 8], value: [1, 1] }),
    'out-of-range',
    'curve.wavelength[1]',
    'positive, ascending wavelengths',
  ],
  [
    'a wavelength of 0',
    by({ wavelength: [0, 14], value: [1, 1] }),
    'out-of-range',
    'curve.wavelength[0]',
    'positive',
  ],
  [
    'three alike',
    by({ wavenumber: [700, 900, 900, 900, 1300], value: [1, 1, 1, 1, 1] }),
    'out-of-range',
    'curve.wavenumber[3]',
    'two alike at most (a step)',
  ],
  [
    'no interval',
    by({ wavelength: [10, 10], value: [1, 1] }),
    'out-of-range',
    'curve.wavelength',
    'wavelengths that span an interval',
  ],
  [
    'a curve too short',
    by({ wavelength: [8, 13], value: [1, 1] }),
    'out-of-range',
    'curve',
    'a curve that covers the band, 8…14 µm, got "8…13 µm"',
  ],
  [
    'a curve that begins late',
    by({ wavenumber: [500, 1200], value: [1, 1] }),
    'out-of-range',
    'curve',
    'covers the band',
  ],
  [
    'a calibrated band',
    () => calibrated.weightedBy({ wavelength: [8, 14], value: [1, 1] }),
    'unsupported',
    'band',
    'Give emissivity and transmittance as numbers',
  ],
];

describe('curves that cannot be are refused', () => {
  it.each(curves)('%s', (...row) => expectRefused(row));
});
