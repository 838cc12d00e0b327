import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  bandFromDescriptor,
  calibratedBand,
  monochromaticBand,
  sampledBand,
  topHatBand,
} from '../src/band.js';
import type { BandDescriptor } from '../src/descriptor.js';
import { celsius, kelvin } from '../src/units.js';
import { bands, temperatures } from './support/random-bands.js';
import { type BadInput, expectRefused, untyped } from './support/thrown.js';

const overJson = (descriptor: BandDescriptor): BandDescriptor =>
  JSON.parse(JSON.stringify(descriptor)) as BandDescriptor;

describe('descriptors', () => {
  it('go through JSON and back: equal radiance, slope, photon radiance, to the bit', () => {
    const weight = fc.tuple(
      fc.double({ min: 0, max: 1, noNaN: true }),
      fc.double({ min: 0, max: 1, noNaN: true }),
    );
    fc.assert(
      fc.property(bands, fc.option(weight), temperatures(150, 3500), (plain, value, t) => {
        const band =
          value === null ? plain : plain.weightedBy({ wavenumber: [600, 800, 5100], value: [...value, 1] });
        const again = bandFromDescriptor(overJson(band.descriptor));
        expect(again.descriptor).toEqual(band.descriptor);
        expect(again.kind).toBe(band.kind);
        expect(again.radianceUnit).toBe(band.radianceUnit);
        expect(again.radiance(kelvin(t))).toBe(band.radiance(kelvin(t)));
        expect(again.slope(kelvin(t))).toBe(band.slope(kelvin(t)));
        expect(again.photonRadiance(kelvin(t))).toBe(band.photonRadiance(kelvin(t)));
      }),
    );
  });

  it('calibrated ones too, with unit and range', () => {
    const k1k2 = calibratedBand({
      form: 'k1k2',
      k1: 774.8853,
      k2: 1321.0789,
      radianceUnit: 'W·m⁻²·sr⁻¹·µm⁻¹',
      range: { from: celsius(-80), to: celsius(120) },
    });
    const planckian = calibratedBand({ form: 'sakuma-hattori', a: 9.3, b: 178, c: 6800 });
    for (const band of [k1k2, planckian]) {
      const again = bandFromDescriptor(overJson(band.descriptor));
      expect(again.descriptor).toEqual(band.descriptor);
      expect(again.range).toEqual(band.range);
      expect(again.radianceUnit).toBe(band.radianceUnit);
      expect(again.radiance(kelvin(300))).toBe(band.radiance(kelvin(300)));
    }
  });

  it('are plain data also where the caller gave typed arrays', () => {
    const sampled = sampledBand({
      wavelength: untyped(Float64Array.of(8, 10, 14)),
      responsivity: untyped(Float64Array.of(0, 1, 0)),
    });
    const weighted = topHatBand(8, 14).weightedBy({
      wavenumber: untyped(Float64Array.of(700, 1300)),
      value: untyped(Float64Array.of(0.5, 1)),
    });
    for (const band of [sampled, weighted]) {
      const again = bandFromDescriptor(overJson(band.descriptor));
      expect(again.radiance(kelvin(300))).toBe(band.radiance(kelvin(300)));
    }
  });

  it('say "photon" and leave out "energy"', () => {
    expect(topHatBand(8, 14).descriptor).toEqual({ kind: 'top-hat', from: 8, to: 14 });
    expect(topHatBand(8, 14, { detector: 'energy' }).descriptor).toEqual({
      kind: 'top-hat',
      from: 8,
      to: 14,
    });
    expect(topHatBand(8, 14, { detector: 'photon' }).descriptor).toEqual({
      kind: 'top-hat',
      from: 8,
      to: 14,
      detector: 'photon',
    });
    expect(monochromaticBand(10.6).descriptor).toEqual({ kind: 'monochromatic', wavelength: 10.6 });
  });

  it('a key that is undefined is a key left out', () => {
    const band = sampledBand(
      untyped({ wavelength: undefined, wavenumber: [800, 1200], responsivity: [1, 1], detector: undefined }),
    );
    expect(band.descriptor).toEqual({ kind: 'sampled', wavenumber: [800, 1200], responsivity: [1, 1] });
  });
});

const from = (descriptor: unknown) => (): unknown => bandFromDescriptor(untyped(descriptor));
const refused: readonly BadInput[] = [
  ['nothing', from(undefined), 'wrong-type', 'band.kind', "one of 'top-hat', 'sampled'"],
  ['null', from(null), 'wrong-type', 'band.kind', "'monochromatic'"],
  ['a text', from('top-hat'), 'wrong-type', 'band.kind', "'calibrated', 'weighted'"],
  ['no kind', from({ from: 8, to: 14 }), 'wrong-type', 'band.kind', "'top-hat'"],
  [
    'a misspelt kind',
    from({ kind: 'tophat', from: 8, to: 14 }),
    'out-of-range',
    'band.kind',
    "Did you mean 'top-hat'?",
  ],
  [
    'an unknown key',
    from({ kind: 'top-hat', from: 8, to: 14, form: 1 }),
    'unknown-key',
    'band.form',
    "Did you mean 'from'?",
  ],
  ['a missing limit', from({ kind: 'top-hat', from: 8 }), 'wrong-type', 'to', 'a number'],
  [
    'an unknown detector',
    from({ kind: 'top-hat', from: 8, to: 14, detector: 'photons' }),
    'out-of-range',
    'detector',
    "Did you mean 'photon'?",
  ],
  [
    'no samples',
    from({ kind: 'sampled', responsivity: [1, 1] }),
    'missing-input',
    'wavelength',
    'exactly one of wavelength',
  ],
  [
    'an unknown sample key',
    from({ kind: 'sampled', wavelenght: [8, 9], responsivity: [1, 1] }),
    'unknown-key',
    'wavelenght',
    "Did you mean 'wavelength'?",
  ],
  [
    'a single wavelength as list',
    from({ kind: 'monochromatic', wavelength: [10] }),
    'wrong-type',
    'wavelength',
    'got [10]',
  ],
  [
    'an unknown key beside it',
    from({ kind: 'monochromatic', wavelength: 10, width: 1 }),
    'unknown-key',
    'band.width',
    'only the keys wavelength',
  ],
  [
    'no form',
    from({ kind: 'calibrated', k1: 1, k2: 2 }),
    'wrong-type',
    'form',
    "one of 'k1k2', 'sakuma-hattori'",
  ],
  [
    'no curve',
    from({ kind: 'weighted', band: { kind: 'top-hat', from: 8, to: 14 } }),
    'wrong-type',
    'curve',
    'an object with wavelength',
  ],
  [
    'no band inside',
    from({ kind: 'weighted', curve: { wavelength: [8, 14], value: [1, 1] } }),
    'wrong-type',
    'band.kind',
    'one of',
  ],
  [
    'an unknown key',
    from({ kind: 'weighted', band: 1, curve: 1, weight: 1 }),
    'unknown-key',
    'band.weight',
    'only the keys band, curve',
  ],
];

describe('bandFromDescriptor refuses bad input', () => {
  it.each(refused)('%s', (...row) => expectRefused(row));
});
