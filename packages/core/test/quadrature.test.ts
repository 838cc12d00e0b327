import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { gaussLegendre, wavelengthRule } from '../src/quadrature.js';
import { relativeError } from './support/reference.js';

describe('Gauss–Legendre rule', () => {
  // Published: Abramowitz and Stegun, Table 25.4 (from memory); the closed forms below are exact.
  it('has the closed nodes and weights for 2 and 3 points', () => {
    const two = gaussLegendre(2);
    expect([...two.node].map(Math.abs)).toEqual([
      expect.closeTo(1 / Math.sqrt(3), 15),
      expect.closeTo(1 / Math.sqrt(3), 15),
    ]);
    expect([...two.weight]).toEqual([expect.closeTo(1, 15), expect.closeTo(1, 15)]);
    const three = gaussLegendre(3);
    const ascending = [...three.node].map((node, i) => [node, three.weight[i]!] as const);
    ascending.sort(([a], [b]) => a - b);
    expect(ascending[0]![0]).toBeCloseTo(-Math.sqrt(0.6), 14);
    expect(ascending[0]![1]).toBeCloseTo(5 / 9, 14);
    expect(ascending[1]![0]).toBeCloseTo(0, 14);
    expect(ascending[1]![1]).toBeCloseTo(8 / 9, 14);
  });

  it('integrates every power up to 2n − 1 exactly (the defining property; atol 1e-14), and not 2n', () => {
    for (let n = 1; n <= 16; n++) {
      const { node, weight } = gaussLegendre(n);
      const moment = (power: number): number => node.reduce((sum, x, i) => sum + weight[i]! * x ** power, 0);
      for (let power = 0; power <= 2 * n - 1; power++) {
        const exact = power % 2 === 0 ? 2 / (power + 1) : 0;
        expect(Math.abs(moment(power) - exact), `n ${n}, power ${power}`).toBeLessThan(1e-14);
      }
      if (n <= 8) expect(Math.abs(moment(2 * n) - 2 / (2 * n + 1))).toBeGreaterThan(1e-6);
    }
  });

  it('is made once', () => {
    expect(gaussLegendre(7)).toBe(gaussLegendre(7));
  });
});

describe('wavelength rule', () => {
  it('integrates a constant, a slope and λ⁻⁵ exactly over any breakpoints (closed forms; rtol 1e-13)', () => {
    const breakpoints = fc
      .uniqueArray(fc.double({ min: 1, max: 30, noNaN: true }), { minLength: 2, maxLength: 6 })
      .map((list) => list.sort((a, b) => a - b))
      .filter((list) => list.at(-1)! - list[0]! > 0.01);
    fc.assert(
      fc.property(breakpoints, (points) => {
        const [a, b] = [points[0]!, points.at(-1)!];
        const sum = (f: (x: number) => number): number => {
          const { weight } = wavelengthRule(points, f);
          return weight.reduce((total, w) => total + w, 0);
        };
        expect(
          relativeError(
            sum(() => 1),
            b - a,
          ),
        ).toBeLessThan(1e-13);
        expect(
          relativeError(
            sum((x) => x),
            (b * b - a * a) / 2,
          ),
        ).toBeLessThan(1e-13);
        expect(
          relativeError(
            sum((x) => x ** -5),
            (a ** -4 - b ** -4) / 4,
          ),
        ).toBeLessThan(1e-12);
      }),
    );
  });

  it('keeps the nodes inside the limits, and drops those without weight', () => {
    const { node } = wavelengthRule([8, 10, 14], (x) => (x < 10 ? 0 : 1));
    expect(Math.min(...node)).toBeGreaterThan(10);
    expect(Math.max(...node)).toBeLessThan(14);
    expect(wavelengthRule([8, 14], () => 0).node).toHaveLength(0);
  });

  it('spends nodes as METHOD.md says: 8–14 µm is two pieces of 12', () => {
    expect(wavelengthRule([8, 14], () => 1).node).toHaveLength(24);
  });
});
