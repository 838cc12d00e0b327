import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  apparentTemperature,
  type Conditions,
  type Curve,
  celsius,
  infraredWindow,
  layer,
  measurementModel,
  topHatBand,
} from '../src/index.js';
import {
  anyConditions,
  bands,
  curveBetween,
  grayConditions,
  grayLayer,
  K,
  kelvinBetween,
  ratio,
  spectralBands,
} from './support/measurement.js';

const longWave = topHatBand(8, 14);
const L = (temperature: number): number => longWave.radiance(K(temperature));
const base: Conditions = { band: longWave, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };

// Written out by hand, one term at a time, so that a wrong sign or a swapped pair shows as the term it is.
describe('gain and offset, term by term', () => {
  const near = (own: number, expected: number): void => {
    expect(Math.abs(own - expected)).toBeLessThan(1e-12 * Math.max(1, Math.abs(expected)));
  };

  it('surface: gain ε, offset +(1 − ε)·L(T_reflected)', () => {
    const model = measurementModel({ ...base, reflectedApparentTemperature: K(310) });
    near(model.gain, 0.8);
    near(model.offset, 0.2 * L(310));
  });

  it('surface that is not opaque: offset +(1 − ε − τ)·L(T_reflected) + τ·L(T_background)', () => {
    const surface = { transmittance: 0.3, backgroundApparentTemperature: K(420) };
    const model = measurementModel({
      ...base,
      emissivity: 0.5,
      reflectedApparentTemperature: K(310),
      surface,
    });
    near(model.gain, 0.5);
    near(model.offset, 0.2 * L(310) + 0.3 * L(420));
  });

  it('air: offset +(1 − τ)·L(T_air), what is behind it times τ', () => {
    const path = [air({ transmittance: 0.9, temperature: K(280) })];
    const model = measurementModel({ ...base, reflectedApparentTemperature: K(310), path });
    near(model.gain, 0.8 * 0.9);
    near(model.offset, 0.9 * 0.2 * L(310) + 0.1 * L(280));
  });

  it('window: offset +(1 − τ − ρ)·L(T_layer) + ρ·L(T_mirrored); the two temperatures are not exchanged', () => {
    const window = (temperature: number, mirrored: number) =>
      infraredWindow({
        transmittance: 0.6,
        reflectance: 0.25,
        temperature: K(temperature),
        mirroredTemperature: K(mirrored),
      });
    const model = measurementModel({ ...base, emissivity: 1, path: [window(340, 270)] });
    near(model.gain, 0.6);
    near(model.offset, 0.15 * L(340) + 0.25 * L(270));
    const exchanged = measurementModel({ ...base, emissivity: 1, path: [window(270, 340)] });
    near(exchanged.offset, 0.15 * L(270) + 0.25 * L(340));
  });

  it('a layer with a path radiance: offset +pathRadiance, and no emission of its own', () => {
    const path = [layer({ transmittance: 0.7, pathRadiance: 4.5 })];
    const model = measurementModel({ ...base, reflectedApparentTemperature: K(310), path });
    near(model.gain, 0.8 * 0.7);
    near(model.offset, 0.7 * 0.2 * L(310) + 4.5);
  });

  it('the path runs from target to instrument: the far layer is seen through the near one', () => {
    const [far, close] = [
      air({ transmittance: 0.9, temperature: K(330) }),
      air({ transmittance: 0.5, temperature: K(260) }),
    ];
    const model = measurementModel({ ...base, emissivity: 1, path: [far, close] });
    near(model.gain, 0.45);
    near(model.offset, 0.5 * 0.1 * L(330) + 0.5 * L(260));
    const reversed = measurementModel({ ...base, emissivity: 1, path: [close, far] });
    near(reversed.offset, 0.9 * 0.5 * L(260) + 0.1 * L(330));
  });

  it('a reflected radiance takes the place of the radiance of a temperature', () => {
    const model = measurementModel({ band: longWave, emissivity: 0.8, reflectedRadiance: 12.5 });
    near(model.offset, 0.2 * 12.5);
  });

  it('inputs are listed from the target on, under one spelling', () => {
    const path = [
      air({ transmittance: 0.9, temperature: K(330) }),
      infraredWindow({
        transmittance: 0.6,
        reflectance: 0.2,
        temperature: K(300),
        mirroredTemperature: K(290),
      }),
      layer({ transmittance: 0.9, pathRadiance: 1 }),
    ];
    const surface = { transmittance: 0.1, backgroundApparentTemperature: K(300) };
    expect(measurementModel({ ...base, path, surface }).inputs).toEqual([
      'apparent',
      'emissivity',
      'reflectedApparentTemperature',
      'surface.transmittance',
      'surface.backgroundApparentTemperature',
      'path[0].transmittance',
      'path[0].temperature',
      'path[1].transmittance',
      'path[1].reflectance',
      'path[1].temperature',
      'path[1].mirroredTemperature',
      'path[2].transmittance',
      'path[2].pathRadiance',
    ]);
    expect(measurementModel({ band: longWave, emissivity: 1, reflectedRadiance: 1 }).inputs).toEqual([
      'apparent',
      'emissivity',
      'reflectedRadiance',
    ]);
  });
});

describe('properties', () => {
  it('everything at one temperature shows that temperature, whatever ε, τ, ρ, curves and bands', () => {
    const layerAt = (temperature: number) =>
      fc
        .tuple(ratio(0.2, 0.7), ratio(0, 0.3), curveBetween(0.2, 0.7), fc.boolean())
        .map(([transmittance, reflectance, curve, spectral]) =>
          layer({
            transmittance: spectral ? curve : transmittance,
            reflectance,
            temperature: K(temperature),
            mirroredTemperature: K(temperature),
          }),
        );
    fc.assert(
      fc.property(
        kelvinBetween(215, 2200).chain((temperature) =>
          fc.record({
            temperature: fc.constant(temperature),
            band: fc.constantFrom(...spectralBands),
            emissivity: fc.oneof(ratio(0.01, 0.6), curveBetween(0.01, 1)),
            through: ratio(0, 0.4),
            path: fc.array(layerAt(temperature), { maxLength: 3 }),
          }),
        ),
        ({ temperature, band, emissivity, through, path }) => {
          const surface =
            typeof emissivity === 'number'
              ? { surface: { transmittance: through, backgroundApparentTemperature: temperature } }
              : {};
          const conditions = {
            band,
            emissivity,
            reflectedApparentTemperature: temperature,
            path,
            ...surface,
          };
          const model = measurementModel(conditions);
          const apparent = model.apparentTemperature(temperature);
          // Sums of a few parts in double precision: 1e-12 relative in radiance is below 1e-8 K.
          expect(Math.abs(apparent - temperature)).toBeLessThan(1e-8);
        },
      ),
      { numRuns: 300 },
    );
  });

  it('splitting a stretch of air of one temperature, τ = τ₁·τ₂, changes nothing', () => {
    fc.assert(
      fc.property(
        grayConditions,
        ratio(0.5, 1),
        ratio(0.5, 1),
        kelvinBetween(250, 420),
        fc.nat(3),
        kelvinBetween(250, 1500),
        (conditions, first, second, temperature, where, surface) => {
          const around = conditions.path ?? [];
          const at = Math.min(where, around.length);
          const put = (...inner: readonly ReturnType<typeof air>[]): Conditions => ({
            ...conditions,
            path: [...around.slice(0, at), ...inner, ...around.slice(at)],
          });
          const whole = measurementModel(put(air({ transmittance: first * second, temperature })));
          const split = measurementModel(
            put(air({ transmittance: first, temperature }), air({ transmittance: second, temperature })),
          );
          expect(Math.abs(split.gain / whole.gain - 1)).toBeLessThan(1e-13);
          expect(Math.abs(split.offset / whole.offset - 1)).toBeLessThan(1e-12);
          expect(
            Math.abs(split.apparentTemperature(surface) - whole.apparentTemperature(surface)),
          ).toBeLessThan(1e-8);
        },
      ),
    );
  });

  it('gray layers compose associatively: any stretch of a path may be put as one layer of its own τ and radiance', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...bands),
        fc.array(grayLayer, { minLength: 3, maxLength: 3 }),
        fc.boolean(),
        ratio(0.1, 1),
        kelvinBetween(250, 1500),
        (band, path, firstTwo, emissivity, surface) => {
          const over = (layers: typeof path): Conditions => ({
            band,
            emissivity,
            reflectedApparentTemperature: K(300),
            path: layers,
          });
          /** The layers as one: their transmittance and what they send by themselves. */
          const joined = (layers: typeof path) => {
            const { gain, offset } = measurementModel({
              band,
              emissivity: 1,
              reflectedApparentTemperature: K(300),
              path: layers,
            });
            return layer({ transmittance: gain, pathRadiance: offset });
          };
          const [a, b, c] = path as [(typeof path)[0], (typeof path)[0], (typeof path)[0]];
          const whole = measurementModel(over([a, b, c]));
          const grouped = measurementModel(over(firstTwo ? [joined([a, b]), c] : [a, joined([b, c])]));
          expect(Math.abs(grouped.gain / whole.gain - 1)).toBeLessThan(1e-13);
          expect(
            Math.abs(grouped.apparentTemperature(surface) - whole.apparentTemperature(surface)),
          ).toBeLessThan(1e-8);
        },
      ),
    );
  });

  it('the parts of the radiance add up to the whole, and their shares to 1', () => {
    fc.assert(
      fc.property(anyConditions, kelvinBetween(230, 2000), (conditions, surface) => {
        const model = measurementModel(conditions);
        const apparent = model.apparentTemperature(surface);
        const terms = model.radianceTerms(apparent);
        const whole = model.band.radiance(apparent);
        const sum = terms.reduce((total, term) => total + term.radiance, 0);
        expect(Math.abs(sum / whole - 1)).toBeLessThan(1e-8);
        expect(terms.reduce((total, term) => total + term.share, 0)).toBeCloseTo(1, 12);
        expect(terms.every((term) => term.radiance >= 0)).toBe(true);
        expect(terms.slice(0, 2).map((term) => term.name)).toEqual(['target', 'reflected surroundings']);
        expect(terms.at(-1)!.name).toBe(
          conditions.path?.length
            ? `path[${conditions.path.length - 1}]`
            : conditions.surface && terms.length === 3
              ? 'background through the target'
              : 'reflected surroundings',
        );
      }),
    );
  });

  it('each part is what is left when everything else is dark', () => {
    const path = [
      air({ transmittance: 0.9, temperature: K(330) }),
      infraredWindow({
        transmittance: 0.6,
        reflectance: 0.2,
        temperature: K(300),
        mirroredTemperature: K(290),
      }),
    ];
    const surface = { transmittance: 0.1, backgroundApparentTemperature: K(400) };
    const model = measurementModel({ ...base, reflectedApparentTemperature: K(310), path, surface });
    const parts = model.radianceTerms(model.apparentTemperature(K(350)));
    const expected = [
      ['target', 0.54 * 0.8 * L(350)],
      ['reflected surroundings', 0.54 * 0.1 * L(310)],
      ['background through the target', 0.54 * 0.1 * L(400)],
      ['path[0]', 0.6 * 0.1 * L(330)],
      ['path[1]', 0.2 * L(300) + 0.2 * L(290)],
    ] as const;
    expect(parts.map((part) => part.name)).toEqual(expected.map(([name]) => name));
    parts.forEach((part, i) => {
      expect(Math.abs(part.radiance / expected[i]![1] - 1)).toBeLessThan(1e-9);
    });
  });

  it('a flat curve is the number it is flat at', () => {
    const flat = (value: number): Curve => ({ wavelength: [2, 16], value: [value, value] });
    fc.assert(
      fc.property(
        fc.constantFrom(...spectralBands),
        ratio(0.1, 1),
        ratio(0.3, 0.7),
        ratio(0.01, 0.3),
        kelvinBetween(230, 1500),
        (band, emissivity, transmittance, reflectance, surface) => {
          const rest = { temperature: K(310), mirroredTemperature: K(290) };
          const conditions = (curved: boolean): Conditions => ({
            band,
            emissivity: curved ? flat(emissivity) : emissivity,
            reflectedApparentTemperature: K(320),
            path: [
              air({ transmittance: 0.9, temperature: K(300) }),
              layer({
                transmittance: curved ? flat(transmittance) : transmittance,
                reflectance: curved ? flat(reflectance) : reflectance,
                ...rest,
              }),
            ],
          });
          const gray = apparentTemperature(surface, conditions(false));
          expect(Math.abs(apparentTemperature(surface, conditions(true)) - gray)).toBeLessThan(1e-7);
        },
      ),
    );
  });

  it('the band of the target is the band itself without a curve, and the weighted one with a curve', () => {
    expect(measurementModel(base).targetBand).toBe(longWave);
    const curve = { wavelength: [8, 14], value: [0.4, 0.9] };
    const model = measurementModel({ ...base, emissivity: curve });
    expect(model.gain).toBe(1);
    expect(model.targetBand.radiance(K(350))).toBe(longWave.weightedBy(curve).radiance(K(350)));
  });
});
