import { readdirSync } from 'node:fs';
import { describe, expect, it } from 'vitest';
import { celsius, measurementResult, recorrectionResult, topHatBand } from '../src/index.js';
import { conditionsJsonSchema, conditionsSchema, resultJsonSchema, resultSchema } from '../src/record.js';
import { documentKeys } from '../src/schema.js';
import { violations } from './support/json-schema.js';
import { fixture, paintedDocument as minimal } from './support/measurement.js';

const scenes = readdirSync(new URL('../../../fixtures/ice-works/', import.meta.url), { withFileTypes: true })
  .filter((entry) => entry.isDirectory())
  .flatMap(({ name }) => [`ice-works/${name}/conditions.json`, `ice-works/${name}/recorded.json`]);
const broken: readonly (readonly [string, object])[] = [
  ['no format', { ...minimal, format: undefined }],
  ['another format', { ...minimal, format: 'graybody-result' }],
  ['a newer version', { ...minimal, version: 2 }],
  ['no band', { ...minimal, band: undefined }],
  ['a band of no kind', { ...minimal, band: { from: 8, to: 14 } }],
  ['an unknown key', { ...minimal, emisivity: 0.9 }],
  ['a percentage', { ...minimal, emissivity: 86 }],
  ['a text', { ...minimal, emissivity: '0.86' }],
  ['a bare number for a temperature', { ...minimal, reflectedApparentTemperature: 21 }],
  [
    'a temperature in two units',
    { ...minimal, reflectedApparentTemperature: { celsius: 21, kelvin: 294.15 } },
  ],
  ['an unknown layer', { ...minimal, path: [{ kind: 'glass', transmittance: 0.5 }] }],
  [
    'a polygon of two points',
    {
      ...minimal,
      areas: [
        {
          name: 'a',
          region: {
            kind: 'polygon',
            points: [
              { row: 0, column: 0 },
              { row: 1, column: 1 },
            ],
          },
          conditions: {},
        },
      ],
    },
  ],
  ['a negative uncertainty', { ...minimal, uncertainties: { emissivity: -0.1 } }],
  ['a view angle of 90°', { ...minimal, viewAngle: 90 }],
  [
    'a step of 0',
    { ...minimal, recorded: { emissivity: 1, reflectedApparentTemperature: { celsius: 20 }, resolution: 0 } },
  ],
];

describe('the schema of a conditions document', () => {
  it('there are six documents of the ice works', () => {
    expect(scenes).toHaveLength(6);
  });

  it.each(scenes)('accepts %s, by zod and by its JSON Schema', (name) => {
    const document = fixture<unknown>(name);
    expect(conditionsSchema.safeParse(document).success).toBe(true);
    expect(violations(document, conditionsJsonSchema())).toEqual([]);
  });

  it('accepts the least a document can hold', () => {
    expect(conditionsSchema.safeParse(minimal).success).toBe(true);
    expect(violations(minimal, conditionsJsonSchema())).toEqual([]);
  });

  it.each(broken)('refuses %s, by zod and by its JSON Schema', (_name, document) => {
    const plain = JSON.parse(JSON.stringify(document)) as unknown;
    expect(conditionsSchema.safeParse(plain).success).toBe(false);
    expect(violations(plain, conditionsJsonSchema())).not.toEqual([]);
  });

  it('takes every kind of band, three weightings deep at most', () => {
    const plain = { kind: 'monochromatic', wavelength: 10.6 };
    const curve = { wavelength: [8, 14], value: [0.5, 0.9] };
    const weighted = (band: object): object => ({ kind: 'weighted', band, curve });
    const accepts = (band: object): boolean => {
      const document = { ...minimal, band };
      const own = conditionsSchema.safeParse(document).success;
      expect(violations(document, conditionsJsonSchema()).length === 0).toBe(own);
      return own;
    };
    for (const band of [
      { kind: 'top-hat', from: 3, to: 5, detector: 'photon' },
      { kind: 'sampled', wavelength: [8, 14], responsivity: [1, 0.5] },
      { kind: 'sampled', wavenumber: [700, 1200], responsivity: [1, 0.5], detector: 'energy' },
      plain,
      { kind: 'calibrated', form: 'k1k2', k1: 774.9, k2: 1321.1, radianceUnit: 'W·m⁻²·sr⁻¹·µm⁻¹' },
      { kind: 'calibrated', form: 'sakuma-hattori', a: 10, b: 100, c: 1e5, range: { from: 250, to: 400 } },
      weighted(plain),
      weighted(weighted(weighted(plain))),
    ]) {
      expect(accepts(band), JSON.stringify(band)).toBe(true);
    }
    expect(accepts(weighted(weighted(weighted(weighted(plain)))))).toBe(false);
    expect(
      accepts({ kind: 'sampled', wavelength: [8, 14], wavenumber: [700, 1200], responsivity: [1, 1] }),
    ).toBe(false);
    expect(accepts({ kind: 'calibrated', form: 'k1k2', k1: 774.9 })).toBe(false);
  });
});

describe('as JSON Schema', () => {
  it.each([
    ['conditions', conditionsJsonSchema, ['format', 'version', 'band', 'emissivity']],
    [
      'result',
      resultJsonSchema,
      ['format', 'version', 'software', 'method', 'reading', 'conditions', 'result', 'budget', 'cautions'],
    ],
  ] as const)(
    '%s: JSON that says its draft, is closed, and requires what must be there',
    (_name, make, required) => {
      const schema = make();
      expect(JSON.parse(JSON.stringify(schema))).toEqual(schema);
      expect(schema).toMatchObject({
        $schema: 'https://json-schema.org/draft/2020-12/schema',
        type: 'object',
        additionalProperties: false,
      });
      expect(schema.required).toEqual(required);
    },
  );

  it('names every key of the document', () => {
    const { properties } = conditionsJsonSchema() as { properties: object };
    expect(Object.keys(properties).sort()).toEqual([
      'areas',
      'band',
      'emissivity',
      'format',
      'instrument',
      'origins',
      'path',
      'recorded',
      'reflectedApparentTemperature',
      'reflectedMeasuredAt',
      'reflectedRadiance',
      'surface',
      'uncertainties',
      'version',
      'viewAngle',
    ]);
    const keys = documentKeys();
    for (const key of [
      'celsius',
      'mirroredTemperature',
      'coverageFactor',
      'semiAxes',
      'percentOf',
      'remedy',
    ]) {
      expect(keys).toContain(key);
    }
    expect(new Set(keys).size).toBe(keys.length);
  });
});

describe('the schema of a result', () => {
  const conditions = { band: topHatBand(8, 14), emissivity: 0.4, reflectedApparentTemperature: celsius(21) };
  const recorded = { emissivity: 0.95, reflectedApparentTemperature: celsius(20), resolution: 0.1 };
  const records = [
    measurementResult(celsius(62.4), conditions),
    measurementResult(celsius(62.4), conditions, {
      apparent: { expanded: 1, coverageFactor: 2 },
      emissivity: 0.02,
    }),
    recorrectionResult(celsius(62.4), recorded, conditions, { recorded: { halfWidth: 0.1 } }),
  ].map((result) => JSON.parse(JSON.stringify(result)) as Record<string, unknown>);

  it('accepts what the library writes, by zod and by its JSON Schema', () => {
    for (const record of records) {
      expect(resultSchema.safeParse(record).success).toBe(true);
      expect(violations(record, resultJsonSchema())).toEqual([]);
    }
  });

  it('refuses it with a key more or a key less', () => {
    for (const key of Object.keys(records[0]!)) {
      const { [key]: _gone, ...rest } = records[0]!;
      expect(resultSchema.safeParse(rest).success, key).toBe(false);
      expect(violations(rest, resultJsonSchema()), key).not.toEqual([]);
    }
    expect(resultSchema.safeParse({ ...records[0], note: 'x' }).success).toBe(false);
  });
});
