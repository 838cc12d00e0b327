import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  celsius,
  fahrenheit,
  kelvin,
  radiansFromDegrees,
  toCelsius,
  toFahrenheit,
  wavelengthFromWavenumber,
  wavenumberFromWavelength,
  zeroCelsius,
} from '../src/units.js';
import { type BadInput, expectRefused, untyped } from './support/thrown.js';

describe('units of temperature', () => {
  it('0 °C is 273.15 K (published: SI Brochure, 9th edition; ITS-90); exact', () => {
    expect(zeroCelsius).toBe(273.15);
    expect(celsius(0)).toBe(273.15);
    expect(celsius(-273.15)).toBe(0);
  });

  it('the triple point of water, 0.01 °C, is 273.16 K (published: ITS-90); to the rounding of one addition', () => {
    expect(celsius(0.01)).toBeCloseTo(273.16, 12);
  });

  // Published: the degree Fahrenheit is 5/9 K, 32 °F is 0 °C and 212 °F is 100 °C by definition of the scale.
  it.each([
    [32, 0],
    [212, 100],
    [-40, -40],
    [68, 20],
    [-459.67, -273.15],
  ])('%d °F is %d °C (definition of the scale); 1e-12 relative', (fahrenheits, degrees) => {
    expect(fahrenheit(fahrenheits)).toBeCloseTo(degrees + 273.15, 10);
    expect(toCelsius(fahrenheit(fahrenheits))).toBeCloseTo(degrees, 10);
    expect(toFahrenheit(celsius(degrees))).toBeCloseTo(fahrenheits, 10);
  });

  it('a temperature survives the way there and back within 1e-12 of its kelvin value', () => {
    fc.assert(
      fc.property(fc.double({ min: 150, max: 3500, noNaN: true }), (value) => {
        const tolerance = 1e-12 * value;
        expect(kelvin(value)).toBe(value);
        expect(Math.abs(celsius(toCelsius(kelvin(value))) - value)).toBeLessThanOrEqual(tolerance);
        expect(Math.abs(fahrenheit(toFahrenheit(kelvin(value))) - value)).toBeLessThanOrEqual(tolerance);
      }),
    );
  });

  it('absolute zero is a temperature; its rounding in °F is forgiven', () => {
    expect(kelvin(0)).toBe(0);
    expect(fahrenheit(-459.67)).toBeGreaterThanOrEqual(0);
    expect(fahrenheit(-459.67)).toBeLessThan(1e-9);
  });
});

describe('wavelength, wavenumber, angle', () => {
  it('10 µm is 1000 cm⁻¹, by definition', () => {
    expect(wavenumberFromWavelength(10)).toBe(1000);
    expect(wavelengthFromWavenumber(1000)).toBe(10);
    expect(wavelengthFromWavenumber(1250)).toBe(8);
  });

  it('wavelength and wavenumber are inverse of each other to one rounding', () => {
    fc.assert(
      fc.property(fc.double({ min: 0.3, max: 100, noNaN: true }), (wavelength) => {
        const back = wavelengthFromWavenumber(wavenumberFromWavelength(wavelength));
        expect(Math.abs(back / wavelength - 1)).toBeLessThanOrEqual(2 ** -51);
      }),
    );
  });

  it('180° is π', () => {
    expect(radiansFromDegrees(180)).toBe(Math.PI);
    expect(radiansFromDegrees(60)).toBeCloseTo(Math.PI / 3, 15);
  });
});

const refused: readonly BadInput[] = [
  ['a text', () => celsius(untyped('20')), 'wrong-type', 'celsius', 'Write celsius(20)'],
  ['nothing', () => celsius(untyped(undefined)), 'wrong-type', 'celsius', 'Write celsius(20)'],
  ['a text', () => kelvin(untyped('293')), 'wrong-type', 'kelvin', 'kelvin(293.15)'],
  ['an object', () => fahrenheit(untyped({ value: 68 })), 'wrong-type', 'fahrenheit', 'fahrenheit(68)'],
  ['a BigInt', () => kelvin(untyped(300n)), 'wrong-type', 'kelvin', 'got 300n'],
  ['NaN', () => celsius(Number.NaN), 'not-finite', 'celsius', 'a finite number'],
  ['Infinity', () => kelvin(Number.POSITIVE_INFINITY), 'not-finite', 'kelvin', 'got Infinity'],
  ['−Infinity', () => fahrenheit(Number.NEGATIVE_INFINITY), 'not-finite', 'fahrenheit', 'Write celsius(20)'],
  ['below absolute zero in °C', () => celsius(-274), 'out-of-range', 'temperature', '-274 °C'],
  ['Celsius as kelvin', () => kelvin(-5), 'out-of-range', 'temperature', 'Write celsius(-5)'],
  ['below absolute zero in °F', () => fahrenheit(-460), 'out-of-range', 'temperature', '-460 °F'],
  ['a text to °C', () => toCelsius(untyped('300')), 'wrong-type', 'temperature', 'kelvin(293.15)'],
  ['NaN to °C', () => toCelsius(untyped(Number.NaN)), 'not-finite', 'temperature', 'a finite number'],
  ['null to °F', () => toFahrenheit(untyped(null)), 'wrong-type', 'temperature', 'got null'],
  [
    'a text as wavenumber',
    () => wavelengthFromWavenumber(untyped('1000')),
    'wrong-type',
    'wavenumber',
    'Write 1250',
  ],
  ['wavenumber 0', () => wavelengthFromWavenumber(0), 'out-of-range', 'wavenumber', 'Write 1250 for'],
  ['NaN as wavenumber', () => wavelengthFromWavenumber(Number.NaN), 'not-finite', 'wavenumber', 'Write 1250'],
  ['wavelength −8', () => wavenumberFromWavelength(-8), 'out-of-range', 'wavelength', 'Write 8 for 8 µm'],
  [
    'a list as wavelength',
    () => wavenumberFromWavelength(untyped([8])),
    'wrong-type',
    'wavelength',
    'got [8]',
  ],
];

describe('units refuse bad input', () => {
  it.each(refused)('%s', (...row) => expectRefused(row));
});
