import { describe, expect, it } from 'vitest';
import {
  air,
  apparentTemperature,
  type Conditions,
  celsius,
  infraredWindow,
  surfaceTemperature,
  toCelsius,
  topHatBand,
} from '../src/index.js';
import { refused } from './support/measurement.js';

const longWave = topHatBand(8, 14);
const midWave = topHatBand(3, 5);

// Table of the project’s brief, computed outside this library with flat bands and surroundings at 20 °C.
// Tolerance: half a unit of the last digit printed.
describe('sizes of common errors', () => {
  const room = (emissivity: number, band = longWave, reflected = 20): Conditions => ({
    band,
    emissivity,
    reflectedApparentTemperature: celsius(reflected),
  });
  /** What comes out with `used`, less the truth, when the instrument looks at a surface under `real`. */
  const error = (truth: number, real: Conditions, used: Conditions): number =>
    toCelsius(surfaceTemperature(apparentTemperature(celsius(truth), real), used)) - truth;

  it.each([
    [40, 1.0, 0.05, 0.8, 0.05],
    [80, 2.7, 0.05, 1.7, 0.05],
    [150, 5.2, 0.05, 2.8, 0.05],
    [500, 18, 0.5, 8.8, 0.05],
  ])(
    'emissivity 0.90 used for 0.95 at %d °C: +%d K in 8–14 µm, +%d K in 3–5 µm',
    (truth, lw, lwTol, mw, mwTol) => {
      expect(Math.abs(error(truth, room(0.95), room(0.9)) - lw)).toBeLessThan(lwTol);
      expect(Math.abs(error(truth, room(0.95, midWave), room(0.9, midWave)) - mw)).toBeLessThan(mwTol);
    },
  );

  it.each([
    [40, 3.6, 0.05],
    [80, 9.5, 0.05],
    [150, 18, 0.5],
    [500, 65, 0.5],
  ])('emissivity 0.25 used for 0.30 at %d °C: +%d K', (truth, size, tolerance) => {
    expect(Math.abs(error(truth, room(0.3), room(0.25)) - size)).toBeLessThan(tolerance);
  });

  it.each([
    [0.95, -0.2, 0.05],
    [0.8, -1.1, 0.05],
    [0.6, -2.9, 0.05],
    [0.3, -10, 0.5],
    [0.1, -48, 0.5],
  ])(
    'reflected apparent temperature 5 K too high at 40 °C and emissivity %d: %d K',
    (emissivity, size, tolerance) => {
      expect(Math.abs(error(40, room(emissivity), room(emissivity, longWave, 25)) - size)).toBeLessThan(
        tolerance,
      );
    },
  );

  it('reflected apparent temperature 5 K too high at 40 °C and emissivity 0.05: no solution', () => {
    refused(() => error(40, room(0.05), room(0.05, longWave, 25)), 'no-solution', 'apparent', 'surroundings');
  });

  it('a clear sky at −40 °C taken as 20 °C at 40 °C: −1.9 K (0.95), −27 K (0.6)', () => {
    expect(Math.abs(error(40, room(0.95, longWave, -40), room(0.95)) - -1.9)).toBeLessThan(0.05);
    expect(Math.abs(error(40, room(0.6, longWave, -40), room(0.6)) - -27)).toBeLessThan(0.5);
  });

  it('an operator of 34 °C mirrored in metal of emissivity 0.3 at 40 °C: +26 K', () => {
    expect(Math.abs(error(40, room(0.3, longWave, 34), room(0.3)) - 26)).toBeLessThan(0.5);
  });

  it('a window of transmittance 0.5 ignored: −27 K at 80 °C, −53 K at 150 °C', () => {
    const behind = { ...room(1), path: [infraredWindow({ transmittance: 0.5, temperature: celsius(20) })] };
    expect(Math.abs(error(80, behind, room(1)) - -27)).toBeLessThan(0.5);
    expect(Math.abs(error(150, behind, room(1)) - -53)).toBeLessThan(0.5);
  });

  it.each([
    [0.98, -1.0],
    [0.95, -2.5],
    [0.9, -5.0],
  ])('air of transmittance %d ignored at 80 °C: %d K', (transmittance, size) => {
    const through = { ...room(1), path: [air({ transmittance, temperature: celsius(20) })] };
    expect(Math.abs(error(80, through, room(1)) - size)).toBeLessThan(0.05);
  });

  it.each([
    [0.85, 8, 0.5],
    [0.6, 30, 0.5],
    [0.3, 90, 0.5],
  ])('correcting a corrected reading of 80 °C again, emissivity %d: +%d K', (emissivity, size, tolerance) => {
    const again = toCelsius(surfaceTemperature(celsius(80), room(emissivity))) - 80;
    expect(Math.abs(again - size)).toBeLessThan(tolerance);
  });

  it('the mean of 20 and 100 °C by radiance: 65.5 °C in 8–14 µm, 76.3 °C in 3–5 µm', () => {
    const mean = (band: typeof longWave): number =>
      toCelsius(band.temperature((band.radiance(celsius(20)) + band.radiance(celsius(100))) / 2));
    expect(Math.abs(mean(longWave) - 65.5)).toBeLessThan(0.05);
    expect(Math.abs(mean(midWave) - 76.3)).toBeLessThan(0.05);
  });
});
