import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  celsius,
  infraredWindow,
  measurementModel,
  measurementResult,
  type RecordedConditions,
  recorrectionResult,
  type Uncertainties,
  view,
} from '../src/index.js';
import { recompute } from '../src/record.js';
import {
  anyConditions,
  paintedConditions as base,
  K,
  kelvinBetween,
  paintedDocument as minimal,
  refused,
} from './support/measurement.js';

const json = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T;

describe('recompute', () => {
  const uncertaintiesOf = (conditions: Conditions): Uncertainties => ({
    apparent: { expanded: 1, coverageFactor: 2 },
    emissivity: { halfWidth: 0.01, distribution: 'triangular' },
    ...(conditions.path?.length ? { path: [{ transmittance: 0.01 }] } : {}),
  });

  it('a record that went through JSON gives the same number within 1e-9 K, with its budget, for any conditions', () => {
    fc.assert(
      fc.property(anyConditions, kelvinBetween(250, 1500), (conditions, surface) => {
        const apparent = measurementModel(conditions).apparentTemperature(surface);
        const own = measurementResult(apparent, conditions, uncertaintiesOf(conditions));
        const again = recompute(json(own.record));
        expect(Math.abs(again.temperature - own.temperature)).toBeLessThan(1e-9);
        expect(Math.abs(again.standardUncertainty! / own.standardUncertainty! - 1)).toBeLessThan(1e-9);
        expect(again.budget.map(({ name }) => name).sort()).toEqual(
          own.budget.map(({ name }) => name).sort(),
        );
        expect(json(again.record.conditions)).toEqual(json(own.record.conditions));
      }),
    );
  });

  it('of a recorded temperature, with rounding, an interval and a range', () => {
    const recorded: RecordedConditions = {
      emissivity: 0.95,
      reflectedApparentTemperature: celsius(20),
      path: [air({ transmittance: { low: 0.95, high: 1 }, temperature: celsius(20) })],
      instrument: { measuringRange: { from: celsius(-20), to: celsius(120) } },
      resolution: 0.1,
    };
    const own = recorrectionResult(celsius(62.4), recorded, base, { recorded: 0.5, emissivity: 0.02 });
    const again = recompute(json(own.record));
    expect(Math.abs(again.temperature - own.temperature)).toBeLessThan(1e-9);
    expect(again.standardUncertainty).toBeCloseTo(own.standardUncertainty!, 12);
    expect(json(again.record)).toEqual(json(own.record));
  });

  it('with maps, at the pixel it was made at', () => {
    const conditions: Conditions = {
      ...base,
      emissivity: view([0.86, 0.5], [1, 2]),
      path: [
        infraredWindow({
          transmittance: view([0.7, 0.6], [1, 2]),
          temperature: view([300, 310], [1, 2]),
        }),
      ],
    };
    const pixel = { row: 0, column: 1 };
    const own = measurementResult(celsius(62.4), conditions, { emissivity: 0.02 }, pixel);
    const again = recompute(json(own.record));
    expect(Math.abs(again.temperature - own.temperature)).toBeLessThan(1e-9);
    expect(again.record.conditions.emissivity).toBe(0.5);
    const recorded = { emissivity: view([0.95, 0.9], [1, 2]), reflectedApparentTemperature: celsius(20) };
    const stored = recorrectionResult(celsius(62.4), recorded, conditions, { recorded: 0.5 }, pixel);
    expect(Math.abs(recompute(json(stored.record)).temperature - stored.temperature)).toBeLessThan(1e-9);
  });

  it('a record at fault is refused', () => {
    const record = json(measurementResult(celsius(62.4), base).record) as unknown as Record<string, unknown>;
    const give = (changes: object) => () => recompute({ ...record, ...changes });
    refused(give({ version: 2 }), 'wrong-version', 'version', 'graybody-result of version 1');
    refused(give({ note: 'x' }), 'unknown-key', 'note');
    refused(
      give({ reading: { quantity: 'surface temperature', kelvin: 300 } }),
      'out-of-range',
      'reading.quantity',
    );
    refused(
      give({ reading: { quantity: 'apparent temperature', kelvin: 62.4 } }),
      'out-of-range',
      'apparent',
      'celsius(62.4)',
    );
    refused(
      give({ reading: { quantity: 'recorded temperature', kelvin: 335 } }),
      'missing-input',
      'recorded',
      'the reading is a recorded temperature',
    );
    refused(
      give({ conditions: { ...minimal, emissivity: 86 } }),
      'out-of-range',
      'conditions.emissivity',
      'Write 0.86',
    );
    refused(
      give({ conditions: { ...minimal, version: 2 } }),
      'out-of-range',
      'conditions.version',
      'version 1',
    );
    refused(give({ uncertainties: { apparent: -1 } }), 'out-of-range', 'uncertainties.apparent', '≥ 0');
    refused(give({ result: undefined }), 'missing-input', 'result');
    refused(() => recompute(minimal), 'out-of-range', 'format');
    refused(() => recompute(undefined), 'missing-input', '', 'an object');
    refused(() => recompute(measurementResult(K(335), base)), 'unknown-key', 'quantity'); // its record is meant
  });
});
