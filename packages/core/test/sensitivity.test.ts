import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  celsius,
  infraredWindow,
  isMeasurementError,
  layer,
  measurementModel,
  recorrection,
  topHatBand,
  view,
} from '../src/index.js';
import {
  anyConditions,
  grayConditions,
  K,
  kelvinBetween,
  ratio,
  refused,
  spectralConditions,
  storedOrSkipped,
} from './support/measurement.js';
import { derivative, isTemperature, shifted } from './support/shifted.js';

/** A derivative where the shifted inputs stay within their limits; undefined where they do not. */
function numerical(of: (step: number) => number, name: string, analytic: number): number | undefined {
  try {
    // A step that moves the result by 0.3 K at most, so that the curvature of Planck's law stays small over it.
    return derivative(of, Math.min(isTemperature(name) ? 0.2 : 5e-4, 0.3 / Math.abs(analytic)));
  } catch (error) {
    if (isMeasurementError(error) && ['out-of-range', 'no-solution'].includes(error.code)) return undefined;
    throw error;
  }
}

/** Differences of fourth order over such steps agree with a derivative to about 1e-6; emissivities here may be 0.05. */
function agree(analytic: number, differences: number, name: string): void {
  expect(Math.abs(analytic - differences), name).toBeLessThan(2e-5 * Math.abs(differences) + 2e-6);
}

// JCGM 100:2008, 5.1.3: c_i = ∂f/∂x_i. Every analytic one against differences of the whole inverse.
describe('analytic sensitivity = numerical derivative', () => {
  const check = (arbitrary: fc.Arbitrary<Conditions>, runs: number): Set<string> => {
    const seen = new Set<string>();
    fc.assert(
      fc.property(arbitrary, kelvinBetween(280, 1500), (conditions, surface) => {
        const model = measurementModel(conditions);
        const apparent = model.apparentTemperature(surface);
        const own = model.sensitivities(apparent);
        fc.pre(own.apparent! < 8); // beyond, a step of a thousandth is no longer small
        expect(Object.keys(own).sort()).toEqual([...model.inputs].sort());
        for (const name of model.inputs) {
          const differences = numerical(
            (step) =>
              name === 'apparent'
                ? model.surfaceTemperature(K(apparent + step))
                : measurementModel(shifted(conditions, name, step)).surfaceTemperature(apparent),
            name,
            own[name]!,
          );
          if (differences === undefined) continue;
          agree(own[name]!, differences, name);
          seen.add(
            name.replace(/\d+/, 'k') +
              (typeof conditions.emissivity === 'object' && name === 'emissivity' ? ' curve' : ''),
          );
        }
      }),
      { numRuns: runs, seed: 20260301 }, // fixed: the list of inputs reached is asserted,
    );
    return seen;
  };

  it('gray conditions: reading, emissivity, surroundings, surface transmittance, background, every layer', () => {
    const seen = check(grayConditions, 150);
    expect([...seen].sort()).toEqual([
      'apparent',
      'emissivity',
      'path[k].mirroredTemperature',
      'path[k].pathRadiance',
      'path[k].reflectance',
      'path[k].temperature',
      'path[k].transmittance',
      'reflectedApparentTemperature',
      'surface.backgroundApparentTemperature',
      'surface.transmittance',
    ]);
  });

  it('curves: a shift of the whole curve, of the surface and of layers, transmittance and reflectance', () => {
    const seen = check(spectralConditions, 100);
    expect([...seen].sort()).toEqual([
      'apparent',
      'emissivity',
      'emissivity curve',
      'path[k].mirroredTemperature',
      'path[k].pathRadiance',
      'path[k].reflectance',
      'path[k].temperature',
      'path[k].transmittance',
      'reflectedApparentTemperature',
    ]);
  });

  it('a reflected radiance, and a path radiance beside a curve of transmittance', () => {
    const curve = { wavelength: [7, 10, 15], value: [0.5, 0.8, 0.6] };
    const all: Conditions[] = [
      { band: topHatBand(8, 14), emissivity: 0.7, reflectedRadiance: 30 },
      {
        band: topHatBand(8, 14),
        emissivity: 0.7,
        reflectedApparentTemperature: K(300),
        path: [
          air({ transmittance: 0.9, temperature: K(310) }),
          layer({ transmittance: curve, pathRadiance: 2 }),
          layer({ transmittance: 0.8, pathRadiance: 1 }),
        ],
      },
    ];
    for (const conditions of all) {
      const model = measurementModel(conditions);
      const apparent = model.apparentTemperature(K(380));
      const own = model.sensitivities(apparent);
      for (const name of model.inputs.slice(1)) {
        const differences = derivative(
          (step) => measurementModel(shifted(conditions, name, step)).surfaceTemperature(apparent),
          isTemperature(name) ? 0.2 : 5e-4,
        );
        agree(own[name]!, differences, name);
      }
    }
  });

  it('recorrection: the recorded temperature, recorded settings and actual inputs', () => {
    const seen = new Set<string>();
    const settings = fc.record({
      emissivity: ratio(0.4, 1),
      reflectedApparentTemperature: kelvinBetween(260, 330),
      path: fc.array(
        fc
          .record({ transmittance: ratio(0.6, 1), temperature: kelvinBetween(260, 330) })
          .map((input) => air(input)),
        { maxLength: 2 },
      ),
    });
    fc.assert(
      fc.property(anyConditions, settings, kelvinBetween(400, 1500), (conditions, recorded, surface) => {
        const again = recorrection(recorded, conditions);
        const stored = storedOrSkipped(again, surface);
        const own = again.sensitivities(stored);
        fc.pre(own.recorded! < 8 && stored > 220);
        expect(Object.keys(own).sort()).toEqual([...again.inputs].sort());
        for (const name of again.inputs) {
          const differences = numerical(
            (step) => {
              if (name === 'recorded') return again.surfaceTemperature(K(stored + step));
              if (name.startsWith('recorded.')) {
                return recorrection(shifted(recorded, name.slice(9), step), conditions).surfaceTemperature(
                  stored,
                );
              }
              return recorrection(recorded, shifted(conditions, name, step)).surfaceTemperature(stored);
            },
            name,
            own[name]!,
          );
          if (differences === undefined) continue;
          agree(own[name]!, differences, name);
          seen.add(name.replace(/\d+/, 'k'));
        }
      }),
      { numRuns: 80, seed: 20260301 },
    );
    for (const name of [
      'recorded',
      'recorded.emissivity',
      'recorded.reflectedApparentTemperature',
      'recorded.path[k].transmittance',
      'recorded.path[k].temperature',
      'emissivity',
    ]) {
      expect(seen).toContain(name);
    }
  });
});

describe('maps', () => {
  const band = topHatBand(8, 14);
  const curve = { wavelength: [7, 10, 15], value: [0.5, 0.8, 0.6] };
  const pixel = { row: 1, column: 0 };
  const map = (here: number) => view([here + 0.01, here + 0.02, here, here + 0.03], [2, 2]);

  it('at a pixel are what the numbers of that pixel are', () => {
    const conditions = (of: (value: number) => never): Conditions => ({
      band,
      emissivity: of(0.7),
      reflectedApparentTemperature: of(310),
      surface: { transmittance: of(0.1), backgroundApparentTemperature: of(330) },
      path: [
        infraredWindow({
          transmittance: of(0.6),
          reflectance: of(0.2),
          temperature: of(305),
          mirroredTemperature: of(290),
        }),
        layer({ transmittance: of(0.9), pathRadiance: of(1.5) }),
      ],
    });
    const numbers = measurementModel(conditions((value) => value as never));
    const maps = measurementModel(conditions((value) => map(value) as never));
    expect(maps.needsPixel).toBe(true);
    expect(maps.sensitivities(K(350), pixel)).toEqual(numbers.sensitivities(K(350)));
    expect(maps.at(pixel).sensitivities(K(350))).toEqual(numbers.sensitivities(K(350)));
    expect(maps.radianceTerms(K(350), pixel)).toEqual(numbers.radianceTerms(K(350)));
    refused(() => maps.sensitivities(K(350)), 'needs-pixel', 'emissivity', 'model.at({ row, column })');
  });

  it('of temperatures beside a curve of emissivity, transmittance or reflectance', () => {
    const conditions = (of: (value: number) => never): Conditions => ({
      band,
      emissivity: curve,
      reflectedApparentTemperature: of(310),
      path: [
        layer({
          transmittance: curve,
          reflectance: { wavelength: [7, 15], value: [0.1, 0.15] },
          temperature: of(305),
          mirroredTemperature: of(290),
        }),
        air({ transmittance: 0.95, temperature: of(295) }),
      ],
    });
    const numbers = measurementModel(conditions((value) => value as never)).sensitivities(K(350));
    const maps = measurementModel(conditions((value) => map(value) as never)).sensitivities(K(350), pixel);
    expect(Object.values(numbers).every(Number.isFinite)).toBe(true);
    expect(maps).toEqual(numbers);
  });
});

describe('signs a practitioner expects, warm surface in a cool room', () => {
  it('less emissivity, transmittance or reflected temperature entered means a higher result', () => {
    const own = measurementModel({
      band: topHatBand(8, 14),
      emissivity: 0.8,
      reflectedApparentTemperature: celsius(20),
      path: [air({ transmittance: 0.9, temperature: celsius(20) })],
    }).sensitivities(celsius(80));
    expect(own.apparent).toBeGreaterThan(1);
    expect(own.emissivity).toBeLessThan(0);
    expect(own.reflectedApparentTemperature).toBeLessThan(0);
    expect(own['path[0].transmittance']).toBeLessThan(0);
    expect(own['path[0].temperature']).toBeLessThan(0);
  });
});
