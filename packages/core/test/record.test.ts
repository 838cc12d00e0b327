import { describe, expect, it } from 'vitest';
import { celsius, measurementModel, measurementResult, surfaceFrameByArea, view } from '../src/index.js';
import { describedModels, readConditionsDocument } from '../src/record.js';
import { paintedConditions as base, fixture, paintedDocument as minimal } from './support/measurement.js';

const read = (changes: object) => readConditionsDocument({ ...minimal, ...changes });

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
