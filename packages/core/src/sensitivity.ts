/**
 * Sensitivity coefficients c_i = ∂T/∂x_i of the surface temperature to every input of the measurement equation,
 * analytic.   [METHOD.md eq. 14–15; JCGM 100:2008, 5.1.3]
 *
 * ∂T/∂x = −(∂L_instrument/∂x) / (gain·∂L/∂T) for inputs of the actual conditions; for the reading, and for
 * settings an instrument applied, the sign is +. Checked against numerical derivatives in test/sensitivity.test.ts.
 */
import type { Conditions } from './conditions.js';
import { type EquationAt, equationAt } from './evaluation.js';
import type { Layer } from './layer.js';
import { type EquationInput, measurementEquation, partialDerivatives } from './measurement-equation.js';
import { type Pixel, type Scalar, scalarAt } from './scalar.js';

/** Kelvin per unit of the input (per kelvin, per 1 of a ratio, per unit of the band's radiance), by input name. */
export type Sensitivities = Readonly<Record<string, number>>;

/**
 * ∂L_instrument per unit of each input, by name.
 *
 * @param at - The equation at one place.
 * @param conditions - What the equation was built from.
 * @param kelvin - Temperature of the target. [K]
 */
export function radianceSensitivities(
  at: EquationAt,
  conditions: Conditions,
  kelvin: number,
  pixel: Pixel | undefined,
): Record<string, number> {
  const { equation, value } = at;
  const partial = partialDerivatives(equation, at.x, equation.targetBand.exact.radiance(kelvin));
  const result: Record<string, number> = {};
  for (const input of equation.inputs) {
    const perRadiance = partial[input.slot]!;
    if (input.kind === 'curve') result[input.name] = curveDerivative(input, conditions, kelvin, pixel);
    else if (input.kind === 'temperature') {
      result[input.name] = perRadiance * input.band.exact.slope(value[input.slot]!);
    } else result[input.name] = perRadiance;
  }
  return result;
}

/**
 * ∂L_instrument for a shift of a whole curve by the same amount at every wavelength.
 *
 * Emissivity: the path's share of L(T) − L(T_refl). A layer: what arrives without it, less a blackbody at its
 * temperature (transmittance); what it mirrors, less that (reflectance).
 */
function curveDerivative(
  input: EquationInput,
  conditions: Conditions,
  kelvin: number,
  pixel: Pixel | undefined,
): number {
  const path = conditions.path ?? [];
  // A temperature beside the curve may be a map: a number is needed before it can be a blackbody's.
  const kelvinOf = (value: Scalar | undefined): number => scalarAt(value as Scalar, pixel, input.name);
  const blackbodyBehind = (temperature: number, nearer: readonly Layer[]): number => {
    const { band } = conditions;
    const black = {
      band,
      emissivity: 1,
      reflectedApparentTemperature: temperature,
      path: nearer,
    } as Conditions;
    return radianceOf(black, temperature, pixel);
  };
  if (input.layer === undefined) {
    const reflected = kelvinOf(conditions.reflectedApparentTemperature);
    return blackbodyBehind(kelvin, path) - blackbodyBehind(reflected, path);
  }
  const k = input.layer;
  const layer = path[k]!;
  const nearer = path.slice(k + 1);
  const emitted =
    layer.temperature === undefined
      ? blackOffset(conditions, nearer, pixel)
      : blackbodyBehind(kelvinOf(layer.temperature), nearer);
  if (input.name.endsWith('.reflectance')) {
    return blackbodyBehind(kelvinOf(layer.mirroredTemperature), nearer) - emitted;
  }
  // The layer stays in place for what lies behind it, but lets everything through and adds nothing.
  const clear: Layer = Object.freeze({
    ...layer,
    reflectance: 0,
    temperature: undefined,
    mirroredTemperature: undefined,
    pathRadiance: undefined,
    transmittanceBehind: () => 1,
  });
  return (
    radianceOf({ ...conditions, path: [...path.slice(0, k), clear, ...nearer] }, kelvin, pixel) - emitted
  );
}

/** Radiance at the instrument from a target of this temperature. */
function radianceOf(conditions: Conditions, kelvin: number, pixel: Pixel | undefined): number {
  const { equation, gain, offset } = equationAt(measurementEquation(conditions), pixel);
  return gain * equation.targetBand.exact.radiance(kelvin) + offset;
}

/** What the layers alone send, with nothing behind them. */
function blackOffset(conditions: Conditions, path: readonly Layer[], pixel: Pixel | undefined): number {
  const dark = {
    band: conditions.band,
    emissivity: 1,
    reflectedApparentTemperature: 300,
    path,
  } as unknown as Conditions;
  return equationAt(measurementEquation(dark), pixel).offset;
}
