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
  surfaceFrameByArea,
  topHatBand,
  type Uncertainties,
  view,
} from '../src/index.js';
import { describedModels, readConditionsDocument, recompute } from '../src/record.js';
import { anyConditions, fixture, K, kelvinBetween, refused } from './support/measurement.js';

const base: Conditions = {
  band: topHatBand(8, 14),
  emissivity: 0.86,
  reflectedApparentTemperature: celsius(21),
};
const minimal = {
  format: 'graybody-conditions',
  version: 1,
  band: { kind: 'top-hat', from: 8, to: 14 },
  emissivity: 0.86,
  reflectedApparentTemperature: { celsius: 21 },
};
const read = (changes: object) => readConditionsDocument({ ...minimal, ...changes });
const json = <T>(value: T): T => JSON.parse(JSON.stringify(value)) as T;

describe('a conditions document', () => {
  it('describes the same as conditions made by hand', () => {
    const { conditions, areas, recorded, uncertainties } = readConditionsDocument(minimal);
    const own = measurementModel(conditions).surfaceTemperature(celsius(62.4));
    expect(own).toBe(measurementModel(base).surfaceTemperature(celsius(62.4)));
    expect([areas, recorded, uncertainties]).toEqual([[], undefined, undefined]);
  });

  it('takes temperatures in three units', () => {
    const kelvin = (temperature: object): unknown =>
      read({ reflectedApparentTemperature: temperature }).conditions.reflectedApparentTemperature;
    expect(kelvin({ celsius: 21 })).toBe(294.15);
    expect(kelvin({ kelvin: 294.15 })).toBe(294.15);
    expect(kelvin({ fahrenheit: 69.8 })).toBeCloseTo(294.15, 10);
  });

  it('takes layers of every kind', () => {
    const { conditions } = read({
      path: [
        { kind: 'air', transmittance: 0.97, temperature: { celsius: 18 } },
        {
          kind: 'window',
          transmittance: 0.7,
          reflectance: { low: 0.1, high: 0.2 },
          temperature: { celsius: 25 },
          mirroredTemperature: { celsius: 22 },
        },
        { kind: 'layer', transmittance: 0.9, pathRadiance: 1.2 },
        {
          kind: 'layer',
          transmittance: { wavelength: [7, 15], value: [0.8, 0.9] },
          temperature: { celsius: 20 },
        },
      ].slice(0, 3),
    });
    expect(conditions.path!.map(({ kind }) => kind)).toEqual(['air', 'window', 'layer']);
    expect(conditions.path![1]!.halfWidths.reflectance).toBeCloseTo(0.05, 12);
    const curve = {
      kind: 'air',
      transmittance: { wavelength: [7, 15], value: [0.8, 0.9] },
      temperature: { celsius: 20 },
    };
    expect(measurementModel(read({ path: [curve] }).conditions).targetBand).not.toBe(base.band);
  });

  it('areas: what they say overrides, what they do not say holds from the document', () => {
    const region = { kind: 'rectangle', row: 0, column: 0, height: 1, width: 1 };
    const { areas } = read({
      path: [{ kind: 'air', transmittance: 0.9, temperature: { celsius: 20 } }],
      uncertainties: {
        apparent: 0.5,
        emissivity: 0.02,
        reflectedApparentTemperature: 2,
        path: [{ transmittance: 0.01 }],
      },
      areas: [
        { name: 'metal', region, conditions: { emissivity: 0.3 } },
        {
          name: 'lit',
          region,
          conditions: { reflectedRadiance: 40 },
          uncertainties: { reflectedRadiance: 1 },
        },
        {
          name: 'bare',
          region,
          conditions: {
            path: [],
            surface: { transmittance: 0.1, backgroundApparentTemperature: { celsius: 30 } },
          },
        },
      ],
    });
    const [metal, lit, bare] = areas;
    expect(areas.map(({ name }) => name)).toEqual(['metal', 'lit', 'bare']);
    expect(metal!.conditions).toMatchObject({ emissivity: 0.3, reflectedApparentTemperature: 294.15 });
    expect(metal!.conditions.path).toHaveLength(1);
    expect(metal!.uncertainties).toEqual({
      apparent: 0.5,
      emissivity: 0.02,
      reflectedApparentTemperature: 2,
      path: [{ transmittance: 0.01 }],
    });
    expect(lit!.conditions.reflectedApparentTemperature).toBeUndefined();
    expect(lit!.conditions.reflectedRadiance).toBe(40);
    expect(lit!.uncertainties).toEqual({
      apparent: 0.5,
      emissivity: 0.02,
      path: [{ transmittance: 0.01 }],
      reflectedRadiance: 1,
    });
    expect(bare!.conditions.path).toEqual([]);
    expect(bare!.uncertainties).toEqual({ apparent: 0.5, emissivity: 0.02, reflectedApparentTemperature: 2 });
    // Each of them is a measurement with its budget.
    for (const { conditions, uncertainties } of areas) {
      expect(measurementResult(celsius(80), conditions, uncertainties).standardUncertainty).toBeGreaterThan(
        0,
      );
    }
  });

  it('areas the other way round: a temperature in place of the document’s radiance', () => {
    const region = { kind: 'ellipse', centre: { row: 1, column: 1 }, semiAxes: { row: 1, column: 1 } };
    const { reflectedApparentTemperature: _gone, ...rest } = minimal;
    const { areas } = readConditionsDocument({
      ...rest,
      reflectedRadiance: 40,
      uncertainties: { reflectedRadiance: 1, surface: { transmittance: 0.01 } },
      areas: [
        {
          name: 'a',
          region,
          conditions: {
            reflectedApparentTemperature: { celsius: 30 },
            surface: { transmittance: 0.1, backgroundApparentTemperature: { celsius: 30 } },
          },
        },
        { name: 'b', region, conditions: {}, uncertainties: { emissivity: 0.1 } },
      ],
    });
    expect(areas[0]!.conditions).toMatchObject({ reflectedApparentTemperature: 303.15 });
    expect(areas[0]!.uncertainties).toEqual({});
    expect(areas[1]!.uncertainties).toEqual({
      reflectedRadiance: 1,
      surface: { transmittance: 0.01 },
      emissivity: 0.1,
    });
    expect(
      readConditionsDocument({
        ...minimal,
        areas: [{ name: 'c', region, conditions: {}, uncertainties: { emissivity: 0.1 } }],
      }).areas[0]!.uncertainties,
    ).toEqual({ emissivity: 0.1 });
  });

  it('models of a document: apparent temperature, or recorded where there are recorded settings', () => {
    for (const scene of ['compressor', 'switch-cabinet', 'oven-front']) {
      const plain = describedModels(readConditionsDocument(fixture(`ice-works/${scene}/conditions.json`)));
      const again = describedModels(readConditionsDocument(fixture(`ice-works/${scene}/recorded.json`)));
      expect(plain.model.reads).toBe('apparent temperature');
      expect(again.model.reads).toBe('recorded temperature');
      expect(plain.areas.length).toBeGreaterThan(4);
      expect(again.areas.map(({ name }) => name)).toEqual(plain.areas.map(({ name }) => name));
      for (const { model } of again.areas) expect(model.reads).toBe('recorded temperature');
      const frame = view(new Float32Array(120 * 160).fill(420), [120, 160]);
      const result = surfaceFrameByArea(frame, plain.model, plain.areas);
      expect(result.counts.ok + result.counts.saturated).toBeGreaterThan(0);
    }
  });
});

describe('a document at fault: the path, what was expected, what to write', () => {
  it('another format, a newer version', () => {
    refused(
      () => read({ version: 2 }),
      'wrong-version',
      'version',
      'graybody-conditions of version 1',
      'got 2',
      'update @graybody/core',
    );
    refused(() => read({ version: 0 }), 'out-of-range', 'version', 'version 1');
    refused(() => read({ version: undefined }), 'missing-input', 'version');
    refused(() => read({ format: 'graybody-result' }), 'out-of-range', 'format', "'graybody-conditions'");
    refused(() => readConditionsDocument(null), 'wrong-type', '', 'an object');
    refused(() => readConditionsDocument('{}'), 'wrong-type', '', 'an object');
    refused(() => readConditionsDocument([]), 'wrong-type', '', 'an object');
    refused(() => readConditionsDocument(undefined), 'missing-input', '', 'an object');
  });

  it('unknown keys, the nearest known one named, at any depth', () => {
    refused(() => read({ emisivity: 0.9 }), 'unknown-key', 'emisivity', "Did you mean 'emissivity'?");
    refused(
      () => read({ band: { ...minimal.band, detecter: 'photon' } }),
      'unknown-key',
      'band.detecter',
      "'detector'",
    );
    refused(
      () => read({ path: [{ kind: 'air', transmitance: 0.9, temperature: { celsius: 20 } }] }),
      'unknown-key',
      'path[0].transmitance',
      "'transmittance'",
    );
    refused(
      () => read({ reflectedApparentTemperature: { celcius: 21 } }),
      'unknown-key',
      'reflectedApparentTemperature.celcius',
      "'celsius'",
    );
    const region = { kind: 'rectangle', row: 0, colum: 0, height: 1, width: 1 };
    refused(
      () => read({ areas: [{ name: 'a', region, conditions: {} }] }),
      'unknown-key',
      'areas[0].region.colum',
      "'column'",
    );
    refused(
      () => read({ uncertainties: { emissivity: { halfwidth: 0.1 } } }),
      'unknown-key',
      'uncertainties.emissivity.halfwidth',
      "'halfWidth'",
    );
    refused(
      () => read({ instrument: { accuracy: { kelvins: 1 } } }),
      'unknown-key',
      'instrument.accuracy.kelvins',
      "'kelvin'",
    );
  });

  it('percents, bare numbers for temperatures, texts for numbers', () => {
    refused(() => read({ emissivity: 86 }), 'out-of-range', 'emissivity', 'Write 0.86 for 86 %.');
    refused(() => read({ emissivity: 0 }), 'out-of-range', 'emissivity', '0 < emissivity ≤ 1');
    refused(() => read({ emissivity: '0.86' }), 'wrong-type', 'emissivity', 'a ratio of 0…1');
    refused(
      () => read({ path: [{ kind: 'air', transmittance: 97, temperature: { celsius: 18 } }] }),
      'out-of-range',
      'path[0].transmittance',
      'Write 0.97 for 97 %.',
    );
    refused(
      () => read({ reflectedApparentTemperature: 21 }),
      'wrong-type',
      'reflectedApparentTemperature',
      '{ "celsius": 21 }',
    );
    refused(
      () => read({ reflectedApparentTemperature: '21 °C' }),
      'wrong-type',
      'reflectedApparentTemperature',
      'with its unit',
    );
    refused(
      () => read({ reflectedApparentTemperature: { celsius: '21' } }),
      'wrong-type',
      'reflectedApparentTemperature.celsius',
    );
    refused(
      () => read({ reflectedApparentTemperature: { kelvin: 21 } }),
      'out-of-range',
      'reflectedApparentTemperature',
      'celsius(21)',
    );
    refused(
      () => read({ path: [{ kind: 'air', transmittance: 0.9, temperature: 18 }] }),
      'wrong-type',
      'path[0].temperature',
      'with its unit',
    );
  });

  it('what is missing, what contradicts', () => {
    refused(() => read({ emissivity: undefined }), 'missing-input', 'emissivity');
    refused(() => read({ band: undefined }), 'missing-input', 'band', '"top-hat"');
    refused(
      () => read({ reflectedApparentTemperature: undefined }),
      'missing-input',
      'reflectedApparentTemperature',
      'exactly one of',
    );
    refused(
      () => read({ reflectedRadiance: 40 }),
      'conflicting-inputs',
      'reflectedApparentTemperature',
      'exactly one of',
    );
    refused(
      () => read({ path: [{ kind: 'air', transmittance: 0.9 }] }),
      'missing-input',
      'path[0].temperature',
      'the layer emits',
    );
    const window = {
      kind: 'window',
      transmittance: 0.8,
      reflectance: 0.3,
      temperature: { celsius: 20 },
      mirroredTemperature: { celsius: 20 },
    };
    refused(
      () => read({ path: [window] }),
      'out-of-range',
      'path[0].reflectance',
      'transmittance + reflectance ≤ 1',
    );
    refused(
      () => read({ surface: { transmittance: 0.5, backgroundApparentTemperature: { celsius: 20 } } }),
      'out-of-range',
      'surface.transmittance',
      'emissivity + transmittance ≤ 1',
    );
    refused(
      () => read({ path: [{ kind: 'glass', transmittance: 0.9 }] }),
      'out-of-range',
      'path[0]',
      "'window'",
      'The kind given is "glass".',
    );
    refused(() => read({ path: {} }), 'wrong-type', 'path', 'from target to instrument');
    refused(
      () => read({ band: { kind: 'top-hat', from: 14, to: 8 } }),
      'out-of-range',
      'band.to',
      'above from = 14 µm',
    );
    refused(() => read({ band: { kind: 'top-hat', from: '8', to: 14 } }), 'wrong-type', 'band.from');
    refused(() => read({ band: 'LW' }), 'wrong-type', 'band', 'a band such as');
    refused(() => read({ band: { kind: 'calibrated', form: 'k1k3' } }), 'out-of-range', 'band');
    refused(() => read({ areas: {} }), 'wrong-type', 'areas', 'expected a list, got');
    refused(
      () => read({ instrument: { lens: 25 } }),
      'wrong-type',
      'instrument.lens',
      'expected a text, got 25',
    );
    refused(
      () => read({ instrument: { accuracy: { percent: 2, percentOf: 'kelvins' } } }),
      'out-of-range',
      'instrument.accuracy.percentOf',
      "one of 'celsius', 'kelvin', 'range', got \"kelvins\"",
    );
    refused(
      () => read({ emissivity: { wavelength: [8, 14] } }),
      'missing-input',
      'emissivity.value',
      'a list of numbers',
    );
  });

  it('in an area and in recorded settings', () => {
    const region = { kind: 'rectangle', row: 0, column: 0, height: 1, width: 1 };
    const area = (changes: object) => () =>
      read({ areas: [{ name: 'a', region, conditions: {}, ...changes }] });
    refused(area({ region: { ...region, height: 0 } }), 'out-of-range', 'areas[0].region.height', '> 0');
    refused(
      area({ region: { kind: 'polygon', points: [] } }),
      'out-of-range',
      'areas[0].region.points',
      'three or more points',
    );
    refused(
      area({ region: { kind: 'circle' } }),
      'out-of-range',
      'areas[0].region',
      'rectangle, ellipse or polygon',
    );
    refused(
      area({ conditions: { emissivity: 30 } }),
      'out-of-range',
      'areas[0].conditions.emissivity',
      'Write 0.3 for 30 %.',
    );
    refused(
      area({ conditions: { path: [{ kind: 'air', transmittance: 0.5 }] } }),
      'missing-input',
      'areas[0].conditions.path[0].temperature',
    );
    refused(area({ conditions: { band: minimal.band } }), 'unknown-key', 'areas[0].conditions.band');
    refused(area({ name: 5 }), 'wrong-type', 'areas[0].name');
    const recorded = { emissivity: 0.95, reflectedApparentTemperature: { celsius: 20 } };
    refused(
      () => read({ recorded: { ...recorded, emissivity: 95 } }),
      'out-of-range',
      'recorded.emissivity',
      'Write 0.95',
    );
    refused(
      () => read({ recorded: { ...recorded, path: [{ kind: 'air', transmittance: 0.9 }] } }),
      'missing-input',
      'recorded.path[0].temperature',
    );
    refused(
      () => read({ recorded: { emissivity: 0.95 } }),
      'missing-input',
      'recorded.reflectedApparentTemperature',
    );
    refused(
      () => read({ recorded: { ...recorded, resolution: -1 } }),
      'out-of-range',
      'recorded.resolution',
      'a step > 0',
    );
  });
});

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
