import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  calibratedBand,
  celsius,
  infraredWindow,
  measurementModel,
  type RecordedConditions,
  recorrection,
  recorrectionResult,
  toCelsius,
  topHatBand,
  view,
} from '../src/index.js';
import { readConditionsDocument } from '../src/record.js';
import {
  anyConditions,
  fixture,
  grayConditions,
  K,
  kelvinBetween,
  ratio,
  refused,
  storedOrSkipped,
} from './support/measurement.js';

const band = topHatBand(8, 14);
const actual: Conditions = { band, emissivity: 0.6, reflectedApparentTemperature: celsius(30) };
const recorded: RecordedConditions = { emissivity: 0.95, reflectedApparentTemperature: celsius(20) };

interface Case {
  readonly name: string;
  readonly conditions: Readonly<Record<string, unknown>>;
  readonly recorded_temperature_K: number;
  readonly true_temperature_K: number;
  readonly apparent_temperature_K: number;
  readonly sensitivities: Readonly<Record<string, number>>;
}

// Computed wavelength by wavelength in 45-digit arithmetic by fixtures/generate/vectors.py; expected there: 1e-6 K.
describe('the six recorrections of fixtures/vectors/measurement.json', () => {
  const { recorrection_cases: cases } = fixture<{ recorrection_cases: Case[] }>('vectors/measurement.json');
  const described = ({ conditions }: Case) =>
    readConditionsDocument({ format: 'graybody-conditions', version: 1, ...conditions });

  it('are six', () => {
    expect(cases).toHaveLength(6);
  });

  it.each(cases)('$name: surface, recorded and apparent temperature within 1e-6 K', (given) => {
    const { conditions, recorded: settings } = described(given);
    const again = recorrection(settings!, conditions);
    const surface = K(given.true_temperature_K);
    const stored = K(given.recorded_temperature_K);
    expect(Math.abs(again.surfaceTemperature(stored) - surface)).toBeLessThan(1e-6);
    expect(Math.abs(again.recordedTemperature(surface) - stored)).toBeLessThan(1e-6);
    const shown = measurementModel(conditions).apparentTemperature(surface);
    expect(Math.abs(shown - given.apparent_temperature_K)).toBeLessThan(1e-6);
  });

  it.each(cases)('$name: every sensitivity within 1e-8 of its size', (given) => {
    const { conditions, recorded: settings } = described(given);
    const own = recorrection(settings!, conditions).sensitivities(K(given.recorded_temperature_K));
    for (const [key, expected] of Object.entries(given.sensitivities)) {
      expect(Math.abs(own[key]! - expected), key).toBeLessThan(1e-8 * Math.abs(expected));
    }
  });
});

describe('properties', () => {
  const settings = fc.record({
    emissivity: ratio(0.3, 1),
    reflectedApparentTemperature: kelvinBetween(250, 330),
    path: fc.array(
      fc
        .record({ transmittance: ratio(0.6, 1), temperature: kelvinBetween(250, 330) })
        .map((input) => air(input)),
      { maxLength: 2 },
    ),
  });

  it('recorded = actual gives the input back', () => {
    fc.assert(
      fc.property(grayConditions, kelvinBetween(215, 3270), (conditions, stored) => {
        fc.pre(conditions.surface === undefined);
        const { emissivity, reflectedApparentTemperature, path } = conditions;
        const same = {
          emissivity,
          reflectedApparentTemperature: reflectedApparentTemperature!,
          path: path ?? [],
        };
        expect(Math.abs(recorrection(same, conditions).surfaceTemperature(stored) - stored)).toBeLessThan(
          1e-8,
        );
      }),
    );
  });

  it('surfaceTemperature after recordedTemperature is the identity', () => {
    fc.assert(
      fc.property(anyConditions, settings, kelvinBetween(360, 2500), (conditions, told, surface) => {
        const again = recorrection(told, conditions);
        const stored = storedOrSkipped(again, surface);
        fc.pre(stored > 160);
        const magnified = Math.max(1, again.sensitivities(stored).recorded!);
        expect(Math.abs(again.surfaceTemperature(stored) - surface)).toBeLessThan(1e-8 * magnified);
      }),
      { numRuns: 300 },
    );
  });

  it('is the apparent temperature taken back with the recorded settings and corrected with the actual ones', () => {
    fc.assert(
      fc.property(anyConditions, settings, kelvinBetween(360, 2500), (conditions, told, surface) => {
        const apparent = measurementModel(conditions).apparentTemperature(surface);
        const again = storedOrSkipped(recorrection(told, conditions), surface);
        fc.pre(again > 250 && again < 3200); // a correction answers within −60…3000 °C
        const stored = measurementModel({ band: conditions.band, ...told }).surfaceTemperature(apparent);
        expect(Math.abs(again - stored)).toBeLessThan(1e-7);
      }),
    );
  });

  it('settings of emissivity 1 and no path: the recorded temperature is the apparent one', () => {
    const as = recorrection({ emissivity: 1, reflectedApparentTemperature: celsius(20) }, actual);
    const direct = measurementModel(actual);
    expect(as.surfaceTemperature(celsius(60))).toBeCloseTo(direct.surfaceTemperature(celsius(60)), 9);
  });
});

describe('what a recorrection says of itself', () => {
  const window = infraredWindow({
    transmittance: 0.7,
    reflectance: { low: 0.1, high: 0.2 },
    temperature: celsius(25),
    mirroredTemperature: celsius(22),
  });
  const again = recorrection(
    {
      ...recorded,
      path: [air({ transmittance: { low: 0.96, high: 1 }, temperature: celsius(20) })],
      resolution: 0.1,
    },
    { ...actual, path: [window] },
  );

  it('names its inputs, the recorded ones under recorded.', () => {
    expect(again.reads).toBe('recorded temperature');
    expect(again.inputs).toEqual([
      'recorded',
      'recorded.emissivity',
      'recorded.reflectedApparentTemperature',
      'recorded.path[0].transmittance',
      'recorded.path[0].temperature',
      'emissivity',
      'reflectedApparentTemperature',
      'path[0].transmittance',
      'path[0].reflectance',
      'path[0].temperature',
      'path[0].mirroredTemperature',
    ]);
    expect(again.recorded).toMatchObject({ emissivity: 0.95, resolution: 0.1 });
    expect(again.band).toBe(band);
    expect(Object.isFrozen(again) && Object.isFrozen(again.recorded)).toBe(true);
  });

  it('an interval of the recorded transmittance and the rounding enter the budget with their origin', () => {
    const { budget, cautions } = recorrectionResult(celsius(64), again.recorded, again.conditions);
    const rows = Object.fromEntries(budget.map((row) => [row.name, row]));
    expect(Object.keys(rows).sort()).toEqual([
      'path[0].reflectance',
      'recorded',
      'recorded.path[0].transmittance',
    ]);
    // Half of the step, and the half-width of the interval, as rectangular distributions: JCGM 100:2008, 4.3.7.
    expect(rows.recorded!.standardUncertainty).toBeCloseTo(0.05 / Math.sqrt(3), 12);
    expect(rows.recorded!.origin).toContain('rounded');
    expect(rows['recorded.path[0].transmittance']!.standardUncertainty).toBeCloseTo(0.02 / Math.sqrt(3), 12);
    expect(rows['recorded.path[0].transmittance']!.origin).toContain('interval');
    expect(cautions.map((caution) => caution.code)).toContain('recorded-rounded');
  });

  it('takes maps on either side, at a pixel', () => {
    const maps = recorrection(
      { ...recorded, emissivity: view([0.95, 0.9], [1, 2]) },
      { ...actual, emissivity: view([0.6, 0.5], [1, 2]) },
    );
    expect(maps.needsPixel).toBe(true);
    const numbers = recorrection({ ...recorded, emissivity: 0.9 }, { ...actual, emissivity: 0.5 });
    const pixel = { row: 0, column: 1 };
    expect(maps.surfaceTemperature(celsius(64), pixel)).toBe(numbers.surfaceTemperature(celsius(64)));
    expect(maps.at(pixel).recordedTemperature(celsius(90))).toBe(numbers.recordedTemperature(celsius(90)));
    expect(maps.at(pixel).needsPixel).toBe(false);
    expect(maps.sensitivities(celsius(64), pixel)).toEqual(numbers.sensitivities(celsius(64)));
    refused(() => maps.surfaceTemperature(celsius(64)), 'needs-pixel', 'emissivity');
    refused(
      () =>
        recorrection({ ...recorded, emissivity: view([0.9], [1, 1]) }, actual).surfaceTemperature(
          celsius(64),
        ),
      'needs-pixel',
      'emissivity',
    );
  });
});

describe('bad input', () => {
  it('another band is refused, the same band made anew is not', () => {
    refused(
      () => recorrection({ ...recorded, band: topHatBand(3, 5) }, actual),
      'wrong-band',
      'recorded.band',
      'the band of the actual conditions',
      'in the band it was made in',
    );
    refused(
      () => recorrection({ ...recorded, band: topHatBand(8, 14, { detector: 'photon' }) }, actual),
      'wrong-band',
      'recorded.band',
    );
    const same = recorrection({ ...recorded, band: topHatBand(8, 14) }, actual);
    expect(toCelsius(same.surfaceTemperature(celsius(64)))).toBeGreaterThan(64);
  });

  it('the same calibrated band is the same in whatever order its constants were written', () => {
    const one = calibratedBand({ form: 'k1k2', k1: 774.8853, k2: 1321.0789 });
    const other = calibratedBand({ k2: 1321.0789, k1: 774.8853, form: 'k1k2' });
    expect(recorrection({ ...recorded, band: other }, { ...actual, band: one }).reads).toBe(
      'recorded temperature',
    );
    const third = calibratedBand({ k2: 1321.0789, k1: 774.8854, form: 'k1k2' });
    refused(
      () => recorrection({ ...recorded, band: third }, { ...actual, band: one }),
      'wrong-band',
      'recorded.band',
    );
  });

  it('settings at fault are named under recorded.', () => {
    refused(() => recorrection(undefined as never, actual), 'wrong-type', 'recorded', 'an object with');
    refused(
      () => recorrection({ ...recorded, emissivity: 95 }, actual),
      'out-of-range',
      'recorded.emissivity',
      'Write 0.95 for 95 %.',
    );
    refused(
      () => recorrection({ emissivity: 0.9 } as never, actual),
      'missing-input',
      'recorded.reflectedApparentTemperature',
      'celsius(21)',
    );
    refused(
      () => recorrection({ ...recorded, emisivity: 0.9 } as never, actual),
      'unknown-key',
      'recorded.emisivity',
      "Did you mean 'emissivity'?",
    );
    refused(
      () => recorrection({ ...recorded, resolution: 0 }, actual),
      'out-of-range',
      'recorded.resolution',
      '> 0',
    );
    refused(
      () => recorrection({ ...recorded, resolution: '0.1' } as never, actual),
      'wrong-type',
      'recorded.resolution',
    );
    refused(
      () => recorrection({ ...recorded, reflectedApparentTemperature: K(20) }, actual),
      'out-of-range',
      'recorded.reflectedApparentTemperature',
      'celsius(20)',
    );
    refused(
      () => recorrection({ ...recorded, path: [{}] } as never, actual),
      'wrong-type',
      'recorded.path',
      'air({ … })',
    );
    refused(
      () => recorrection({ ...recorded, instrument: { ifov: -1 } }, actual),
      'out-of-range',
      'recorded.instrument.ifov',
    );
    refused(() => recorrection(recorded, undefined as never), 'wrong-type', '');
  });

  it('readings at fault are named recorded', () => {
    const again = recorrection(recorded, actual);
    refused(() => again.surfaceTemperature(K(64)), 'out-of-range', 'recorded', 'celsius(64)');
    refused(() => again.recordedTemperature(K(64)), 'out-of-range', 'surface', 'celsius(64)');
    refused(() => again.surfaceTemperature('64' as never), 'wrong-type', 'recorded');
    const apparent = { quantity: 'apparent temperature', temperature: 300 } as never;
    refused(
      () => again.surfaceTemperature(apparent),
      'wrong-quantity',
      'recorded',
      'measurementModel(conditions)',
    );
    const result = recorrectionResult(celsius(64), recorded, actual);
    refused(() => again.surfaceTemperature(result as never), 'already-corrected', 'recorded');
    refused(() => recorrectionResult(result as never, recorded, actual), 'already-corrected', 'recorded');
  });

  it('no solution, in both directions', () => {
    const shiny = { ...actual, emissivity: 0.2, reflectedApparentTemperature: celsius(80) };
    refused(
      () => recorrection(recorded, shiny).surfaceTemperature(celsius(10)),
      'no-solution',
      'recorded',
      'surroundings',
    );
    const told = { emissivity: 0.1, reflectedApparentTemperature: celsius(90) };
    refused(
      () => recorrection(told, { ...actual, emissivity: 0.95 }).recordedTemperature(celsius(10)),
      'no-solution',
      'recorded',
      'could have stored a temperature of 150…3500 K',
      'more radiance to surroundings and path than there is',
    );
    const faint = { emissivity: 0.01, reflectedApparentTemperature: celsius(20) };
    refused(
      () => recorrection(faint, { ...actual, emissivity: 0.95 }).recordedTemperature(celsius(900)),
      'no-solution',
      'recorded',
      'too little radiance to surroundings and path',
    );
  });
});
