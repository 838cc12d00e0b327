/**
 * Gauss–Legendre quadrature over a wavelength interval, tuned for thermal radiation.
 *
 * Within a piece the integrand behaves like exp(k·u), u = ln λ, with k up to c₂/(λ·150 K) + 5. Pieces are cut so
 * that the exponent changes by at most about 15 and get 5…16 nodes, which keeps the relative error of a band
 * radiance below 1e-12 from 150 K on; asserted against the series of eq. 5 in test/band.test.ts.
 */

/** Nodes and weights: ∫ f ≈ Σ weight[i]·f(node[i]). */
export interface Rule {
  readonly node: Float64Array;
  readonly weight: Float64Array;
}

const unitRules = new Map<number, Rule>();

/** Gauss–Legendre rule of n nodes on −1…1, by Newton's method on the Legendre polynomial. */
export function gaussLegendre(n: number): Rule {
  const known = unitRules.get(n);
  if (known) return known;
  const node = new Float64Array(n);
  const weight = new Float64Array(n);
  for (let i = 0; i < n; i++) {
    let x = Math.cos((Math.PI * (i + 0.75)) / (n + 0.5));
    let slope = 1;
    for (let step = 0; step < 50; step++) {
      let previous = 1;
      let current = x;
      for (let k = 2; k <= n; k++)
        [previous, current] = [current, ((2 * k - 1) * x * current - (k - 1) * previous) / k];
      slope = (n * (x * current - previous)) / (x * x - 1);
      const change = current / slope;
      x -= change;
      if (Math.abs(change) < 1e-15) break;
    }
    node[i] = x;
    weight[i] = 2 / ((1 - x * x) * slope * slope);
  }
  const rule = { node, weight };
  unitRules.set(n, rule);
  return rule;
}

/**
 * A rule for ∫ weighting(λ)·L_λ dλ over ascending breakpoints between which `weighting` is smooth.
 *
 * @param breakpoints - Wavelengths, ascending. [µm]
 * @param weighting - Dimensionless weight of a wavelength; folded into the rule's weights.
 */
export function wavelengthRule(
  breakpoints: readonly number[],
  weighting: (wavelength: number) => number,
): Rule {
  const node: number[] = [];
  const weight: number[] = [];
  for (let i = 1; i < breakpoints.length; i++) {
    const from = breakpoints[i - 1]!;
    const width = Math.log(breakpoints[i]! / from);
    const widest = Math.min(0.5, 0.125 * from);
    const pieces = Math.max(1, Math.ceil(width / widest));
    const order = 4 + Math.ceil(12 * (width / pieces / widest) ** 0.75);
    const unit = gaussLegendre(order);
    for (let piece = 0; piece < pieces; piece++) {
      const a = from * Math.exp((width * piece) / pieces);
      const b = piece === pieces - 1 ? breakpoints[i]! : from * Math.exp((width * (piece + 1)) / pieces);
      for (let k = 0; k < order; k++) {
        const wavelength = (a + b) / 2 + ((b - a) / 2) * unit.node[k]!;
        const value = weighting(wavelength) * ((b - a) / 2) * unit.weight[k]!;
        if (value === 0) continue;
        node.push(wavelength);
        weight.push(value);
      }
    }
  }
  return { node: Float64Array.from(node), weight: Float64Array.from(weight) };
}
