import { describe, expect, it } from 'vitest';
import {
  type Conditions,
  celsius,
  infraredWindow,
  measurementModel,
  recorrection,
  topHatBand,
  type View,
  view,
} from '../src/index.js';
import { flagName, flat, K, laidOut, ramp, refused, worstAgainstSpot } from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.8, reflectedApparentTemperature: celsius(20) };
const model = measurementModel(base);
const expectSpot = (frame: View, result: { temperature: View; flags: View }, own = model): void => {
  expect(worstAgainstSpot(own, frame, result).worst).toBeLessThan(1e-4);
};

describe('maps', () => {
  const frame = view(Float32Array.from(ramp(24, 300)), [4, 2, 3]);
  const plane = [0.5, 0.6, 0.7, 0.8, 0.9, 1];

  it('two axes hold for every frame; the full shape holds pixel by pixel', () => {
    const flatMap = measurementModel({ ...base, emissivity: view(plane, [2, 3]) });
    expectSpot(frame, flatMap.surfaceFrame(frame), flatMap);
    const full = measurementModel({
      ...base,
      emissivity: view(
        Float64Array.from(ramp(24, 30), (value) => value / 100),
        [4, 2, 3],
      ),
    });
    expectSpot(frame, full.surfaceFrame(frame), full);
    const four = view(Float32Array.from(ramp(24, 300)), [1, 4, 2, 3]);
    expect(flat(flatMap.surfaceFrame(four).temperature)).toEqual(
      flat(flatMap.surfaceFrame(frame).temperature),
    );
  });

  it('of a strided layout, and shared by reference', () => {
    const strided = laidOut(plane, [2, 3], (length) => new Float64Array(length), {
      order: 'F',
      reversed: [0],
    });
    const own = measurementModel({ ...base, emissivity: strided });
    const before = flat(own.surfaceFrame(frame).temperature);
    expect(before).toEqual(
      flat(measurementModel({ ...base, emissivity: view(plane, [2, 3]) }).surfaceFrame(frame).temperature),
    );
    strided.data.fill(1);
    const after = flat(own.surfaceFrame(frame).temperature);
    const reading = flat(frame);
    after.forEach((value, i) => {
      expect(Math.abs(value - reading[i]!)).toBeLessThan(1e-4); // emissivity 1: the reading comes back
    });
  });

  it('of a wrong shape are refused before anything is written', () => {
    const own = measurementModel({ ...base, emissivity: view(plane, [3, 2]) });
    refused(
      () => own.surfaceFrame(frame, frame),
      'wrong-shape',
      'emissivity',
      'a map of shape [2, 3] or [4, 2, 3]',
      '[3, 2]',
    );
    expect(flat(frame)).toEqual(flat(view(Float32Array.from(ramp(24, 300)), [4, 2, 3])));
    const deep = measurementModel({ ...base, emissivity: view(plane, [1, 2, 3]) });
    refused(
      () => deep.surfaceFrame(view(ramp(6, 300), [2, 3])),
      'wrong-shape',
      'emissivity',
      'a map of shape [2, 3]',
    );
    refused(
      () =>
        measurementModel({ ...base, emissivity: view(plane, [2, 3]) }).surfaceFrame(view(ramp(6, 300), [6])),
      'wrong-shape',
      'emissivity',
    );
    refused(
      () => measurementModel({ ...base, emissivity: view(plane, [6]) }),
      'wrong-shape',
      'emissivity',
      'two axes',
    );
    const middle = measurementModel({
      ...base,
      emissivity: view(
        ramp(12).map(() => 0.5),
        [2, 2, 3],
      ),
    });
    refused(() => middle.surfaceFrame(view(ramp(24, 300), [2, 2, 2, 3])), 'wrong-shape', 'emissivity');
  });

  it('bad cells: NaN, out of range, or at odds with another input, each for its kind', () => {
    const at = (value: number) => view([value, value], [1, 2]);
    const one = view([340, 340], [1, 2]);
    const flagged = (conditions: Partial<Conditions>): string | undefined =>
      flagName(measurementModel({ ...base, ...conditions } as Conditions).surfaceFrame(one).flags.data[0]!);
    for (const bad of [Number.NaN, 0, -0.1, 1.1, 95, Number.POSITIVE_INFINITY]) {
      expect(flagged({ emissivity: at(bad) }), `emissivity ${bad}`).toBe('invalid-input');
    }
    for (const bad of [Number.NaN, 21, 4000, Number.NEGATIVE_INFINITY]) {
      expect(flagged({ reflectedApparentTemperature: at(bad) }), `reflected ${bad}`).toBe('invalid-input');
    }
    for (const bad of [Number.NaN, -1, Number.POSITIVE_INFINITY]) {
      const conditions = { band, emissivity: 0.8, reflectedRadiance: at(bad) };
      expect(flagName(measurementModel(conditions).surfaceFrame(one).flags.data[0]!), `radiance ${bad}`).toBe(
        'invalid-input',
      );
    }
    const film = (transmittance: number) => ({
      surface: { transmittance: at(transmittance), backgroundApparentTemperature: celsius(40) },
    });
    expect(flagged(film(-0.1))).toBe('invalid-input');
    expect(flagged(film(0.1))).toBe('ok');
    expect(flagged(film(0.25)), 'ε 0.8 + τ 0.25 > 1').toBe('invalid-input');
    const window = (transmittance: number) => ({
      path: [
        infraredWindow({
          transmittance: at(transmittance),
          reflectance: 0.3,
          temperature: celsius(20),
          mirroredTemperature: celsius(20),
        }),
      ],
    });
    expect(flagged(window(0.7))).toBe('ok');
    expect(flagged(window(0.75)), 'τ 0.75 + ρ 0.3 > 1').toBe('invalid-input');
  });

  it('the spot says the same of such a cell', () => {
    const pixel = { row: 0, column: 1 };
    const spot = (emissivity: View) =>
      measurementModel({ ...base, emissivity }).surfaceTemperature(K(340), pixel);
    refused(() => spot(view([0.9, Number.NaN], [1, 2])), 'not-finite', 'emissivity[0][1]', 'NaN');
    refused(() => spot(view([0.9, 95], [1, 2])), 'out-of-range', 'emissivity', 'Write 0.95 for 95 %.');
    const surface = { transmittance: view([0, 0.4], [1, 2]), backgroundApparentTemperature: celsius(40) };
    refused(
      () => measurementModel({ ...base, surface }).at(pixel),
      'out-of-range',
      '[0][1]',
      'emissivity + transmittance of the target ≤ 1',
    );
  });

  it('maps of recorded settings', () => {
    const told = { emissivity: view(plane, [2, 3]), reflectedApparentTemperature: celsius(25) };
    const again = recorrection(told, { ...base, emissivity: 0.7 });
    expect(worstAgainstSpot(again, frame, again.surfaceFrame(frame)).worst).toBeLessThan(1e-4);
    const bad = recorrection({ ...told, emissivity: view([...plane.slice(0, 5), 0], [2, 3]) }, base);
    expect(bad.surfaceFrame(frame).counts['invalid-input']).toBe(4);
  });
});
