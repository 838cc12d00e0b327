import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  absoluteHumidity,
  dewPoint,
  frostPoint,
  precipitableWater,
  relativeHumidity,
  saturationVapourPressure,
  saturationVapourPressureOverIce,
  vapourPressure,
  vapourPressureFromAbsoluteHumidity,
} from '../src/humidity.js';
import { type AnyKelvin, celsius } from '../src/units.js';

const table = readFileSync(new URL('../../../fixtures/reference/psychro-iapws.csv', import.meta.url), 'utf8')
  .trim()
  .split('\n')
  .slice(1)
  .map((line) => line.split(','))
  .map(([t, phase, pressure, density, ideal]) => ({
    kelvin: celsius(Number(t)),
    phase: phase!.split(' ')[0]!,
    pressure: Number(pressure),
    density: Number(density),
    ideal: Number(ideal),
  }));

// IAPWS-IF97 over water, IAPWS R14-08 over ice, computed (fixtures/reference/README.md).
describe('saturation vapour pressure agrees with IAPWS to 3e-4', () => {
  const water = table.filter(({ phase, kelvin }) => phase === 'water' && kelvin <= celsius(60));
  it.each(water)('over water at $kelvin K', ({ kelvin, pressure }) => {
    expect(Math.abs(saturationVapourPressure(kelvin) / pressure - 1)).toBeLessThan(3e-4);
  });
  it.each(table.filter(({ phase }) => phase === 'ice'))('over ice at $kelvin K', ({ kelvin, pressure }) => {
    expect(Math.abs(saturationVapourPressureOverIce(kelvin) / pressure - 1)).toBeLessThan(3e-4);
  });
  it('the table has both phases', () => {
    expect(water.length).toBeGreaterThan(8);
    expect(table.length - water.length).toBeGreaterThan(4);
  });
});

it('over water and over ice differ by 22 % at −20 °C (fixtures/reference, from memory)', () => {
  const ratio = saturationVapourPressure(celsius(-20)) / saturationVapourPressureOverIce(celsius(-20));
  expect(ratio).toBeCloseTo(1.22, 2);
});

it('absolute humidity at saturation is that of an ideal gas to 3e-4, and 0.55 % under IAPWS-IF97 at 60 °C at most', () => {
  for (const { kelvin, phase, ideal, density } of table) {
    if (phase !== 'water' || kelvin > celsius(60)) continue;
    const own = absoluteHumidity(saturationVapourPressure(kelvin), kelvin) * 1000;
    expect(Math.abs(own / ideal - 1)).toBeLessThan(3e-4);
    expect(own / density - 1).toBeGreaterThan(-5.5e-3);
  }
});

it('at 20 °C and 50 % the dew point is 9.27 °C and the path of 100 m holds 0.86 mm of water', () => {
  const pressure = vapourPressure(0.5, celsius(20));
  // Dew point of half the IAPWS saturation pressure at 20 °C, interpolated in ln e between 5 and 10 °C: 9.27 °C.
  expect(dewPoint(pressure) - 273.15).toBeCloseTo(9.27, 2);
  expect(precipitableWater(pressure, celsius(20), 100) * 1000).toBeCloseTo(0.8645, 3);
});

it('dew point, frost point, relative and absolute humidity are inverses', () => {
  fc.assert(
    fc.property(
      fc.double({ min: 210, max: 370, noNaN: true }),
      fc.double({ min: 0.01, max: 1, noNaN: true }),
      (k, rh) => {
        const kelvin = k as AnyKelvin;
        expect(dewPoint(saturationVapourPressure(kelvin))).toBeCloseTo(k, 6);
        if (k < 273) expect(frostPoint(saturationVapourPressureOverIce(kelvin))).toBeCloseTo(k, 6);
        const pressure = vapourPressure(rh, kelvin);
        expect(relativeHumidity(pressure, kelvin)).toBeCloseTo(rh, 12);
        expect(
          vapourPressureFromAbsoluteHumidity(absoluteHumidity(pressure, kelvin), kelvin) / pressure,
        ).toBeCloseTo(1, 12);
      },
    ),
  );
});

describe('bad input', () => {
  it.each([
    ['Celsius as kelvin', () => saturationVapourPressure(20 as AnyKelvin), 'out-of-range', 'celsius(20)'],
    ['percent as ratio', () => vapourPressure(50, celsius(20)), 'out-of-range', 'Write 0.5 for 50 %'],
    ['no number', () => absoluteHumidity('5' as never, celsius(20)), 'wrong-type', 'vapourPressure'],
    ['a dew point without vapour', () => dewPoint(0), 'out-of-range', 'vapourPressure'],
    ['a dew point above boiling', () => dewPoint(2e5), 'out-of-range', 'Pa'],
    [
      'ice above its melting point',
      () => saturationVapourPressureOverIce(celsius(5)),
      'out-of-range',
      '273.16',
    ],
    ['a negative distance', () => precipitableWater(1000, celsius(20), -1), 'out-of-range', 'distance'],
  ] as const)('%s', (_, call, code, text) => {
    expect(call).toThrow(expect.objectContaining({ code, message: expect.stringContaining(text) }));
  });
});
