/**
 * The only place where a unit is converted.
 *
 * Inside the library temperatures are kelvin, wavelengths micrometres. Differences and uncertainties are plain
 * numbers in kelvin: a difference has no zero point, so `celsius()` must never be applied to one.
 */
import { MeasurementError } from './errors.js';
import type { Quantity } from './quantity.js';

declare const unitTag: unique symbol;
declare const quantityTag: unique symbol;

/**
 * A temperature in kelvin. The only branded number of the library.
 *
 * A bare `Kelvin` given to a correction is an apparent temperature by contract. What a correction returns is
 * `Kelvin<'surface temperature'>`, which a correction does not accept: correcting twice does not compile.
 */
export type Kelvin<Q extends Quantity | undefined = undefined> = number & {
  readonly [unitTag]: 'K';
  readonly [quantityTag]?: Q;
};

/** A temperature in kelvin of whatever quantity. */
export type AnyKelvin = number & { readonly [unitTag]: 'K' };

/** The temperature of 0 °C. [K], exact (ITS-90) */
export const zeroCelsius = 273.15;

/** Temperatures below this are taken for a slip of unit: no instrument of the trade reads them. [K] */
export const lowestTemperature = 150;
/** Temperatures above this are outside what the bands are proven for. [K] */
export const highestTemperature = 3500;

/**
 * A temperature given in degrees Celsius.
 *
 * @param value - Temperature. [°C], ≥ −273.15
 * @returns The same temperature. [K]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, or `out-of-range` below absolute zero.
 * @example
 * celsius(62.4) // 335.55
 */
export function celsius(value: number): Kelvin {
  return absolute(finite(value, 'celsius') + zeroCelsius, value, '°C');
}

/**
 * A temperature given in kelvin.
 *
 * @param value - Temperature. [K], ≥ 0
 * @throws {MeasurementError} `wrong-type`, `not-finite`, or `out-of-range` below absolute zero.
 */
export function kelvin(value: number): Kelvin {
  return absolute(finite(value, 'kelvin'), value, 'K');
}

/**
 * A temperature given in degrees Fahrenheit.
 *
 * @param value - Temperature. [°F], ≥ −459.67
 * @returns The same temperature. [K]
 * @throws {MeasurementError} `wrong-type`, `not-finite`, or `out-of-range` below absolute zero.
 */
export function fahrenheit(value: number): Kelvin {
  return absolute((finite(value, 'fahrenheit') + 459.67) / 1.8, value, '°F');
}

/** The temperature in degrees Celsius. [K] → [°C] */
export function toCelsius(temperature: AnyKelvin): number {
  return finite(temperature, 'temperature') - zeroCelsius;
}

/** The temperature in degrees Fahrenheit. [K] → [°F] */
export function toFahrenheit(temperature: AnyKelvin): number {
  return finite(temperature, 'temperature') * 1.8 - 459.67;
}

/**
 * Wavelength of a wavenumber. [cm⁻¹] → [µm]
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function wavelengthFromWavenumber(wavenumber: number): number {
  return 1e4 / positive(wavenumber, 'wavenumber', '1250 for 1250 cm⁻¹');
}

/**
 * Wavenumber of a wavelength. [µm] → [cm⁻¹]
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite` or `out-of-range` for what is not a positive number.
 */
export function wavenumberFromWavelength(wavelength: number): number {
  return 1e4 / positive(wavelength, 'wavelength', '8 for 8 µm');
}

/** Radians of an angle in degrees. [°] → [rad] */
export function radiansFromDegrees(angle: number): number {
  return (angle * Math.PI) / 180;
}

const writeTemperature = 'Write celsius(20), kelvin(293.15) or fahrenheit(68) with a plain number.';

function finite(value: number, path: string, hint: string = writeTemperature): number {
  if (typeof value !== 'number') {
    throw new MeasurementError('wrong-type', { path, expected: 'a number', received: value, hint });
  }
  if (!Number.isFinite(value)) {
    throw new MeasurementError('not-finite', { path, expected: 'a finite number', received: value, hint });
  }
  return value;
}

/** The edge checks of `check.ts` stand on this file, so the two conversions of wavelength bring their own. */
function positive(value: number, path: string, example: string): number {
  const hint = `Write ${example}.`;
  if (finite(value, path, hint) > 0) return value;
  throw new MeasurementError('out-of-range', { path, expected: 'a number > 0', received: value, hint });
}

function absolute(value: number, received: number, unit: string): Kelvin {
  // 1e-9 forgives the rounding of −459.67 °F; a true zero is still a zero.
  if (value < -1e-9) {
    throw new MeasurementError('out-of-range', {
      path: 'temperature',
      expected: 'a temperature not below absolute zero',
      received: `${received} ${unit}`,
      hint:
        unit === 'K'
          ? `Write celsius(${received}) for ${received} °C.`
          : 'A difference has no zero point: write it as a plain number of kelvin.',
    });
  }
  return Math.max(value, 0) as Kelvin;
}
