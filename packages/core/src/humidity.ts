/**
 * Water vapour in air: saturation pressure over water and over ice, relative humidity, dew and frost point,
 * absolute humidity, precipitable water.
 *
 * Governing: D. Sonntag, Advancements in the field of hygrometry, Meteorol. Z. 3 (1994) 51–66 (over ice: from
 * memory). Relative humidity is over liquid water at every temperature, the meteorological convention; dew point is
 * over water, frost point over ice. Within 3e-4 of IAPWS values from −40 to 60 °C, asserted in
 * test/humidity.test.ts. Vapour is taken as an ideal gas, which errs by 0.4 % in density at 60 °C saturated.
 */
import { finiteNumber, notNegative, positive, ratio } from './check.js';
import { MeasurementError } from './errors.js';
import type { AnyKelvin, Kelvin } from './units.js';

/** Specific gas constant of water vapour, R/M with M = 18.015268e-3 kg/mol (IAPWS). [J·kg⁻¹·K⁻¹] */
const vapourGasConstant: number = 8.31446261815324 / 18.015268e-3;

/** Temperatures the formulas hold for: −65…100 °C over water, −65…0.01 °C over ice. [K] */
const lowest = 208.15;
const highestOverWater = 373.15;
const highestOverIce = 273.16;

type Coefficients = readonly [
  inverse: number,
  constant: number,
  linear: number,
  square: number,
  logarithm: number,
];
const overWater: Coefficients = [-6096.9385, 21.2409642, -2.711193e-2, 1.673952e-5, 2.433502];
const overIce: Coefficients = [-6024.5282, 29.3271642, 1.0613868e-2, -1.3198825e-5, -0.49382577];

/** ln e_s = a/T + b + c·T + d·T² + f·ln T, e_s in Pa.   [METHOD.md eq. 19] */
function saturation([a, b, c, d, f]: Coefficients, kelvin: number): number {
  return Math.exp(a / kelvin + b + c * kelvin + d * kelvin * kelvin + f * Math.log(kelvin));
}

/**
 * Saturation vapour pressure over liquid water, also below 0 °C.   [METHOD.md eq. 19]
 *
 * @param temperature - Air temperature. [K], −65…100 °C
 * @returns [Pa]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function saturationVapourPressure(temperature: AnyKelvin): number {
  return saturation(overWater, within(temperature, highestOverWater));
}

/**
 * Saturation vapour pressure over ice.   [METHOD.md eq. 19]
 *
 * @param temperature - Temperature. [K], −65…0.01 °C
 * @returns [Pa]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function saturationVapourPressureOverIce(temperature: AnyKelvin): number {
  return saturation(overIce, within(temperature, highestOverIce));
}

/**
 * Partial pressure of water vapour, e = RH·e_s(T).
 *
 * @param relativeHumidity - Over liquid water. 0…1
 * @param temperature - Air temperature. [K]
 * @returns [Pa]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function vapourPressure(relativeHumidity: number, temperature: AnyKelvin): number {
  return ratio(relativeHumidity, 'relativeHumidity') * saturationVapourPressure(temperature);
}

/**
 * Relative humidity over liquid water, RH = e/e_s(T): the inverse of {@link vapourPressure}.
 *
 * @param pressure - Vapour pressure. [Pa], ≥ 0
 * @param temperature - Air temperature. [K]
 * @returns 0…; above 1 the air is supersaturated.
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function relativeHumidity(pressure: number, temperature: AnyKelvin): number {
  return notNegative(pressure, 'vapourPressure') / saturationVapourPressure(temperature);
}

/**
 * Dew point: the temperature at which this vapour pressure saturates over liquid water.
 *
 * @param pressure - Vapour pressure. [Pa], > 0
 * @returns [K]
 * @throws {MeasurementError} `wrong-type`, `not-finite`; `out-of-range` outside −65…100 °C.
 */
export function dewPoint(pressure: number): Kelvin {
  return inverse(overWater, pressure, highestOverWater);
}

/**
 * Frost point: the temperature at which this vapour pressure saturates over ice.
 *
 * @param pressure - Vapour pressure. [Pa], > 0
 * @returns [K]
 * @throws {MeasurementError} `wrong-type`, `not-finite`; `out-of-range` outside −65…0.01 °C.
 */
export function frostPoint(pressure: number): Kelvin {
  return inverse(overIce, pressure, highestOverIce);
}

/**
 * Absolute humidity: mass of water vapour in a volume of air, e/(R_v·T).   [METHOD.md eq. 20]
 *
 * @param pressure - Vapour pressure. [Pa], ≥ 0
 * @param temperature - Air temperature. [K]
 * @returns [kg·m⁻³]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function absoluteHumidity(pressure: number, temperature: AnyKelvin): number {
  return (
    notNegative(pressure, 'vapourPressure') / (vapourGasConstant * within(temperature, highestOverWater))
  );
}

/**
 * Vapour pressure of an absolute humidity: the inverse of {@link absoluteHumidity}.
 *
 * @param humidity - Absolute humidity. [kg·m⁻³], ≥ 0
 * @param temperature - Air temperature. [K]
 * @returns [Pa]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function vapourPressureFromAbsoluteHumidity(humidity: number, temperature: AnyKelvin): number {
  return (
    notNegative(humidity, 'absoluteHumidity') * vapourGasConstant * within(temperature, highestOverWater)
  );
}

/**
 * Precipitable water along a path: the depth of the water if all vapour on it were liquid (1000 kg/m³).
 *
 * @param pressure - Vapour pressure. [Pa], ≥ 0
 * @param temperature - Air temperature. [K]
 * @param distance - Length of the path. [m], ≥ 0
 * @returns [m]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function precipitableWater(pressure: number, temperature: AnyKelvin, distance: number): number {
  return (absoluteHumidity(pressure, temperature) * notNegative(distance, 'distance')) / 1000;
}

/** Newton on ln e against 1/T, which is nearly straight; bracketed by the range. */
function inverse(coefficients: Coefficients, pressure: number, highest: number): Kelvin {
  const target = positive(pressure, 'vapourPressure');
  const [least, most] = [saturation(coefficients, lowest), saturation(coefficients, highest)];
  if (target < least || target > most) {
    throw new MeasurementError('out-of-range', {
      path: 'vapourPressure',
      expected: `a vapour pressure of ${least.toPrecision(3)}…${most.toPrecision(6)} Pa`,
      received: pressure,
    });
  }
  const [a, , c, d, f] = coefficients;
  let kelvin = 273.15;
  for (let step = 0; step < 50; step++) {
    const slope = -a / kelvin ** 2 + c + 2 * d * kelvin + f / kelvin; // d ln e / dT
    const change = Math.log(target / saturation(coefficients, kelvin)) / slope;
    kelvin = Math.min(highest, Math.max(lowest, kelvin / (1 - change / kelvin)));
    if (Math.abs(change) < 1e-10) break;
  }
  return kelvin as Kelvin;
}

function within(temperature: unknown, highest: number): number {
  const kelvin = finiteNumber(temperature, 'temperature', 'a temperature in kelvin');
  if (kelvin >= lowest && kelvin <= highest) return kelvin;
  throw new MeasurementError('out-of-range', {
    path: 'temperature',
    expected: `a temperature of ${lowest}…${highest} K`,
    received: temperature,
    ...(kelvin > -70 && kelvin < 101 ? { hint: `Did you mean celsius(${kelvin})?` } : {}),
  });
}
