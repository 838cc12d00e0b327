import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  celsius,
  conditionsDocument,
  infraredWindow,
  layer,
  measurementModel,
  topHatBand,
  view,
} from '../src/index.js';
import { readConditionsDocument } from '../src/record.js';
import { anyConditions, K, kelvinBetween, ratio, refused } from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.9, reflectedApparentTemperature: celsius(20) };
const roundTrip = (conditions: Conditions): Conditions =>
  readConditionsDocument(JSON.parse(JSON.stringify(conditionsDocument(conditions)))).conditions;

describe('conditionsDocument', () => {
  it('writes down everything that was said, temperatures with their unit, and nothing else', () => {
    const document = conditionsDocument({
      ...base,
      path: [
        air({ transmittance: 0.97, temperature: K(291.15) }),
        infraredWindow({
          transmittance: 0.7,
          reflectance: { low: 0.1, high: 0.2 },
          temperature: K(300),
          mirroredTemperature: K(295),
        }),
        layer({ transmittance: 0.9, pathRadiance: 1.2 }),
      ],
      surface: { transmittance: 0.05, backgroundApparentTemperature: K(310) },
      viewAngle: 30,
      reflectedMeasuredAt: 'target',
      instrument: {
        measuringRange: { from: K(253), to: K(393) },
        netd: { value: 0.05, sceneTemperature: K(303) },
        accuracy: { kelvin: 2 },
        ifov: 1.4,
      },
      origins: { emissivity: 'tape' },
    });
    expect(document).toEqual({
      format: 'graybody-conditions',
      version: 1,
      band: { kind: 'top-hat', from: 8, to: 14 },
      emissivity: 0.9,
      reflectedApparentTemperature: { kelvin: celsius(20) },
      path: [
        { kind: 'air', transmittance: 0.97, temperature: { kelvin: 291.15 } },
        {
          kind: 'window',
          transmittance: 0.7,
          reflectance: { low: expect.closeTo(0.1, 15), high: expect.closeTo(0.2, 15) },
          temperature: { kelvin: 300 },
          mirroredTemperature: { kelvin: 295 },
        },
        { kind: 'layer', transmittance: 0.9, pathRadiance: 1.2 },
      ],
      surface: { transmittance: 0.05, backgroundApparentTemperature: { kelvin: 310 } },
      viewAngle: 30,
      reflectedMeasuredAt: 'target',
      instrument: {
        measuringRange: { from: { kelvin: 253 }, to: { kelvin: 393 } },
        netd: { value: 0.05, sceneTemperature: { kelvin: 303 } },
        accuracy: { kelvin: 2 },
        ifov: 1.4,
      },
      origins: { emissivity: 'tape' },
    });
    expect(conditionsDocument({ band, emissivity: 1, reflectedRadiance: 40 })).toEqual({
      format: 'graybody-conditions',
      version: 1,
      band: { kind: 'top-hat', from: 8, to: 14 },
      emissivity: 1,
      reflectedRadiance: 40,
    });
  });

  it('read back describes the same model, for any conditions', () => {
    fc.assert(
      fc.property(anyConditions, kelvinBetween(250, 1500), (conditions, surface) => {
        const [own, again] = [measurementModel(conditions), measurementModel(roundTrip(conditions))];
        expect(again.inputs).toEqual(own.inputs);
        expect(again.apparentTemperature(surface)).toBe(own.apparentTemperature(surface));
      }),
    );
  });

  it('an interval read back is the same interval, ends at 0 and 1 as well', () => {
    const end = fc.oneof(ratio(0, 1), fc.constantFrom(0, 1, 0.1, 0.3, 0.7, 0.9));
    fc.assert(
      fc.property(end, end, (a, b) => {
        const [low, high] = a < b ? [a, b] : [b, a];
        fc.pre(high > 1e-9); // a transmittance that is not 0, also in its middle
        const path = [air({ transmittance: { low, high }, temperature: K(290) })];
        const again = roundTrip({ ...base, path }).path![0]!;
        expect(again.transmittanceBehind([])).toBeCloseTo(path[0]!.transmittanceBehind([]) as number, 14);
        expect(again.halfWidths.transmittance).toBeCloseTo(path[0]!.halfWidths.transmittance!, 14);
      }),
      { numRuns: 500 },
    );
  });

  it('a map is written as its value at the pixel', () => {
    const map = (here: number) => view([0, here], [1, 2]);
    const conditions: Conditions = {
      band,
      emissivity: map(0.9),
      reflectedApparentTemperature: map(293),
      surface: { transmittance: map(0.05), backgroundApparentTemperature: map(310) },
      path: [
        infraredWindow({
          transmittance: map(0.7),
          reflectance: map(0.2),
          temperature: map(300),
          mirroredTemperature: map(295),
        }),
        layer({ transmittance: map(0.9), pathRadiance: map(1.2) }),
      ],
    };
    expect(conditionsDocument(conditions, { row: 0, column: 1 })).toMatchObject({
      emissivity: 0.9,
      reflectedApparentTemperature: { kelvin: 293 },
      surface: { transmittance: 0.05, backgroundApparentTemperature: { kelvin: 310 } },
      path: [
        {
          transmittance: 0.7,
          reflectance: 0.2,
          temperature: { kelvin: 300 },
          mirroredTemperature: { kelvin: 295 },
        },
        { transmittance: 0.9, pathRadiance: 1.2 },
      ],
    });
    refused(() => conditionsDocument(conditions), 'needs-pixel', 'emissivity', 'a pixel { row, column }');
    refused(() => conditionsDocument(conditions, { row: 1, column: 0 }), 'out-of-range', 'emissivity');
    const radiance = { band, emissivity: 1, reflectedRadiance: map(4) };
    expect(conditionsDocument(radiance, { row: 0, column: 1 }).reflectedRadiance).toBe(4);
  });

  it('conditions at fault are refused before they are written down', () => {
    refused(() => conditionsDocument(null as never), 'wrong-type', '', 'an object with band');
    refused(
      () => conditionsDocument({ ...base, emissivity: 90 }),
      'out-of-range',
      'emissivity',
      'Write 0.9 for 90 %.',
    );
    refused(() => conditionsDocument({ ...base, band: undefined } as never), 'missing-input', 'band');
  });

  it('a curve given in typed arrays is written as lists', () => {
    const emissivity = { wavelength: Float64Array.of(7, 15), value: Float64Array.of(0.5, 0.9) } as never;
    expect(JSON.parse(JSON.stringify(conditionsDocument({ ...base, emissivity })))).toMatchObject({
      emissivity: { wavelength: [7, 15], value: [0.5, 0.9] },
    });
    const own = { wavelength: [7, 15], value: [0.5, 0.9] };
    const model = measurementModel({ ...base, emissivity: own });
    const before = model.sensitivities(K(330)).emissivity;
    own.value[0] = 0.1;
    expect(model.sensitivities(K(330)).emissivity).toBe(before);
    expect(conditionsDocument(model.conditions).emissivity).toEqual({
      wavelength: [7, 15],
      value: [0.5, 0.9],
    });
  });
});
