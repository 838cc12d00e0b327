/** An integral and Planck's law written independently of the library, for comparison. */

/** c₁/π = 2hc² [W·m⁻²·sr⁻¹·µm⁴] and c₂ [µm·K], from c₁ and c₂ as printed in fixtures/reference/README.md (published, CODATA). */
const firstConstantOverPi = (3.74177185219276e-16 / Math.PI) * 1e24;
const secondConstant = 1.43877687750393e4;

/** Planck's law in its textbook form. λ in µm, T in K. [W·m⁻²·sr⁻¹·µm⁻¹] */
export function textbookPlanck(wavelength: number, temperature: number): number {
  const x = secondConstant / (wavelength * temperature);
  const power = wavelength ** -5;
  return (firstConstantOverPi * power * Math.exp(-x)) / (1 - Math.exp(-x));
}

/**
 * ∫ f from a to b by adaptive Simpson quadrature with Richardson's correction.
 *
 * @param tolerance - Relative to the integral as first estimated.
 */
export function integral(f: (x: number) => number, a: number, b: number, tolerance = 1e-12): number {
  const simpson = (fa: number, fm: number, fb: number, width: number): number =>
    (width / 6) * (fa + 4 * fm + fb);
  const refine = (
    from: number,
    to: number,
    fa: number,
    fm: number,
    fb: number,
    whole: number,
    allowed: number,
    depth: number,
  ): number => {
    const middle = (from + to) / 2;
    const fl = f((from + middle) / 2);
    const fr = f((middle + to) / 2);
    const left = simpson(fa, fl, fm, middle - from);
    const right = simpson(fm, fr, fb, to - middle);
    const change = left + right - whole;
    if (depth <= 0 || Math.abs(change) <= 15 * allowed) return left + right + change / 15;
    return (
      refine(from, middle, fa, fl, fm, left, allowed / 2, depth - 1) +
      refine(middle, to, fm, fr, fb, right, allowed / 2, depth - 1)
    );
  };
  // Sixteen starting pieces, so that no steep end hides between the first few points.
  const pieces = 16;
  const starts = Array.from({ length: pieces }, (_, i) => {
    const from = a + ((b - a) * i) / pieces;
    const to = i === pieces - 1 ? b : a + ((b - a) * (i + 1)) / pieces;
    const [fa, fm, fb] = [f(from), f((from + to) / 2), f(to)];
    return { from, to, fa, fm, fb, whole: simpson(fa, fm, fb, to - from) };
  });
  const size = Math.abs(starts.reduce((sum, piece) => sum + piece.whole, 0));
  return starts.reduce(
    (sum, { from, to, fa, fm, fb, whole }) =>
      sum + refine(from, to, fa, fm, fb, whole, (tolerance * size) / pieces, 40),
    0,
  );
}
