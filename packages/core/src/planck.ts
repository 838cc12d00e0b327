/**
 * Thermal radiation of a blackbody: spectral radiance by Planck's law, its slope and inverse, photon radiance,
 * the fraction below a wavelength, total exitance, and the wavelength of the peak.
 *
 * Governing: Planck's law in ISO 80000-7 (radiance L, item 7-6.1) with the exact SI constants. [METHOD.md eq. 1–6]
 * These functions take bare finite numbers and are valid for any λ and T within 1e-30…1e30 µm and K; relative
 * error < 1e-12, asserted against tables in test/planck.test.ts. Values too small for a double come out as 0.
 */
import { positive } from './check.js';
import {
  firstRadiationConstantRadiance as c1L,
  secondRadiationConstant as c2,
  planckConstant,
  speedOfLight,
  stefanBoltzmannConstant,
  wienDisplacementConstant,
} from './constants.js';
import type { AnyKelvin, Kelvin } from './units.js';

/** Energy of a photon of 1 µm wavelength: hc/λ. [J·µm] */
const photonEnergyMicrometre: number = planckConstant * speedOfLight * 1e6;

/** Planck's law on bare numbers, for loops: no checks. λ in µm, T in K. */
export function planck(wavelength: number, temperature: number): number {
  const squared = wavelength * wavelength;
  return c1L / (squared * squared * wavelength) / Math.expm1(c2 / (wavelength * temperature));
}

/** ∂L_λ/∂T on bare numbers, for loops: L·(x/T)/(1 − e⁻ˣ) with x = c₂/(λT). */
export function planckSlope(wavelength: number, temperature: number): number {
  const x = c2 / (wavelength * temperature);
  return (planck(wavelength, temperature) * x) / temperature / -Math.expm1(-x);
}

/**
 * Spectral radiance of a blackbody, L_λ = c₁L·λ⁻⁵ / (exp(c₂/λT) − 1).   [METHOD.md eq. 1]
 *
 * @param wavelength - Wavelength in vacuum. [µm], > 0
 * @param temperature - Temperature of the blackbody. [K], > 0
 * @returns Spectral radiance. [W·m⁻²·sr⁻¹·µm⁻¹]
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function spectralRadiance(wavelength: number, temperature: AnyKelvin): number {
  return planck(positive(wavelength, 'wavelength'), positive(temperature, 'temperature'));
}

/**
 * Slope of the spectral radiance with temperature, ∂L_λ/∂T.   [METHOD.md eq. 2]
 *
 * @param wavelength - Wavelength in vacuum. [µm], > 0
 * @param temperature - Temperature of the blackbody. [K], > 0
 * @returns Slope. [W·m⁻²·sr⁻¹·µm⁻¹·K⁻¹]
 * @throws {MeasurementError} as {@link spectralRadiance}.
 */
export function spectralRadianceSlope(wavelength: number, temperature: AnyKelvin): number {
  return planckSlope(positive(wavelength, 'wavelength'), positive(temperature, 'temperature'));
}

/**
 * Temperature of the blackbody that has this spectral radiance: T = c₂ / (λ·ln(1 + c₁L/(λ⁵L))).
 * The inverse of {@link spectralRadiance}.   [METHOD.md eq. 1]
 *
 * @param wavelength - Wavelength in vacuum. [µm], > 0
 * @param radiance - Spectral radiance. [W·m⁻²·sr⁻¹·µm⁻¹], > 0
 * @returns Temperature. [K]
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function spectralTemperature(wavelength: number, radiance: number): Kelvin {
  positive(wavelength, 'wavelength');
  positive(radiance, 'radiance');
  return (c2 / (wavelength * Math.log1p(c1L / (wavelength ** 5 * radiance)))) as Kelvin;
}

/**
 * Spectral photon radiance of a blackbody: L_λ·λ/(hc).   [METHOD.md eq. 3]
 *
 * @param wavelength - Wavelength in vacuum. [µm], > 0
 * @param temperature - Temperature of the blackbody. [K], > 0
 * @returns Photons a second. [s⁻¹·m⁻²·sr⁻¹·µm⁻¹]
 * @throws {MeasurementError} as {@link spectralRadiance}.
 */
export function spectralPhotonRadiance(wavelength: number, temperature: AnyKelvin): number {
  return spectralRadiance(wavelength, temperature) * photonsPerJoule(wavelength);
}

/** Photons of this wavelength that carry one joule: λ/(hc). [µm] → [J⁻¹] */
export function photonsPerJoule(wavelength: number): number {
  return wavelength / photonEnergyMicrometre;
}

/**
 * Spectral radiance of a blackbody per unit of wavenumber: L_ν̃ = L_λ·|dλ/dν̃| = L_λ·10⁴/ν̃².   [METHOD.md eq. 4]
 *
 * @param wavenumber - Wavenumber in vacuum. [cm⁻¹], > 0
 * @param temperature - Temperature of the blackbody. [K], > 0
 * @returns Spectral radiance. [W·m⁻²·sr⁻¹·(cm⁻¹)⁻¹]
 * @throws {MeasurementError} as {@link spectralRadiance}.
 */
export function spectralRadiancePerWavenumber(wavenumber: number, temperature: AnyKelvin): number {
  const wavelength = 1e4 / positive(wavenumber, 'wavenumber');
  return planck(wavelength, positive(temperature, 'temperature')) * (wavelength / wavenumber);
}

/** Bernoulli numbers B₀, B₁, B₂, B₄ … B₁₆ with their index, for the series of a small x. */
const bernoulli: readonly (readonly [index: number, value: number])[] = [
  [0, 1],
  [1, -1 / 2],
  [2, 1 / 6],
  [4, -1 / 30],
  [6, 1 / 42],
  [8, -1 / 30],
  [10, 5 / 66],
  [12, -691 / 2730],
  [14, 7 / 6],
  [16, -3617 / 510],
];

/**
 * Fraction of a blackbody's exitance at wavelengths below λ, as a function of λT.   [METHOD.md eq. 5]
 *
 * F = (15/π⁴) Σₙ e⁻ⁿˣ (x³/n + 3x²/n² + 6x/n³ + 6/n⁴), x = c₂/(λT) (series of Chang and Rhee 1984); below x = 1 the
 * power series 1 − (15/π⁴) Σ Bₖ xᵏ⁺³/((k+3)·k!). Error < 1e-14; asserted at 1e-9 against a computed table.
 *
 * @param wavelengthTemperature - Product λT. [µm·K], > 0
 * @returns Fraction, 0…1.
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function bandFraction(wavelengthTemperature: number): number {
  const x = c2 / positive(wavelengthTemperature, 'wavelengthTemperature');
  const scale = 15 / Math.PI ** 4;
  let sum = 0;
  if (x < 1) {
    let factorial = 1;
    let last = 0;
    for (const [k, value] of bernoulli) {
      for (; last < k; last++) factorial *= last + 1;
      sum += (value * x ** (k + 3)) / ((k + 3) * factorial);
    }
    return 1 - scale * sum;
  }
  for (let n = 1; n * x < 745 && n <= 60; n++) {
    sum += Math.exp(-n * x) * (x ** 3 / n + (3 * x * x) / n ** 2 + (6 * x) / n ** 3 + 6 / n ** 4);
  }
  return scale * sum;
}

/**
 * Radiant exitance of a blackbody over all wavelengths, M = σT⁴ (Stefan–Boltzmann law).   [METHOD.md eq. 6]
 *
 * @param temperature - Temperature of the blackbody. [K], > 0
 * @returns Exitance. [W·m⁻²]
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function blackbodyExitance(temperature: AnyKelvin): number {
  return stefanBoltzmannConstant * positive(temperature, 'temperature') ** 4;
}

/**
 * Wavelength at which the spectral radiance L_λ is largest, λ = b/T (Wien's displacement law).   [METHOD.md eq. 6]
 *
 * @param temperature - Temperature of the blackbody. [K], > 0
 * @returns Wavelength. [µm]
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function peakWavelength(temperature: AnyKelvin): number {
  return wienDisplacementConstant / positive(temperature, 'temperature');
}
