import { describe, expect, it } from 'vitest';
import {
  bandFromDescriptor,
  calibratedBand,
  monochromaticBand,
  sampledBand,
  topHatBand,
} from '../src/band.js';
import { celsius, kelvin } from '../src/units.js';
import { relativeError } from './support/reference.js';
import { type BadInput, expectRefused, thrownBy, untyped } from './support/thrown.js';

const band = topHatBand(8, 14);
const calibrated = calibratedBand({ form: 'k1k2', k1: 774.8853, k2: 1321.0789 });

const sampled = (given: unknown) => (): unknown => sampledBand(untyped(given));
const fit = (given: unknown) => (): unknown => calibratedBand(untyped(given));
const makers: readonly BadInput[] = [
  ['a limit as text', () => topHatBand(untyped('8'), 14), 'wrong-type', 'from', 'a number, got "8"'],
  ['no upper limit', () => topHatBand(8, untyped(undefined)), 'wrong-type', 'to', 'a number'],
  ['a limit of NaN', () => topHatBand(8, Number.NaN), 'not-finite', 'to', 'a finite number'],
  ['a limit of 0', () => topHatBand(0, 14), 'out-of-range', 'from', 'a number > 0'],
  ['nanometres', () => topHatBand(8000, 14000), 'out-of-range', 'from', 'in micrometres (8 for 8 µm)'],
  ['metres', () => topHatBand(8e-6, 14e-6), 'out-of-range', 'from', 'in micrometres (8 for 8 µm)'],
  ['limits exchanged', () => topHatBand(14, 8), 'out-of-range', 'to', 'a limit above from = 14 µm, got 8'],
  ['limits alike', () => topHatBand(8, 8), 'out-of-range', 'to', 'above from'],
  [
    'a bare word for options',
    () => topHatBand(8, 14, untyped('photon')),
    'wrong-type',
    '',
    'an object with detector',
  ],
  [
    'an unknown option',
    () => topHatBand(8, 14, untyped({ detektor: 'photon' })),
    'unknown-key',
    'detektor',
    "Did you mean 'detector'?",
  ],
  [
    'an unknown detector',
    () => topHatBand(8, 14, untyped({ detector: 'photons' })),
    'out-of-range',
    'detector',
    "Did you mean 'photon'?",
  ],
  [
    'a detector of null',
    () => topHatBand(8, 14, untyped({ detector: null })),
    'wrong-type',
    'detector',
    "'energy', 'photon'",
  ],
  ['no samples', sampled(undefined), 'wrong-type', '', 'an object with wavelength, wavenumber, responsivity'],
  [
    'responsivity below 0',
    sampled({ wavelength: [8, 14], responsivity: [1, -1] }),
    'out-of-range',
    'responsivity[1]',
    'responsivity ≥ 0',
  ],
  [
    'responsivity 0 everywhere',
    sampled({ wavelength: [8, 14], responsivity: [0, 0] }),
    'out-of-range',
    'responsivity',
    'some value above 0 that spans an interval',
  ],
  [
    'responsivity of no width',
    sampled({ wavelength: [8, 8, 14], responsivity: [1, 0, 0] }),
    'out-of-range',
    'responsivity',
    'spans an interval',
  ],
  [
    'lists of other length',
    sampled({ wavelength: [8, 14], responsivity: [1] }),
    'wrong-shape',
    'responsivity',
    'got "1 for 2"',
  ],
  [
    'wavenumbers in m⁻¹',
    sampled({ wavenumber: [71500, 129000], responsivity: [1, 1] }),
    'out-of-range',
    'wavenumber',
    'wavenumbers in cm⁻¹ (1250 for 8 µm)',
  ],
  [
    'wavelengths in nm',
    sampled({ wavelength: [8, 14000], responsivity: [1, 1] }),
    'out-of-range',
    'wavelength',
    'in micrometres',
  ],
  [
    'an unknown detector',
    sampled({ wavelength: [8, 14], responsivity: [1, 1], detector: 'quantum' }),
    'out-of-range',
    'detector',
    "'energy', 'photon'",
  ],
  [
    'a wavelength as text',
    () => monochromaticBand(untyped('10.6')),
    'wrong-type',
    'wavelength',
    'got "10.6"',
  ],
  ['a wavelength below 0', () => monochromaticBand(-10), 'out-of-range', 'wavelength', 'a number > 0'],
  ['nanometres', () => monochromaticBand(10600), 'out-of-range', 'wavelength', '0.3…100 µm'],
  ['no calibration', fit(undefined), 'wrong-type', 'form', "one of 'k1k2', 'sakuma-hattori'"],
  ['an unknown form', fit({ form: 'K1K2', k1: 1, k2: 1 }), 'out-of-range', 'form', "Did you mean 'k1k2'?"],
  ['a constant missing', fit({ form: 'k1k2', k1: 1 }), 'wrong-type', 'k2', 'a number'],
  ['a constant of 0', fit({ form: 'k1k2', k1: 0, k2: 1300 }), 'out-of-range', 'k1', 'a number > 0'],
  [
    'a key of the other form',
    fit({ form: 'k1k2', k1: 1, k2: 2, a: 1 }),
    'unknown-key',
    'a',
    'only the keys form, k1, k2',
  ],
  ['b as text', fit({ form: 'sakuma-hattori', a: 9, b: '1', c: 1 }), 'wrong-type', 'b', 'got "1"'],
  [
    'b that leaves nothing',
    fit({ form: 'sakuma-hattori', a: 9, b: -3000, c: 1 }),
    'out-of-range',
    'range.from',
    'State the range the calibration holds for.',
  ],
  [
    'an unknown unit',
    fit({ form: 'k1k2', k1: 1, k2: 2, radianceUnit: 'W' }),
    'out-of-range',
    'radianceUnit',
    "'signal'",
  ],
  [
    'Celsius in the range',
    fit({ form: 'k1k2', k1: 1, k2: 2, range: { from: -20, to: 120 } }),
    'out-of-range',
    'range.from',
    'Did you mean celsius(-20)?',
  ],
  [
    'a range upside down',
    fit({ form: 'k1k2', k1: 1, k2: 2, range: { from: 400, to: 300 } }),
    'out-of-range',
    'range.to',
    'above 400 K, got 300',
  ],
  [
    'an unknown key in the range',
    fit({ form: 'k1k2', k1: 1, k2: 2, range: { from: 200, too: 300 } }),
    'unknown-key',
    'range.too',
    "Did you mean 'to'?",
  ],
];

const narrow = calibratedBand({
  form: 'k1k2',
  k1: 700,
  k2: 1300,
  range: { from: celsius(0), to: celsius(100) },
});
const calls: readonly BadInput[] = [
  [
    'Celsius as kelvin',
    () => band.radiance(untyped(20)),
    'out-of-range',
    'temperature',
    'Did you mean celsius(20)?',
  ],
  [
    'a text as temperature',
    () => band.radiance(untyped('300')),
    'wrong-type',
    'temperature',
    'a temperature in kelvin',
  ],
  ['NaN', () => band.slope(untyped(Number.NaN)), 'not-finite', 'temperature', 'a finite number'],
  ['a temperature above 3500 K', () => band.slope(kelvin(4000)), 'out-of-range', 'temperature', '150…3500 K'],
  ['photons at 20 K', () => band.photonRadiance(kelvin(20)), 'out-of-range', 'temperature', 'celsius(20)'],
  [
    'photons of a calibrated band',
    () => calibrated.photonRadiance(kelvin(300)),
    'unsupported',
    'band',
    'a band with wavelengths',
  ],
  [
    'outside a stated range',
    () => narrow.radiance(celsius(120)),
    'out-of-range',
    'temperature',
    'calibrated for, 273.15…373.15 K',
  ],
  ['radiance as text', () => band.temperature(untyped('53')), 'wrong-type', 'radiance', 'got "53"'],
  ['radiance NaN', () => band.temperature(Number.NaN), 'not-finite', 'radiance', 'a finite number'],
  ['radiance −1', () => band.temperature(-1), 'no-solution', 'radiance', 'a radiance of 0.'],
  ['radiance 0', () => band.temperature(0), 'no-solution', 'radiance', '(a blackbody of 150…3500 K), got 0'],
  ['radiance 1e9', () => band.temperature(1e9), 'no-solution', 'radiance', 'W·m⁻²·sr⁻¹'],
  [
    'a signal beyond the range',
    () => narrow.temperature(600),
    'no-solution',
    'radiance',
    'signal (a blackbody of 273.15…373.15 K)',
  ],
];

describe('bands that cannot be are refused', () => {
  it.each(makers)('%s', (...row) => expectRefused(row));
});
describe('a band refuses bad input', () => {
  it.each(calls)('%s', (...row) => expectRefused(row));

  it('and says what a solvable radiance is: the ends it names are solvable', () => {
    const { message } = thrownBy(() => band.temperature(1e9));
    const [, lowest = '', highest = ''] = /radiance of (\S+?)…(\S+) /.exec(message) ?? [];
    expect(relativeError(Number(lowest), band.radiance(kelvin(150)))).toBeLessThan(1e-3);
    expect(relativeError(Number(highest), band.radiance(kelvin(3500)))).toBeLessThan(1e-3);
  });

  it('a percentage is no matter for a responsivity, which is used as given in any unit', () => {
    const percent = sampledBand({ wavelength: [8, 14], responsivity: [95, 95] });
    const t = kelvin(300);
    expect(relativeError(percent.radiance(t), 95 * band.radiance(t))).toBeLessThan(1e-14);
    expect(bandFromDescriptor(percent.descriptor).radiance(t)).toBe(percent.radiance(t));
  });
});
