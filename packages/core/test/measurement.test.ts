import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  apparentTemperature,
  bandFromDescriptor,
  type Conditions,
  celsius,
  infraredWindow,
  measurementModel,
  measurementResult,
  surfaceTemperature,
  toCelsius,
  topHatBand,
} from '../src/index.js';
import { type DescribedConditions, readConditionsDocument } from '../src/record.js';
import {
  anyConditions,
  bands,
  fixture,
  grayConditions,
  K,
  kelvinBetween,
  refused,
} from './support/measurement.js';

const longWave = topHatBand(8, 14);
const midWave = topHatBand(3, 5);
const base: Conditions = { band: longWave, emissivity: 0.86, reflectedApparentTemperature: celsius(21) };

interface CorrectionCase {
  readonly name: string;
  readonly band_um: readonly [number, number];
  readonly t_object_C: number;
  readonly emissivity: number;
  readonly t_reflected_C: number;
  readonly tau_atm: number;
  readonly t_atm_C: number | null;
  readonly tau_window: number;
  readonly t_window_C: number | null;
  readonly t_apparent_C: number;
  readonly L_in_W_m2_sr: number;
  readonly sensitivities: Readonly<Record<string, number>>;
}

interface PathCase {
  readonly name: string;
  readonly band_um: readonly [number, number];
  readonly detector?: string;
  readonly emissivity?: number;
  readonly emissivity_steps?: readonly (readonly [number, number, number])[];
  readonly t_object_C: number;
  readonly t_reflected_C: number;
  readonly path?: readonly {
    readonly kind: 'air' | 'window';
    readonly transmittance: number;
    readonly reflectance?: number;
    readonly t_C: number;
    readonly t_mirrored_C?: number;
  }[];
  readonly L_in?: number;
  readonly t_apparent_C: number;
  readonly sensitivities?: Readonly<Record<string, number>>;
}

const reference = fixture<{ cases: CorrectionCase[]; path_cases: PathCase[] }>(
  'reference/correction-cases.json',
);

const conditionsOfCase = (given: CorrectionCase): Conditions => ({
  band: topHatBand(...given.band_um),
  emissivity: given.emissivity,
  reflectedApparentTemperature: celsius(given.t_reflected_C),
  path: [
    ...(given.t_atm_C === null
      ? []
      : [air({ transmittance: given.tau_atm, temperature: celsius(given.t_atm_C) })]),
    ...(given.t_window_C === null
      ? []
      : [infraredWindow({ transmittance: given.tau_window, temperature: celsius(given.t_window_C) })]),
  ],
});

const conditionsOfPathCase = (given: PathCase): Conditions => ({
  band: topHatBand(...given.band_um, { detector: given.detector ? 'photon' : 'energy' }),
  emissivity:
    given.emissivity ??
    (given.emissivity_steps
      ? {
          wavelength: given.emissivity_steps.map(([from, to]) => [from, to]).flat(),
          value: given.emissivity_steps.flatMap(([, , value]) => [value, value]),
        }
      : 1),
  reflectedApparentTemperature: celsius(given.t_reflected_C),
  path: (given.path ?? []).map((layer) =>
    layer.kind === 'air'
      ? air({ transmittance: layer.transmittance, temperature: celsius(layer.t_C) })
      : infraredWindow({
          transmittance: layer.transmittance,
          reflectance: layer.reflectance ?? 0,
          temperature: celsius(layer.t_C),
          ...(layer.t_mirrored_C === undefined ? {} : { mirroredTemperature: celsius(layer.t_mirrored_C) }),
        }),
  ),
});

// Computed with mpmath, 30 digits, outside this library; fixtures/reference/README.md. Tolerance there: 1e-6 K.
describe('the nine correction cases of fixtures/reference/correction-cases.json', () => {
  it('are nine', () => {
    expect(reference.cases).toHaveLength(9);
  });

  it.each(reference.cases)('$name: forward and inverse within 1e-6 K', (given) => {
    const model = measurementModel(conditionsOfCase(given));
    const truth = celsius(given.t_object_C);
    const apparent = celsius(given.t_apparent_C);
    expect(Math.abs(model.apparentTemperature(truth) - apparent)).toBeLessThan(1e-6);
    expect(Math.abs(model.surfaceTemperature(apparent) - truth)).toBeLessThan(1e-6);
    const seen = model.gain * model.targetBand.radiance(truth) + model.offset;
    expect(Math.abs(seen / given.L_in_W_m2_sr - 1)).toBeLessThan(1e-12);
  });

  it.each(reference.cases)('$name: sensitivities within 1e-9 of their size', (given) => {
    const names: Readonly<Record<string, string>> = {
      dTobj_dTapparent: 'apparent',
      dTobj_deps: 'emissivity',
      dTobj_dTrefl: 'reflectedApparentTemperature',
      dTobj_dtau: 'path[0].transmittance',
      dTobj_dTatm: 'path[0].temperature',
    };
    const own = measurementModel(conditionsOfCase(given)).sensitivities(celsius(given.t_apparent_C));
    for (const [key, expected] of Object.entries(given.sensitivities)) {
      expect(Math.abs(own[names[key]!]! / expected - 1), key).toBeLessThan(1e-9);
    }
  });
});

describe('the three path cases of fixtures/reference/correction-cases.json', () => {
  it('are three', () => {
    expect(reference.path_cases).toHaveLength(3);
  });

  it.each(reference.path_cases)('$name: forward and inverse within 1e-6 K', (given) => {
    const model = measurementModel(conditionsOfPathCase(given));
    const truth = celsius(given.t_object_C);
    const apparent = celsius(given.t_apparent_C);
    expect(Math.abs(model.apparentTemperature(truth) - apparent)).toBeLessThan(1e-6);
    expect(Math.abs(model.surfaceTemperature(apparent) - truth)).toBeLessThan(1e-6);
    if (given.L_in !== undefined) {
      const seen = model.gain * model.targetBand.radiance(truth) + model.offset;
      expect(Math.abs(seen / given.L_in - 1)).toBeLessThan(1e-10); // what band.ts promises of its quadrature
    }
  });

  it('D1: all eleven sensitivities as printed (10 decimals)', () => {
    const given = reference.path_cases[0]!;
    const own = measurementModel(conditionsOfPathCase(given)).sensitivities(celsius(given.t_apparent_C));
    expect(Object.keys(own).sort()).toEqual(Object.keys(given.sensitivities!).sort());
    for (const [key, expected] of Object.entries(given.sensitivities!)) {
      // The file has a slip of a digit in 'apparent': 45-digit arithmetic gives 1.601556041547 (fixtures/reference/README.md).
      const printed = key === 'apparent' ? 1.601556041547 : expected;
      expect(Math.abs(own[key]! - printed), key).toBeLessThan(2e-9);
    }
  });

  it('D1 with the path reversed shows 62.9133 °C, with the reflectance as absorption 65.2327 °C: both are wrong', () => {
    const given = reference.path_cases[0]!;
    const conditions = conditionsOfPathCase(given);
    const reversed = { ...conditions, path: [...conditions.path!].reverse() };
    const truth = celsius(85);
    expect(toCelsius(apparentTemperature(truth, reversed))).toBeCloseTo(62.9133, 4);
    const absorbing = {
      ...conditions,
      path: conditions.path!.map((layer) =>
        layer.kind === 'window' ? infraredWindow({ transmittance: 0.7, temperature: celsius(45) }) : layer,
      ),
    };
    expect(toCelsius(apparentTemperature(truth, absorbing))).toBeCloseTo(65.2327, 4);
  });

  it('S1: the gray emissivity that is right at 80 °C (0.6620) gives 190.473 °C for a true 200 °C, the curve gives 200 °C', () => {
    const given = reference.path_cases[1]!;
    const conditions = conditionsOfPathCase(given);
    // Right at 80 °C: the share of blackbody radiance the surface emits there.
    const gray =
      measurementModel(conditions).targetBand.radiance(celsius(80)) / longWave.radiance(celsius(80));
    expect(gray).toBeCloseTo(0.662, 4);
    const apparent = apparentTemperature(celsius(200), conditions);
    expect(toCelsius(surfaceTemperature(apparent, { ...conditions, emissivity: gray }))).toBeCloseTo(
      190.473,
      2,
    );
    expect(toCelsius(surfaceTemperature(apparent, conditions))).toBeCloseTo(200, 9);
  });
});

interface Vector {
  readonly name: string;
  readonly conditions: Readonly<Record<string, unknown>>;
  readonly true_temperature_K: number;
  readonly apparent_temperature_K: number;
  readonly instrument_radiance_W_m2_sr: number;
  readonly offset_W_m2_sr: number;
  readonly target_part_W_m2_sr: number;
  readonly gain?: number;
  readonly sensitivities: Readonly<Record<string, number>>;
}

// Computed wavelength by wavelength in 45-digit arithmetic by fixtures/generate/vectors.py; expected there: 1e-6 K.
describe('the fifteen cases of fixtures/vectors/measurement.json', () => {
  const { cases } = fixture<{ cases: Vector[] }>('vectors/measurement.json');
  const described = (given: Vector): DescribedConditions =>
    readConditionsDocument({ format: 'graybody-conditions', version: 1, ...given.conditions });

  it('are fifteen', () => {
    expect(cases).toHaveLength(15);
  });

  it.each(cases)('$name: forward and inverse within 1e-6 K', (given) => {
    const model = measurementModel(described(given).conditions);
    expect(
      Math.abs(model.apparentTemperature(K(given.true_temperature_K)) - given.apparent_temperature_K),
    ).toBeLessThan(1e-6);
    expect(
      Math.abs(model.surfaceTemperature(K(given.apparent_temperature_K)) - given.true_temperature_K),
    ).toBeLessThan(1e-6);
  });

  it.each(cases)('$name: gain, offset and the parts of the radiance within 1e-10', (given) => {
    const model = measurementModel(described(given).conditions);
    const target = model.gain * model.targetBand.radiance(K(given.true_temperature_K));
    expect(Math.abs(target / given.target_part_W_m2_sr - 1)).toBeLessThan(1e-10);
    expect(Math.abs(model.offset / given.offset_W_m2_sr - 1)).toBeLessThan(1e-10);
    if (given.gain !== undefined) expect(model.gain).toBeCloseTo(given.gain, 12);
    const terms = model.radianceTerms(K(given.apparent_temperature_K));
    expect(Math.abs(terms[0]!.radiance / given.target_part_W_m2_sr - 1)).toBeLessThan(1e-9);
    const whole = terms.reduce((sum, term) => sum + term.radiance, 0);
    expect(Math.abs(whole / given.instrument_radiance_W_m2_sr - 1)).toBeLessThan(1e-9);
  });

  it.each(cases)('$name: every sensitivity within 1e-8 of its size', (given) => {
    const own = measurementModel(described(given).conditions).sensitivities(K(given.apparent_temperature_K));
    for (const [key, expected] of Object.entries(given.sensitivities)) {
      expect(Math.abs(own[key]! - expected), key).toBeLessThan(1e-8 * Math.abs(expected));
    }
  });
});

// JOB.md of the project: "errors and how large they are", computed outside this library, surroundings at 20 °C.
// Tolerance: half a unit of the last digit printed.
describe('sizes of common errors', () => {
  const room = (emissivity: number, band = longWave, reflected = 20): Conditions => ({
    band,
    emissivity,
    reflectedApparentTemperature: celsius(reflected),
  });
  /** What comes out with `used`, less the truth, when the instrument looks at a surface under `real`. */
  const error = (truth: number, real: Conditions, used: Conditions): number =>
    toCelsius(surfaceTemperature(apparentTemperature(celsius(truth), real), used)) - truth;

  it.each([
    [40, 1.0, 0.05, 0.8, 0.05],
    [80, 2.7, 0.05, 1.7, 0.05],
    [150, 5.2, 0.05, 2.8, 0.05],
    [500, 18, 0.5, 8.8, 0.05],
  ])(
    'emissivity 0.90 used for 0.95 at %d °C: +%d K in 8–14 µm, +%d K in 3–5 µm',
    (truth, lw, lwTol, mw, mwTol) => {
      expect(Math.abs(error(truth, room(0.95), room(0.9)) - lw)).toBeLessThan(lwTol);
      expect(Math.abs(error(truth, room(0.95, midWave), room(0.9, midWave)) - mw)).toBeLessThan(mwTol);
    },
  );

  it.each([
    [40, 3.6, 0.05],
    [80, 9.5, 0.05],
    [150, 18, 0.5],
    [500, 65, 0.5],
  ])('emissivity 0.25 used for 0.30 at %d °C: +%d K', (truth, size, tolerance) => {
    expect(Math.abs(error(truth, room(0.3), room(0.25)) - size)).toBeLessThan(tolerance);
  });

  it.each([
    [0.95, -0.2, 0.05],
    [0.8, -1.1, 0.05],
    [0.6, -2.9, 0.05],
    [0.3, -10, 0.5],
    [0.1, -48, 0.5],
  ])(
    'reflected apparent temperature 5 K too high at 40 °C and emissivity %d: %d K',
    (emissivity, size, tolerance) => {
      expect(Math.abs(error(40, room(emissivity), room(emissivity, longWave, 25)) - size)).toBeLessThan(
        tolerance,
      );
    },
  );

  it('reflected apparent temperature 5 K too high at 40 °C and emissivity 0.05: no solution', () => {
    refused(() => error(40, room(0.05), room(0.05, longWave, 25)), 'no-solution', 'apparent', 'surroundings');
  });

  it('a clear sky at −40 °C taken as 20 °C at 40 °C: −1.9 K (0.95), −27 K (0.6)', () => {
    expect(Math.abs(error(40, room(0.95, longWave, -40), room(0.95)) - -1.9)).toBeLessThan(0.05);
    expect(Math.abs(error(40, room(0.6, longWave, -40), room(0.6)) - -27)).toBeLessThan(0.5);
  });

  it('an operator of 34 °C mirrored in metal of emissivity 0.3 at 40 °C: +26 K', () => {
    expect(Math.abs(error(40, room(0.3, longWave, 34), room(0.3)) - 26)).toBeLessThan(0.5);
  });

  it('a window of transmittance 0.5 ignored: −27 K at 80 °C, −53 K at 150 °C', () => {
    const behind = { ...room(1), path: [infraredWindow({ transmittance: 0.5, temperature: celsius(20) })] };
    expect(Math.abs(error(80, behind, room(1)) - -27)).toBeLessThan(0.5);
    expect(Math.abs(error(150, behind, room(1)) - -53)).toBeLessThan(0.5);
  });

  it.each([
    [0.98, -1.0],
    [0.95, -2.5],
    [0.9, -5.0],
  ])('air of transmittance %d ignored at 80 °C: %d K', (transmittance, size) => {
    const through = { ...room(1), path: [air({ transmittance, temperature: celsius(20) })] };
    expect(Math.abs(error(80, through, room(1)) - size)).toBeLessThan(0.05);
  });

  it.each([
    [0.85, 8, 0.5],
    [0.6, 30, 0.5],
    [0.3, 90, 0.5],
  ])('correcting a corrected reading of 80 °C again, emissivity %d: +%d K', (emissivity, size, tolerance) => {
    const again = toCelsius(surfaceTemperature(celsius(80), room(emissivity))) - 80;
    expect(Math.abs(again - size)).toBeLessThan(tolerance);
  });

  it('the mean of 20 and 100 °C by radiance: 65.5 °C in 8–14 µm, 76.3 °C in 3–5 µm', () => {
    const mean = (band: typeof longWave): number =>
      toCelsius(band.temperature((band.radiance(celsius(20)) + band.radiance(celsius(100))) / 2));
    expect(Math.abs(mean(longWave) - 65.5)).toBeLessThan(0.05);
    expect(Math.abs(mean(midWave) - 76.3)).toBeLessThan(0.05);
  });
});

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
