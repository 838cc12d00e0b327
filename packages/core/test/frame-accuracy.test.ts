import { describe, expect, it } from 'vitest';
import {
  air,
  type Band,
  type Conditions,
  celsius,
  infraredWindow,
  isMeasurementError,
  measurementModel,
  type Recorrection,
  recorrection,
  topHatBand,
  view,
} from '../src/index.js';
import { bands, K, unroundedOutput, worstAgainstSpot } from './support/measurement.js';

/**
 * DESIGN.md, policies: |result − exact| ≤ 0.1 mK + 1 float32 ulp, −40…2000 °C, any band inside 2–15 µm. The spot goes
 * the exact way; both get the identical float32 reading, so that its rounding is not counted.
 */
const bound = 1e-4;
/** The outputs here keep double precision, so the kernel's own error is seen, not the float32's. */
const unrounded = (): number => 0;

const surfaces = Array.from({ length: 69 }, (_, i) => celsius(-40 + 30 * i));
const emissivities = [0.05, 0.08, 0.12, 0.2, 0.3, 0.45, 0.6, 0.75, 0.9, 1];
const reflecteds = [150, 180, 213.15, 260, 293.15, 350, 450, 600, 900, 1200, 1600, 2000];

/** float32 readings an instrument would show for the surfaces; NaN where it cannot show one. */
function readings(show: (surface: (typeof surfaces)[number]) => number): Float32Array {
  return Float32Array.from(surfaces, (surface) => {
    try {
      return show(surface);
    } catch (error) {
      if (isMeasurementError(error) && error.code === 'no-solution') return Number.NaN;
      throw error;
    }
  });
}

const named: readonly (readonly [string, Band])[] = [
  ['8–14 µm', topHatBand(8, 14)],
  ['3–5 µm', topHatBand(3, 5)],
  ['8–12 µm', topHatBand(8, 12)],
  ['2–15 µm', topHatBand(2, 15)],
  ['2–2.2 µm', topHatBand(2, 2.2)],
  ['7.5–13 µm, photon detector', bands[3]!],
  ['a sampled response over wavenumber', bands[5]!],
  ['10.6 µm alone', bands[6]!],
];

describe('a frame pixel is the spot within 0.1 mK + 1 float32 ulp', () => {
  const path = [
    air({ transmittance: 0.9, temperature: celsius(40) }),
    infraredWindow({
      transmittance: 0.6,
      reflectance: 0.2,
      temperature: celsius(35),
      mirroredTemperature: celsius(22),
    }),
  ];

  it.each(named)('%s: emissivity 0.05…1, reflected 150…2000 K, −40…2000 °C', (_name, band) => {
    let overall = 0;
    let compared = 0;
    for (const emissivity of emissivities) {
      for (const reflected of reflecteds) {
        const conditions = { band, emissivity, reflectedApparentTemperature: K(reflected) };
        for (const layers of [undefined, path]) {
          const model = measurementModel(layers ? { ...conditions, path: layers } : conditions);
          const frame = view(
            readings((surface) => model.apparentTemperature(surface)),
            [1, surfaces.length],
          );
          const result = model.surfaceFrame(frame, unroundedOutput(frame.shape));
          const { worst, where } = worstAgainstSpot(model, frame, result, unrounded);
          expect(worst, `ε ${emissivity}, reflected ${reflected} K, ${where}`).toBeLessThanOrEqual(bound);
          overall = Math.max(overall, worst);
          compared += result.counts.ok;
        }
      }
    }
    expect(compared).toBeGreaterThan(5000);
    // Measured: 0.7 µK at the worst (2–2.2 µm), 51 nK in 3–5 µm, 5 nK in 8–14 µm. A random search of 1500 models found
    // 2.3 µK in 2–2.05 µm. A table grown worse by a factor of four shows here, long before the bound is touched.
    expect(overall).toBeLessThan(3e-6);
  });

  it.each(named)('%s: with a map of every input', (_name, band) => {
    // Row: emissivity. Column: surface. One frame a reflected temperature, so the map has the frame's full shape.
    const shape = [reflecteds.length, emissivities.length, surfaces.length];
    const plane = shape.slice(1);
    const cells = <T>(of: (row: number, column: number) => T) =>
      emissivities.flatMap((_, row) => surfaces.map((_s, column) => of(row, column)));
    const conditions: Conditions = {
      band,
      emissivity: view(
        cells((row) => emissivities[row]!),
        plane,
      ),
      reflectedApparentTemperature: view(
        Float64Array.from(reflecteds.flatMap((kelvin) => cells(() => kelvin))),
        shape,
      ),
      surface: {
        transmittance: view(
          cells((row) => 0.04 * (1 - emissivities[row]!)),
          plane,
        ),
        backgroundApparentTemperature: view(
          cells((_, column) => 250 + 5 * column),
          plane,
        ),
      },
      path: [
        infraredWindow({
          transmittance: view(
            cells((row) => 0.5 + 0.04 * row),
            plane,
          ),
          reflectance: view(
            cells((_, column) => 0.001 * column),
            plane,
          ),
          temperature: view(
            cells((row, column) => 280 + row + column),
            plane,
          ),
          mirroredTemperature: view(
            cells((row) => 300 - row),
            plane,
          ),
        }),
      ],
    };
    const model = measurementModel(conditions);
    const data = new Float32Array(shape.reduce((a, b) => a * b, 1));
    let i = 0;
    for (let frame = 0; frame < shape[0]!; frame++) {
      for (let row = 0; row < shape[1]!; row++) {
        const shown = readings((surface) =>
          model.apparentTemperature(surface, { frame, row, column: surfaces.indexOf(surface) }),
        );
        data.set(shown, i);
        i += shown.length;
      }
    }
    const frame = view(data, shape);
    const result = model.surfaceFrame(frame, unroundedOutput(shape));
    const { worst, where } = worstAgainstSpot(model, frame, result, unrounded);
    expect(worst, where).toBeLessThanOrEqual(bound);
    expect(result.counts.ok).toBeGreaterThan(5000);
  });

  it.each(named)('%s: recorrection, plain and with a map', (_name, band) => {
    let compared = 0;
    for (const told of [
      { emissivity: 0.95, reflectedApparentTemperature: celsius(20) },
      {
        emissivity: 0.4,
        reflectedApparentTemperature: celsius(40),
        path: [air({ transmittance: 0.8, temperature: celsius(10) })],
      },
    ]) {
      for (const emissivity of emissivities) {
        for (const reflected of [150, 293.15, 600, 1600]) {
          const conditions = { band, emissivity, reflectedApparentTemperature: K(reflected), path };
          const plain: Recorrection = recorrection(told, conditions);
          const shape = [1, surfaces.length];
          const frame = view(
            readings((surface) => plain.recordedTemperature(surface)),
            shape,
          );
          const constant = (value: number) => view(new Array<number>(surfaces.length).fill(value), shape);
          const maps = recorrection(
            { ...told, emissivity: constant(told.emissivity) },
            { ...conditions, emissivity: constant(emissivity) },
          );
          for (const again of [plain, maps]) {
            const result = again.surfaceFrame(frame, unroundedOutput(shape));
            const { worst, where } = worstAgainstSpot(plain, frame, result, unrounded);
            expect(worst, `ε ${emissivity}, reflected ${reflected} K, ${where}`).toBeLessThanOrEqual(bound);
            compared += result.counts.ok;
          }
        }
      }
    }
    expect(compared).toBeGreaterThan(2000);
  });

  it('curves on the surface and on the path', () => {
    const conditions: Conditions = {
      band: topHatBand(8, 14),
      emissivity: { wavelength: [7, 9, 9, 15], value: [0.1, 0.3, 0.9, 0.6] },
      reflectedApparentTemperature: celsius(60),
      path: [
        air({
          transmittance: { wavelength: [7, 10, 15], value: [0.5, 0.95, 0.7] },
          temperature: celsius(15),
        }),
      ],
    };
    const model = measurementModel(conditions);
    const frame = view(
      readings((surface) => model.apparentTemperature(surface)),
      [surfaces.length],
    );
    const result = model.surfaceFrame(frame, unroundedOutput(frame.shape));
    expect(worstAgainstSpot(model, frame, result, unrounded).worst).toBeLessThanOrEqual(bound);
    // As a user gets it, in float32: the same within one unit in the last place.
    expect(worstAgainstSpot(model, frame, model.surfaceFrame(frame)).worst).toBeLessThanOrEqual(bound);
  });
});
