import { describe, expect, it } from 'vitest';
import {
  type Conditions,
  type Curve,
  celsius,
  infraredWindow,
  layer,
  measurementModel,
  surfaceTemperature,
  topHatBand,
  view,
} from '../src/index.js';
import { bands, K, refused } from './support/measurement.js';

const longWave = topHatBand(8, 14);
const base: Conditions = { band: longWave, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };

describe('curves where they cannot be used', () => {
  const curve: Curve = { wavelength: [8, 14], value: [0.6, 0.9] };
  const map = view([0.9], [1, 1]);

  it('a reflected radiance or a path radiance behind a curve is refused: it does not say its spectrum', () => {
    const spectral = layer({ transmittance: curve, temperature: K(300) });
    refused(
      () => measurementModel({ band: longWave, emissivity: 0.9, reflectedRadiance: 3, path: [spectral] }),
      'unsupported',
      'reflectedRadiance',
      'spread over wavelength',
    );
    const path = [layer({ transmittance: 0.9, pathRadiance: 1 }), spectral];
    refused(
      () => measurementModel({ ...base, path }),
      'unsupported',
      'path[0].pathRadiance',
      'a temperature behind',
    );
    refused(
      () => measurementModel({ band: longWave, emissivity: curve, reflectedRadiance: 3 }),
      'unsupported',
      'reflectedRadiance',
      'reflectedApparentTemperature',
    );
  });

  it('a path radiance nearer to the instrument than the curve is taken', () => {
    const path = [
      layer({ transmittance: curve, temperature: K(300) }),
      layer({ transmittance: 0.9, pathRadiance: 1.5 }),
    ];
    const model = measurementModel({ ...base, path });
    const without = measurementModel({ ...base, path: path.slice(0, 1) });
    expect(model.offset).toBeCloseTo(0.9 * without.offset + 1.5, 12);
    const own = measurementModel({ ...base, path: [layer({ transmittance: curve, pathRadiance: 1.5 })] });
    const weighted = longWave.weightedBy(curve);
    expect(own.offset).toBeCloseTo(0.2 * weighted.radiance(celsius(20)) + 1.5, 10);
    expect(own.inputs).toContain('path[0].pathRadiance');
  });

  it('a map beside a curve in one layer is refused', () => {
    const path = [
      layer({ transmittance: curve, reflectance: map, temperature: K(300), mirroredTemperature: K(300) }),
    ];
    refused(() => measurementModel({ ...base, path }), 'unsupported', 'path[0].reflectance', 'not a map');
  });

  it('τ + ρ > 1 at one wavelength is refused, also on a step', () => {
    const bad = (transmittance: Curve, reflectance: number | Curve) =>
      measurementModel({
        ...base,
        path: [
          infraredWindow({ transmittance, reflectance, temperature: K(300), mirroredTemperature: K(300) }),
        ],
      });
    refused(() => bad(curve, 0.2), 'out-of-range', 'path[0].reflectance', 'at every wavelength', '1.1');
    const step: Curve = { wavelength: [8, 10, 10, 14], value: [0.9, 0.9, 0.2, 0.2] };
    refused(() => bad(step, 0.3), 'out-of-range', 'path[0].reflectance');
    refused(
      () => bad({ wavelength: [8, 10, 10, 14], value: [0.2, 0.2, 0.9, 0.9] }, 0.3),
      'out-of-range',
      'path[0].reflectance',
    );
    expect(bad({ wavelength: [8, 14], value: [0.5, 0.7] }, 0.3).gain).toBeCloseTo(0.8, 12);
  });

  it('a curve that does not cover the band is refused', () => {
    refused(
      () => measurementModel({ ...base, emissivity: { wavelength: [9, 14], value: [0.5, 0.5] } }),
      'out-of-range',
      'curve',
      'covers the band, 8…14 µm',
      '9…14 µm',
    );
  });

  it('a calibrated band knows no wavelength: a curve is refused, numbers are not', () => {
    const band = bands.at(-1)!;
    refused(
      () => measurementModel({ ...base, band, emissivity: curve }),
      'unsupported',
      'band',
      'sampledBand()',
    );
    refused(
      () => measurementModel({ ...base, band, path: [layer({ transmittance: curve, temperature: K(300) })] }),
      'unsupported',
      'band',
    );
    expect(surfaceTemperature(K(300), { ...base, band })).toBeGreaterThan(300);
  });
});
