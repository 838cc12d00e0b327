/**
 * Temperature ↔ radiance on bare numbers, for each kind of band. The inverses are bracketed: they return NaN only
 * for a radiance that no temperature of the range gives.
 */

import { firstRadiationConstantRadiance as c1L, secondRadiationConstant as c2 } from './constants.js';
import type { Calibration } from './descriptor.js';
import { planck, planckSlope } from './planck.js';
import type { Rule } from './quadrature.js';
import type { RadianceKernel } from './table.js';

/** A band by quadrature: L = Σ wᵢ·L_λ(λᵢ, T).   [METHOD.md eq. 7] */
export function quadratureKernel({ node, weight }: Rule, from: number, to: number): RadianceKernel {
  const count = node.length;
  let total = 0;
  let moment = 0;
  for (let i = 0; i < count; i++) {
    total += weight[i]!;
    moment += weight[i]! * node[i]!;
  }
  const meanWavelength = moment / total;
  const radiance = (temperature: number): number => {
    let sum = 0;
    for (let i = 0; i < count; i++) sum += weight[i]! * planck(node[i]!, temperature);
    return sum;
  };
  const slope = (temperature: number): number => {
    let sum = 0;
    for (let i = 0; i < count; i++) sum += weight[i]! * planckSlope(node[i]!, temperature);
    return sum;
  };
  const lowest = radiance(from);
  const highest = radiance(to);
  return {
    radiance,
    slope,
    temperature(target) {
      // Nothing above 0: a band weighted to nothing, which every temperature gives.
      if (!(target > 0 && target >= lowest && target <= highest)) return Number.NaN;
      // ln L is nearly linear in 1/T, so Newton's step is taken there; the bracket catches what overshoots.
      let low = from;
      let high = to;
      let kelvin = c2 / (meanWavelength * Math.log1p((c1L * total) / (meanWavelength ** 5 * target)));
      if (!(kelvin > low && kelvin < high)) kelvin = Math.sqrt(low * high);
      for (let step = 0; step < 100; step++) {
        const value = radiance(kelvin);
        if (value > target) high = kelvin;
        else low = kelvin;
        const logSlope = (slope(kelvin) * kelvin) / value; // d ln L / d ln T
        const next = kelvin / (1 - Math.log(target / value) / logSlope);
        const inside = next >= low && next <= high;
        const previous = kelvin;
        kelvin = inside ? next : (low + high) / 2;
        if (Math.abs(kelvin - previous) <= 1e-12 * kelvin) return kelvin;
        if (inside && Math.abs(kelvin - previous) <= 1e-7 * kelvin) return kelvin; // quadratic: the next step is below 1e-13
      }
      return kelvin;
    },
  };
}

/** A single wavelength with a weight: Planck's law in closed form. */
export function monochromaticKernel(
  wavelength: number,
  weight: number,
  from: number,
  to: number,
): RadianceKernel {
  const scale = (weight * c1L) / wavelength ** 5;
  return closedForm(scale, wavelength, 0, from, to);
}

/** A calibrated band in closed form; K1/K2 is the Sakuma–Hattori form with b = 0 and a = c₂/k2. */
export function calibratedKernel(calibration: Calibration, from: number, to: number): RadianceKernel {
  return calibration.form === 'k1k2'
    ? closedForm(calibration.k1, c2 / calibration.k2, 0, from, to)
    : closedForm(calibration.c, calibration.a, calibration.b, from, to);
}

/** signal = c/(exp(c₂/(aT + b)) − 1), its slope, and T = (c₂/ln(1 + c/signal) − b)/a.   [METHOD.md eq. 9] */
function closedForm(c: number, a: number, b: number, from: number, to: number): RadianceKernel {
  const radiance = (temperature: number): number => c / Math.expm1(c2 / (a * temperature + b));
  const lowest = radiance(from);
  const highest = radiance(to);
  return {
    radiance,
    slope(temperature) {
      const argument = a * temperature + b;
      const x = c2 / argument;
      return ((radiance(temperature) / -Math.expm1(-x)) * x * a) / argument;
    },
    temperature(target) {
      if (!(target > 0 && target >= lowest && target <= highest)) return Number.NaN;
      // Rounding must not put an end of the range just outside it.
      return Math.min(to, Math.max(from, (c2 / Math.log1p(c / target) - b) / a));
    },
  };
}
