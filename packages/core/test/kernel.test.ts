import { describe, expect, it } from 'vitest';
import { calibratedKernel, monochromaticKernel, quadratureKernel } from '../src/kernel.js';
import { spectralRadiance, spectralRadianceSlope } from '../src/planck.js';
import { kelvin } from '../src/units.js';
import { relativeError } from './support/reference.js';

describe('kernels on bare numbers', () => {
  it('a rule of one node is its weight times Planck’s law, and inverts as the closed form does', () => {
    const rule = { node: Float64Array.of(10), weight: Float64Array.of(0.5) };
    const kernel = quadratureKernel(rule, 150, 3500);
    const closed = monochromaticKernel(10, 0.5, 150, 3500);
    for (const temperature of [150, 213.15, 300, 1000, 3500]) {
      const radiance = 0.5 * spectralRadiance(10, kelvin(temperature));
      const slope = 0.5 * spectralRadianceSlope(10, kelvin(temperature));
      for (const each of [kernel, closed]) {
        expect(relativeError(each.radiance(temperature), radiance)).toBeLessThan(1e-14);
        expect(relativeError(each.slope(temperature), slope)).toBeLessThan(1e-14);
        expect(Math.abs(each.temperature(each.radiance(temperature)) - temperature)).toBeLessThan(1e-9);
      }
    }
  });

  it('two far lines: Newton’s step leaves the bracket, bisection brings it home for every radiance', () => {
    // The start, at the mean wavelength, is far off where the other line sends nearly everything.
    for (let power = -12; power <= 12; power += 2) {
      const kernel = quadratureKernel(
        { node: Float64Array.of(0.3, 100), weight: Float64Array.of(10 ** power, 1) },
        150,
        3500,
      );
      for (let temperature = 150; temperature <= 3500; temperature *= 1.02) {
        const back = kernel.temperature(kernel.radiance(temperature));
        expect(Math.abs(back - temperature), `1e${power}, ${temperature} K`).toBeLessThan(1e-7);
      }
    }
  });

  it('answers NaN outside the range, for NaN, and for nothing', () => {
    const rule = { node: Float64Array.of(10), weight: Float64Array.of(1) };
    const nothing = { node: new Float64Array(0), weight: new Float64Array(0) };
    const calibration = { form: 'k1k2', k1: 700, k2: 1300 } as const;
    for (const kernel of [
      quadratureKernel(rule, 200, 400),
      monochromaticKernel(10, 1, 200, 400),
      calibratedKernel(calibration, 200, 400),
    ]) {
      expect(kernel.temperature(kernel.radiance(199.9))).toBeNaN();
      expect(kernel.temperature(kernel.radiance(400.1))).toBeNaN();
      expect(kernel.temperature(Number.NaN)).toBeNaN();
      expect(kernel.temperature(0)).toBeNaN();
      expect(kernel.temperature(-1)).toBeNaN();
      expect(kernel.temperature(Number.POSITIVE_INFINITY)).toBeNaN();
    }
    expect(quadratureKernel(nothing, 150, 3500).temperature(0)).toBeNaN();
    expect(monochromaticKernel(10, 0, 150, 3500).temperature(0)).toBeNaN();
    // A signal too small for a double at the cold end is not taken for one of 0 K.
    expect(calibratedKernel({ ...calibration, k2: 2e5 }, 150, 3500).temperature(0)).toBeNaN();
  });

  it('K1/K2 is Sakuma–Hattori with a = c₂/k2, b = 0 (METHOD.md eq. 9)', () => {
    const one = calibratedKernel({ form: 'k1k2', k1: 774.8853, k2: 1321.0789 }, 150, 3500);
    const a = 14387.7687750393 / 1321.0789; // c₂: published, CODATA
    const two = calibratedKernel({ form: 'sakuma-hattori', a, b: 0, c: 774.8853 }, 150, 3500);
    for (const temperature of [200, 300, 1000]) {
      expect(relativeError(one.radiance(temperature), two.radiance(temperature))).toBeLessThan(1e-13);
      expect(relativeError(one.slope(temperature), two.slope(temperature))).toBeLessThan(1e-13);
    }
  });
});
