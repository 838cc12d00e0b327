/**
 * Physical constants, exact by the definition of the SI units (SI Brochure, 9th edition, 2019; CODATA 2018
 * and 2022 agree). Wavelengths are in micrometres throughout, so the radiation constants carry that unit.
 */

/** Planck constant h. [J·s], exact */
export const planckConstant = 6.62607015e-34;
/** Speed of light in vacuum c. [m·s⁻¹], exact */
export const speedOfLight = 299_792_458;
/** Boltzmann constant k. [J·K⁻¹], exact */
export const boltzmannConstant = 1.380649e-23;

/** First radiation constant for spectral radiance, c₁L = 2hc². [W·m⁻²·sr⁻¹·µm⁴], 1 m⁴ = 10²⁴ µm⁴ */
export const firstRadiationConstantRadiance: number = 2 * planckConstant * speedOfLight ** 2 * 1e24;
/** First radiation constant c₁ = 2πhc². [W·m²] */
export const firstRadiationConstant: number = 2 * Math.PI * planckConstant * speedOfLight ** 2;
/** Second radiation constant c₂ = hc/k. [µm·K] */
export const secondRadiationConstant: number = ((planckConstant * speedOfLight) / boltzmannConstant) * 1e6;
/** Stefan–Boltzmann constant σ = 2π⁵k⁴/(15h³c²). [W·m⁻²·K⁻⁴] */
export const stefanBoltzmannConstant: number =
  (2 * Math.PI ** 5 * boltzmannConstant ** 4) / (15 * planckConstant ** 3 * speedOfLight ** 2);
/** Wien displacement constant b: λ_max·T, with x = 4.965114231744276 the root of x = 5(1 − e⁻ˣ). [µm·K] */
export const wienDisplacementConstant: number = secondRadiationConstant / 4.965114231744276;
