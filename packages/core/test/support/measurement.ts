/** What the tests of the measurement equation share: fixtures, random conditions, refusals, frames by brute force. */
import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { expect } from 'vitest';
import {
  type AnyKelvin,
  air,
  type Band,
  type Conditions,
  type Curve,
  calibratedBand,
  celsius,
  frameFlag,
  infraredWindow,
  isMeasurementError,
  type Kelvin,
  type Layer,
  layer,
  type MeasurementErrorCode,
  type MeasurementModel,
  monochromaticBand,
  type NumericArray,
  type Pixel,
  type Recorrection,
  sampledBand,
  topHatBand,
  type View,
  view,
} from '../../src/index.js';

/** A file of `fixtures/`, parsed. */
export function fixture<T>(name: string): T {
  return JSON.parse(readFileSync(new URL(`../../../../fixtures/${name}`, import.meta.url), 'utf8')) as T;
}

/** A number as kelvin without a check, to hand the library what it must refuse or may take. */
export const K = (value: number): Kelvin => value as Kelvin;

/** Asserts a typed refusal: its code, its path, and words its message must have. */
export function refused(
  attempt: () => unknown,
  code: MeasurementErrorCode,
  path: string | undefined,
  ...says: readonly string[]
): void {
  let error: unknown;
  try {
    attempt();
  } catch (caught) {
    error = caught;
  }
  expect(isMeasurementError(error), `expected a MeasurementError, got ${String(error)}`).toBe(true);
  const { code: own, path: ownPath, message } = error as { code: string; path?: string; message: string };
  expect({ code: own, path: ownPath, message }).toMatchObject({ code, path });
  for (const words of says) expect(message).toContain(words);
}

/** Bands of every kind. */
export const bands: readonly Band[] = [
  topHatBand(8, 14),
  topHatBand(3, 5),
  topHatBand(8, 12),
  topHatBand(7.5, 13, { detector: 'photon' }),
  sampledBand({ wavelength: [7.4, 8.1, 9, 11, 13, 14.2], responsivity: [0, 0.7, 1, 0.9, 0.6, 0.02] }),
  sampledBand({ wavenumber: [1950, 2100, 2500, 2900], responsivity: [0.1, 0.9, 1, 0.2] }),
  monochromaticBand(10.6),
  calibratedBand({ form: 'k1k2', k1: 774.8853, k2: 1321.0789 }),
];

/** Bands that know wavelengths, so that curves can weight them. */
export const spectralBands: readonly Band[] = bands.slice(0, 6);

const double = (min: number, max: number): fc.Arbitrary<number> =>
  fc.double({ min, max, noNaN: true, noDefaultInfinity: true });

/** A ratio between two limits. */
export const ratio = double;

/** A temperature. [K] */
export const kelvinBetween = (min: number, max: number): fc.Arbitrary<Kelvin> => double(min, max).map(K);

/** A curve over 2–16 µm or 600–5500 cm⁻¹ with values between two limits. */
export const curveBetween = (min: number, max: number): fc.Arbitrary<Curve> =>
  fc
    .tuple(
      fc.uniqueArray(double(2.5, 15), { minLength: 1, maxLength: 5 }),
      fc.infiniteStream(double(min, max)),
      fc.boolean(),
    )
    .map(([inner, values, overWavenumber]) => {
      const wavelength = [2, ...inner.sort((a, b) => a - b), 16];
      const value = wavelength.map(() => values.next().value);
      if (!overWavenumber) return { wavelength, value };
      const wavenumber = wavelength.map((x) => 1e4 / x).reverse();
      return { wavenumber, value };
    });

/** A gray layer: air, a window that mirrors or not, or a layer with a path radiance. */
export const grayLayer: fc.Arbitrary<Layer> = fc.oneof(
  fc
    .record({ transmittance: ratio(0.3, 1), temperature: kelvinBetween(250, 420) })
    .map((input) => air(input)),
  fc
    .record({
      transmittance: ratio(0.3, 0.75),
      reflectance: ratio(0, 0.24),
      temperature: kelvinBetween(250, 420),
      mirroredTemperature: kelvinBetween(250, 420),
    })
    .map((input) => infraredWindow(input)),
  fc.record({ transmittance: ratio(0.3, 1), pathRadiance: ratio(0, 5) }).map((input) => layer(input)),
);

/** A layer whose transmittance, or reflectance too, is a curve. */
export const spectralLayer: fc.Arbitrary<Layer> = fc
  .record({
    transmittance: curveBetween(0.3, 0.75),
    reflectance: fc.oneof(ratio(0.001, 0.24), curveBetween(0.001, 0.24)),
    temperature: kelvinBetween(250, 420),
    mirroredTemperature: kelvinBetween(250, 420),
  })
  .map((input) => layer(input));

const reflectedAny = kelvinBetween(200, 700);

/** Conditions in which everything is gray, opaque or not, with any band. */
export const grayConditions: fc.Arbitrary<Conditions> = fc
  .record({
    band: fc.constantFrom(...bands),
    emissivity: ratio(0.05, 1),
    reflectedApparentTemperature: reflectedAny,
    path: fc.array(grayLayer, { maxLength: 3 }),
    through: fc.option(fc.tuple(ratio(0, 1), kelvinBetween(250, 700))),
  })
  .map(({ through, ...conditions }) =>
    through === null
      ? conditions
      : {
          ...conditions,
          surface: {
            transmittance: through[0] * (1 - conditions.emissivity),
            backgroundApparentTemperature: through[1],
          },
        },
  );

/** Conditions with a curve on the surface, on the path, or on both. */
export const spectralConditions: fc.Arbitrary<Conditions> = fc.record({
  band: fc.constantFrom(...spectralBands),
  emissivity: fc.oneof(ratio(0.1, 1), curveBetween(0.1, 1)),
  reflectedApparentTemperature: reflectedAny,
  // A path radiance cannot lie behind a curve, so these gray layers have none.
  path: fc
    .tuple(
      fc.array(
        grayLayer.filter(({ pathRadiance }) => pathRadiance === undefined),
        { maxLength: 1 },
      ),
      fc.array(spectralLayer, { minLength: 1, maxLength: 2 }),
      fc.array(grayLayer, { maxLength: 1 }),
    )
    .map((parts) => parts.flat()),
});

/** Any conditions. */
export const anyConditions: fc.Arbitrary<Conditions> = fc.oneof(
  { arbitrary: grayConditions, weight: 2 },
  { arbitrary: spectralConditions, weight: 1 },
);

/** What an instrument would have stored; the case is skipped where its settings leave no temperature to store. */
export function storedOrSkipped(again: Recorrection, surface: Kelvin): Kelvin<'recorded temperature'> {
  try {
    return again.recordedTemperature(surface);
  } catch (error) {
    fc.pre(!(isMeasurementError(error) && error.code === 'no-solution'));
    throw error;
  }
}

/** Index tuples of a shape, in row-major order; one empty tuple for a 0-d view. */
export function* indices(shape: readonly number[]): Generator<readonly number[]> {
  if (shape.includes(0)) return;
  const index = shape.map(() => 0);
  for (;;) {
    yield [...index];
    let axis = shape.length - 1;
    while (axis >= 0 && ++index[axis]! === shape[axis]) index[axis--] = 0;
    if (axis < 0) return;
  }
}

/** Element of a view by its index tuple. */
export function element(view: View, index: readonly number[]): number {
  return view.data[index.reduce((at, i, axis) => at + i * view.stride[axis]!, view.offset)]!;
}

/** What a spot says of a reading: a temperature, or the name of the flag a frame must set. */
export function spotOrFlag(
  model: MeasurementModel | Recorrection,
  reading: number,
  pixel?: Pixel,
): number | keyof typeof frameFlag {
  if (Number.isNaN(reading)) return 'missing';
  if (!Number.isFinite(reading)) return 'not-finite';
  if (reading < Math.max(150, model.band.range.from)) return 'reading-below-range';
  if (reading > Math.min(3500, model.band.range.to)) return 'reading-above-range';
  try {
    return model.surfaceTemperature(K(reading), pixel);
  } catch (error) {
    if (!isMeasurementError(error)) throw error;
    if (error.code === 'no-solution') return 'no-solution';
    if (error.path === 'surface temperature') {
      return error.message.includes('below') ? 'result-below-range' : 'result-above-range';
    }
    return 'invalid-input';
  }
}

/** Width of a float32 unit in the last place at a temperature. [K] */
export function float32Ulp(value: number): number {
  return 2 ** (Math.floor(Math.log2(value)) - 23);
}

/** Name of a flag code. */
export function flagName(code: number): string | undefined {
  return Object.entries(frameFlag).find(([, value]) => value === code)?.[0];
}

/**
 * Compares a frame's answer with the spot's, pixel by pixel, and gives the largest difference beyond what rounding
 * may do: one unit in the last place of a float32, unless said otherwise. [K]
 */
export function worstAgainstSpot(
  model: MeasurementModel | Recorrection | ((index: readonly number[]) => MeasurementModel | Recorrection),
  readings: View,
  result: { readonly temperature: View; readonly flags: View },
  rounding: (kelvin: number) => number = float32Ulp,
): { readonly worst: number; readonly where: string } {
  let worst = 0;
  let where = 'nowhere';
  for (const index of indices(readings.shape)) {
    const own = typeof model === 'function' ? model(index) : model;
    const [row, column] = [index.at(-2), index.at(-1)];
    const frame = index.at(-3);
    const pixel =
      own.needsPixel && row !== undefined && column !== undefined
        ? { row, column, ...(frame === undefined ? {} : { frame }) }
        : undefined;
    const spot = spotOrFlag(own, element(readings, index), pixel);
    const flag = flagName(element(result.flags, index));
    const value = element(result.temperature, index);
    const at = `[${index.join(', ')}], reading ${element(readings, index)}`;
    if (typeof spot === 'string') {
      expect({ at, flag, value }).toEqual({ at, flag: spot, value: Number.NaN });
      continue;
    }
    expect({ at, flag: flag === 'saturated' ? 'ok' : flag }).toEqual({ at, flag: 'ok' });
    const excess = Math.max(0, Math.abs(value - spot) - rounding(spot));
    if (excess > worst) [worst, where] = [excess, at];
  }
  return { worst, where };
}

/**
 * An output view that keeps double precision: a Float64Array that passes for a Float32Array. A float32 at 1000 K has
 * steps of 0.06 mK, which would hide the kernel's own error from a test of it.
 */
export function unroundedOutput(shape: readonly number[]): View<Float32Array> {
  const data = new Float64Array(shape.reduce((product, extent) => product * extent, 1));
  Object.setPrototypeOf(data, Float32Array.prototype);
  return view(data as unknown as Float32Array, shape);
}

/** Copy of a view's values in row-major order. */
export function flat(view: View): number[] {
  return [...indices(view.shape)].map((index) => element(view, index));
}

/** A view of the same values laid out otherwise, inside a larger array. */
export function laidOut<Data extends NumericArray>(
  values: readonly number[],
  shape: readonly number[],
  make: (length: number) => Data,
  layout: { readonly order: 'C' | 'F'; readonly reversed?: readonly number[]; readonly spacing?: number },
): View<Data> {
  const { order, reversed = [], spacing = 1 } = layout;
  const stride = shape.map(() => 0);
  let step = spacing;
  const axes = shape.map((_, axis) => axis);
  for (const axis of order === 'C' ? axes.reverse() : axes) {
    stride[axis] = step;
    step *= shape[axis]!;
  }
  let offset = 3;
  for (const axis of reversed) {
    offset += (shape[axis]! - 1) * stride[axis]!;
    stride[axis] = -stride[axis]!;
  }
  const data = make(step + 7);
  [...indices(shape)].forEach((index, i) => {
    data[index.reduce((at, k, axis) => at + k * stride[axis]!, offset)] = values[i]!;
  });
  return { data, shape: [...shape], stride, offset };
}

/** A temperature whose type says nothing, for readability in tables. */
export const any = (value: number): AnyKelvin => value as AnyKelvin;

/** A painted surface in a room, 8–14 µm: the plainest conditions. */
export const paintedConditions: Conditions = {
  band: topHatBand(8, 14),
  emissivity: 0.86,
  reflectedApparentTemperature: celsius(21),
};

/** The same as a document. */
export const paintedDocument = {
  format: 'graybody-conditions',
  version: 1,
  band: { kind: 'top-hat', from: 8, to: 14 },
  emissivity: 0.86,
  reflectedApparentTemperature: { celsius: 21 },
};

/** Temperatures that rise by 1.25 K. [K] */
export const ramp = (count: number, from = 280): number[] =>
  Array.from({ length: count }, (_, i) => from + 1.25 * i);
