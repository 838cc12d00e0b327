/**
 * Spellings of the units of temperature, and what turns their numbers into kelvin.
 */
import { zeroCelsius } from '@graybody/core';
import { ArrayError } from './errors.js';
import { nearest } from './options.js';

/** A unit of temperature by its short name. */
export type TemperatureUnit = 'K' | 'degC' | 'degF';

/** Kelvin = factor · (number + shift). */
export interface ToKelvin {
  readonly unit: TemperatureUnit;
  readonly name: string;
  readonly factor: number;
  readonly shift: number;
  /** The number of absolute zero. */
  readonly absoluteZero: number;
}

const units: Readonly<Record<TemperatureUnit, ToKelvin>> = {
  K: { unit: 'K', name: 'kelvin', factor: 1, shift: 0, absoluteZero: 0 },
  degC: { unit: 'degC', name: 'degrees Celsius', factor: 1, shift: zeroCelsius, absoluteZero: -zeroCelsius },
  degF: { unit: 'degF', name: 'degrees Fahrenheit', factor: 1 / 1.8, shift: 459.67, absoluteZero: -459.67 },
};

const spellings: Readonly<Record<string, TemperatureUnit>> = {
  k: 'K',
  kelvin: 'K',
  kelvins: 'K',
  'deg k': 'K',
  degc: 'degC',
  'deg c': 'degC',
  deg_c: 'degC',
  c: 'degC',
  '°c': 'degC',
  '℃': 'degC',
  celsius: 'degC',
  'degree celsius': 'degC',
  'degrees celsius': 'degC',
  degrees_celsius: 'degC',
  centigrade: 'degC',
  cel: 'degC',
  degf: 'degF',
  'deg f': 'degF',
  deg_f: 'degF',
  f: 'degF',
  '°f': 'degF',
  '℉': 'degF',
  fahrenheit: 'degF',
  'degree fahrenheit': 'degF',
  'degrees fahrenheit': 'degF',
  degrees_fahrenheit: 'degF',
};

/** The unit of a spelling, upper or lower case alike; undefined for another word. */
export function temperatureUnit(spelling: string): ToKelvin | undefined {
  const unit = spellings[spelling.trim().toLowerCase()];
  return unit === undefined ? undefined : units[unit];
}

/**
 * The unit an option names.
 *
 * @throws {ArrayError} `wrong-unit`.
 */
export function checkedTemperatureUnit(value: unknown, path: string): ToKelvin {
  const unit = typeof value === 'string' ? temperatureUnit(value) : undefined;
  if (unit !== undefined) return unit;
  const close = nearest(value, Object.keys(spellings));
  throw new ArrayError('wrong-unit', {
    path,
    expected: "a unit of temperature, 'K', 'degC' or 'degF'",
    received: value,
    hint:
      close === undefined
        ? "A scaled unit is written as { unit: 'K', scale: 0.01 }."
        : `Did you mean '${close}'?`,
  });
}
