import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  apparentTemperature,
  bandFromDescriptor,
  type Conditions,
  celsius,
  measurementModel,
  measurementResult,
  surfaceTemperature,
  toCelsius,
  topHatBand,
} from '../src/index.js';
import { anyConditions, bands, grayConditions, K, kelvinBetween, refused } from './support/measurement.js';

const longWave = topHatBand(8, 14);
const base: Conditions = { band: longWave, emissivity: 0.86, reflectedApparentTemperature: celsius(21) };

describe('properties of a correction', () => {
  it('inverse after forward is the identity, whatever the conditions', () => {
    fc.assert(
      fc.property(anyConditions, kelvinBetween(215, 3270), (conditions, surface) => {
        const model = measurementModel(conditions);
        const apparent = model.apparentTemperature(surface);
        const back = model.surfaceTemperature(apparent);
        // The inverse of a band stops at 1e-12 of the temperature; a sensitivity above 1 magnifies that.
        const magnified = Math.max(1, model.sensitivities(apparent).apparent!);
        expect(Math.abs(back - surface)).toBeLessThan(1e-8 * magnified);
      }),
      { numRuns: 400 },
    );
  });

  it('a warmer surface shows more, and a higher reading means a warmer surface', () => {
    fc.assert(
      fc.property(
        anyConditions,
        kelvinBetween(215, 3200),
        fc.double({ min: 0.01, max: 60, noNaN: true }),
        (conditions, surface, step) => {
          const model = measurementModel(conditions);
          const low = model.apparentTemperature(surface);
          const high = model.apparentTemperature(K(surface + step));
          expect(high).toBeGreaterThan(low);
          expect(model.surfaceTemperature(high)).toBeGreaterThan(model.surfaceTemperature(low));
        },
      ),
    );
  });

  it('emissivity 1 and an empty path give the reading back', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...bands),
        kelvinBetween(215, 3270),
        kelvinBetween(150, 3500),
        (band, apparent, reflected) => {
          const conditions = { band, emissivity: 1, reflectedApparentTemperature: reflected };
          expect(Math.abs(surfaceTemperature(apparent, conditions) - apparent)).toBeLessThan(1e-8);
          expect(
            Math.abs(apparentTemperature(apparent, { ...conditions, path: [] }) - apparent),
          ).toBeLessThan(1e-8);
        },
      ),
    );
  });

  it('the answer does not depend on whether the conditions were compiled before', () => {
    fc.assert(
      fc.property(grayConditions, kelvinBetween(250, 900), (conditions, surface) => {
        const apparent = apparentTemperature(surface, conditions);
        expect(measurementModel(conditions).surfaceTemperature(apparent)).toBe(
          surfaceTemperature(apparent, conditions),
        );
      }),
    );
  });
});

describe('the band', () => {
  it('as descriptor gives the same model', () => {
    const band = bandFromDescriptor({ kind: 'top-hat', from: 8, to: 14 });
    expect(surfaceTemperature(celsius(62.4), { ...base, band })).toBe(
      surfaceTemperature(celsius(62.4), base),
    );
  });

  it('the example of DESIGN.md: 62.4 °C at emissivity 0.86 and 21 °C is 68.06 °C', () => {
    const L = (longWave.radiance(celsius(62.4)) - 0.14 * longWave.radiance(celsius(21))) / 0.86;
    expect(surfaceTemperature(celsius(62.4), base)).toBeCloseTo(longWave.temperature(L), 9);
    expect(toCelsius(surfaceTemperature(celsius(62.4), base))).toBeCloseTo(68.06, 2);
  });
});

describe('bad readings', () => {
  const model = measurementModel(base);

  it('a text, nothing, a list', () => {
    refused(
      () => model.surfaceTemperature('62.4' as never),
      'wrong-type',
      'apparent',
      'a temperature in kelvin',
      '"62.4"',
    );
    refused(() => model.surfaceTemperature(undefined as never), 'wrong-type', 'apparent');
    refused(() => model.surfaceTemperature([300] as never), 'wrong-type', 'apparent');
    refused(() => model.apparentTemperature('62.4' as never), 'wrong-type', 'surface');
  });

  it('not a finite number', () => {
    refused(() => model.surfaceTemperature(K(Number.NaN)), 'not-finite', 'apparent', 'NaN');
    refused(() => model.surfaceTemperature(K(Number.POSITIVE_INFINITY)), 'not-finite', 'apparent');
    refused(() => model.apparentTemperature(K(Number.NaN)), 'not-finite', 'surface');
  });

  it('Celsius passed as kelvin: says celsius(62.4)', () => {
    refused(
      () => model.surfaceTemperature(K(62.4)),
      'out-of-range',
      'apparent',
      '150…3500 K',
      'Did you mean celsius(62.4)?',
    );
    refused(() => model.apparentTemperature(K(70)), 'out-of-range', 'surface', 'celsius(70)');
    refused(() => surfaceTemperature(K(-20), base), 'out-of-range', 'apparent', 'celsius(-20)');
    refused(() => surfaceTemperature(K(4000), base), 'out-of-range', 'apparent', '4000');
  });

  it('less than surroundings and path send by themselves: says what they would show', () => {
    const shiny = { ...base, emissivity: 0.2, reflectedApparentTemperature: celsius(60) };
    // 0.8·L(60 °C) alone, computed with the band, shows:
    const alone = longWave.temperature(0.8 * longWave.radiance(celsius(60)));
    refused(
      () => surfaceTemperature(celsius(30), shiny),
      'no-solution',
      'apparent',
      `already show ${alone.toFixed(2)} K`,
      'Check emissivity',
    );
  });

  it('a surface beyond −60…3000 °C: says on which side', () => {
    const shiny = { ...base, emissivity: 0.5, reflectedApparentTemperature: celsius(20) };
    const cold = longWave.temperature(0.5 * (longWave.radiance(celsius(20)) + longWave.radiance(K(200))));
    refused(
      () => surfaceTemperature(cold, shiny),
      'out-of-range',
      'surface temperature',
      '213.15…3273.15 K',
      'below',
    );
    refused(
      () => surfaceTemperature(K(3000), shiny),
      'out-of-range',
      'surface temperature',
      'above',
      'transmittance',
    );
  });

  it('a radiance beyond what the band can show forward', () => {
    const lit = { band: longWave, emissivity: 0.9, reflectedRadiance: 1e9 };
    refused(
      () => apparentTemperature(celsius(20), lit),
      'no-solution',
      'radiance',
      'a radiance of',
      '150…3500 K',
    );
  });
});

describe('correcting twice', () => {
  const model = measurementModel(base);

  it('a result handed back is refused', () => {
    const result = measurementResult(celsius(62.4), base);
    refused(
      () => model.surfaceTemperature(result as never),
      'already-corrected',
      'apparent',
      'Use it as it is',
    );
    refused(() => model.sensitivities(result as never), 'already-corrected', 'apparent');
    refused(() => model.radianceTerms(result as never), 'already-corrected', 'apparent');
    refused(() => surfaceTemperature(result as never, base), 'already-corrected', 'apparent');
    refused(() => measurementResult(result as never, base), 'already-corrected', 'apparent');
  });

  it('a frame handed back is refused', () => {
    const frame = model.surfaceFrame({ data: [310, 320], shape: [1, 2], stride: [2, 1], offset: 0 });
    refused(
      () => model.surfaceFrame(frame),
      'already-corrected',
      'frame',
      'apparent temperature',
      'surface temperature already',
    );
    refused(() => model.surfaceTemperature(frame as never), 'already-corrected', 'apparent');
  });

  it('another quantity is refused with the way out', () => {
    const value = (quantity: string) => ({ quantity, temperature: 300 }) as never;
    refused(
      () => model.surfaceTemperature(value('recorded temperature')),
      'wrong-quantity',
      'apparent',
      'recorrection(recorded, actual)',
    );
    refused(
      () => model.surfaceTemperature(value('counts')),
      'wrong-quantity',
      'apparent',
      'calibration of the instrument',
    );
    refused(
      () => model.surfaceTemperature(value('band radiance')),
      'wrong-quantity',
      'apparent',
      'apparentFrame(frame, band)',
    );
    refused(
      () => model.surfaceTemperature(value('brightness')),
      'wrong-quantity',
      'apparent',
      '"brightness"',
    );
    expect(model.surfaceTemperature(value('apparent temperature'))).toBe(model.surfaceTemperature(K(300)));
  });
});
