import { inspect } from 'node:util';
import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  celsius,
  infraredWindow,
  measurementModel,
  measurementResult,
  recorrection,
  recorrectionResult,
  softwareVersion,
  toCelsius,
} from '../src/index.js';
import { paintedConditions as base, K, refused } from './support/measurement.js';

const uncertainties = { apparent: 1, emissivity: 0.02, reflectedApparentTemperature: 2 };
const result = measurementResult(celsius(62.4), base, uncertainties);

describe('measurementResult', () => {
  it('has the temperature of the model, its parts of radiance, and knows its quantity', () => {
    const model = measurementModel(base);
    expect(result.temperature).toBe(model.surfaceTemperature(celsius(62.4)));
    expect(result.radianceTerms).toEqual(model.radianceTerms(celsius(62.4)));
    expect(result.quantity).toBe('surface temperature');
    expect(Object.isFrozen(result)).toBe(true);
    expect(Object.isFrozen(result.budget)).toBe(true);
  });

  it('takes a reading that says it is apparent temperature', () => {
    const apparent = model(70);
    expect(measurementResult(apparent, base).temperature).toBeCloseTo(celsius(70), 8);
    function model(value: number) {
      return measurementModel(base).apparentTemperature(celsius(value));
    }
  });

  it('prints °C, K, uncertainty with two digits, its factor, and the largest part', () => {
    const text = result.toString();
    const [first, second, ...rest] = text.split('\n');
    const u = result.expandedUncertainty!;
    expect(u).toBeGreaterThan(1);
    expect(u).toBeLessThan(10);
    expect(first).toBe(
      `surface temperature ${toCelsius(result.temperature).toFixed(1)} °C (${result.temperature.toFixed(1)} K), U = ${u.toFixed(1)} K (k = 2)`,
    );
    expect(second).toBe(
      `  the largest part comes from ${result.budget[0]!.name} (${Math.round(100 * result.budget[0]!.share)} % of the variance)`,
    );
    expect(rest).toEqual([]);
    expect(`${result}`).toBe(text);
  });

  it('prints so in the console and in a REPL', () => {
    expect(inspect(result)).toBe(result.toString());
    expect(inspect({ result })).toContain('°C');
    expect(Object.keys(result)).not.toContain('nodejs.util.inspect.custom');
  });

  it.each([
    [25, '0'],
    [3, '0.0'],
    [0.2, '0.00'],
    [0.02, '0.000'],
    [0.002, '0.0000'],
    [0.0002, '0.0000'],
  ])(
    'an uncertainty of about %d K is printed with the decimals of %s (JCGM 100:2008, 7.2.6)',
    (apparent, pattern) => {
      const decimals = pattern.split('.')[1]?.length ?? 0;
      const own = measurementResult(celsius(62.4), { ...base, emissivity: 1 }, { apparent: apparent / 2 });
      expect(own.expandedUncertainty).toBeCloseTo(apparent, 6);
      expect(own.toString()).toContain(`U = ${apparent.toFixed(decimals)} K (k = 2)`);
      expect(own.toString()).toContain(`${toCelsius(own.temperature).toFixed(decimals)} °C`);
    },
  );

  it('without uncertainties says so; with exact inputs names no largest part', () => {
    const plain = measurementResult(celsius(62.4), base).toString();
    expect(plain).toMatch(/^surface temperature 68\.06 °C \(341\.21 K\), uncertainty not stated$/);
    const exact = measurementResult(celsius(62.4), base, { apparent: 0 }).toString();
    expect(exact).toContain('U = 0.00 K (k = 2)');
    expect(exact).not.toContain('largest part');
  });

  it('prints every caution with what to do', () => {
    const own = measurementResult(celsius(62.4), { ...base, emissivity: 0.3, viewAngle: 75 }, uncertainties);
    const lines = own
      .toString()
      .split('\n')
      .filter((line) => line.startsWith('  caution: '));
    expect(lines).toHaveLength(own.cautions.length);
    own.cautions.forEach(({ message, remedy }, i) => {
      expect(lines[i]).toBe(`  caution: ${message} ${remedy}`);
    });
  });
});

describe('the record of a result', () => {
  it('is plain data with inputs, versions, method, result, budget and cautions', () => {
    const conditions: Conditions = {
      ...base,
      emissivity: 0.4,
      path: [
        air({ transmittance: { low: 0.95, high: 0.99 }, temperature: celsius(18) }),
        infraredWindow({
          transmittance: 0.8,
          reflectance: 0.1,
          temperature: celsius(20),
          mirroredTemperature: celsius(22),
        }),
      ],
      origins: { emissivity: 'tape' },
    };
    const own = measurementResult(celsius(62.4), conditions, uncertainties);
    const { record } = own;
    expect(own.toJSON()).toBe(record);
    expect(JSON.parse(JSON.stringify(own))).toEqual(record);
    expect(record).toMatchObject({
      format: 'graybody-result',
      version: 1,
      software: { name: '@graybody/core', version: softwareVersion },
      reading: { quantity: 'apparent temperature', kelvin: celsius(62.4) },
      conditions: {
        format: 'graybody-conditions',
        version: 1,
        band: { kind: 'top-hat', from: 8, to: 14 },
        emissivity: 0.4,
        reflectedApparentTemperature: { kelvin: 294.15 },
        origins: { emissivity: 'tape' },
      },
      uncertainties,
      result: { quantity: 'surface temperature', kelvin: own.temperature, coverageFactor: 2 },
    });
    expect(record.method).toContain('METHOD.md eq. 12');
    expect(record.budget).toEqual(own.budget);
    expect(record.cautions).toEqual(own.cautions);
    expect(record).not.toHaveProperty('recorded');
    expect(JSON.stringify(measurementResult(celsius(62.4), base).record)).not.toContain('ncertainty');
  });

  it('of a recorrection holds the recorded settings', () => {
    const recorded = { emissivity: 0.95, reflectedApparentTemperature: celsius(20), resolution: 0.1 };
    const own = recorrectionResult(celsius(62.4), recorded, base, { recorded: 0.4 });
    expect(own.temperature).toBe(recorrection(recorded, base).surfaceTemperature(celsius(62.4)));
    expect(own.record).toMatchObject({
      reading: { quantity: 'recorded temperature', kelvin: celsius(62.4) },
      recorded: { emissivity: 0.95, reflectedApparentTemperature: { kelvin: 293.15 }, resolution: 0.1 },
    });
    expect(own.record.method).toContain('recorrection, METHOD.md eq. 16');
    expect(own.toString()).toContain('surface temperature');
  });
});

describe('bad input', () => {
  it('is refused as by the model', () => {
    refused(() => measurementResult(undefined as never, base), 'wrong-type', 'apparent');
    refused(() => measurementResult(K(62.4), base), 'out-of-range', 'apparent', 'celsius(62.4)');
    refused(() => measurementResult(celsius(62.4), undefined as never), 'wrong-type', '');
    refused(
      () => measurementResult(celsius(62.4), { ...base, emissivity: 86 }),
      'out-of-range',
      'emissivity',
      'Write 0.86',
    );
    refused(() => measurementResult(celsius(0), { ...base, emissivity: 0.1 }), 'no-solution', 'apparent');
    refused(() => recorrectionResult(celsius(62.4), undefined as never, base), 'wrong-type', 'recorded');
  });
});
