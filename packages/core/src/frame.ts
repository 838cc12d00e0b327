/**
 * Frames: the same steps as a spot, for every pixel of a strided view.
 *
 * A frame never throws for a pixel: it writes NaN, a reason code into the flags, and counts. Values come from the
 * bands' tables; where the correction magnifies the table's error beyond the bound (low emissivity, hot
 * surroundings), the pixel goes the exact way. |result − exact| ≤ 0.1 mK + 1 float32 ulp, −40…2000 °C; asserted
 * in test/frame.test.ts against the spot.
 */
import { type Band, isBand } from './band.js';
import { type Caution, conditionCautions, saturatedCaution } from './cautions.js';
import { MeasurementError } from './errors.js';
import { inputValue, startingVector } from './evaluation.js';
import { detached, frameView, outputOf, refuseOtherRadiance, refuseOtherUnits } from './frame-io.js';
import {
  type Affine,
  compose,
  type EquationInput,
  type MeasurementEquation,
} from './measurement-equation.js';
import { type Engine, saturationOf, surfaceRange } from './model.js';
import type { Quantity, QuantityUnit } from './quantity.js';
import { tableError } from './table.js';
import { highestTemperature, lowestTemperature } from './units.js';
import {
  broadcast,
  emptyView,
  forEachRow,
  isView,
  type NumericArray,
  type Operand,
  sizeOf,
  type View,
} from './view.js';

/**
 * Why a pixel has no value, or a doubtful one. Codes below 128: the value is NaN. From 128 on there is a value.
 */
export const frameFlag = {
  ok: 0,
  /** The input is NaN: missing. */
  missing: 1,
  /** The input is infinite. */
  'not-finite': 2,
  /** The reading is below 150 K. */
  'reading-below-range': 3,
  /** The reading is above 3500 K. */
  'reading-above-range': 4,
  /** A cell of a map is NaN or not what its input may be. */
  'invalid-input': 5,
  /** Surroundings and path send more than was seen. */
  'no-solution': 6,
  /** The result is below −60 °C, or below what the band is calibrated for. */
  'result-below-range': 7,
  /** The result is above 3000 °C, or above what the band is calibrated for. */
  'result-above-range': 8,
  /** The reading is at an end of the measuring range: the true value lies at it or beyond. */
  saturated: 128,
} as const;

/** Name of a reason code. */
export type FrameFlag = keyof typeof frameFlag;

/** A bare view, by contract of the quantity the call corrects, or a frame that knows what it holds. */
export type FrameInput =
  | View
  | { readonly array: View; readonly quantity: Quantity; readonly unit?: QuantityUnit | string | undefined };

/** Where to write: an earlier result, or a float32 view for the temperatures (the input itself, for one). */
export type FrameOutput =
  | View<Float32Array>
  | { readonly temperature: View<Float32Array>; readonly flags: View<Uint8Array> };

/** A frame of surface temperatures. */
export interface SurfaceFrame {
  /** Surface temperature, float32, shape of the input. [K], NaN where a flag says why */
  readonly temperature: View<Float32Array>;
  /** Reason codes, uint8, shape of the input; see {@link frameFlag}. */
  readonly flags: View<Uint8Array>;
  /** How many pixels have no value. */
  readonly unsolved: number;
  /** How many pixels carry each flag. */
  readonly counts: Readonly<Record<FrameFlag, number>>;
  /** `temperature` again, so that the result is a frame that knows its quantity. */
  readonly array: View<Float32Array>;
  readonly quantity: 'surface temperature';
  readonly unit: 'K';
  /** Cautions that hold for the whole frame, and `saturated` where a pixel is. */
  readonly cautions: readonly Caution[];
}

/**
 * A float32 view of zeros.
 *
 * @param shape - Extents, whole numbers ≥ 0.
 * @throws {MeasurementError} `wrong-shape`.
 */
export function frameBuffer(shape: readonly number[]): View<Float32Array> {
  if (!Array.isArray(shape) || !shape.every((extent) => Number.isInteger(extent) && extent >= 0)) {
    throw new MeasurementError('wrong-shape', {
      path: 'shape',
      expected: 'whole extents ≥ 0',
      received: shape,
    });
  }
  return emptyView(new Float32Array(sizeOf(shape)), shape);
}

/** Corrects a frame; behind `surfaceFrame` of a model and of a recorrection. */
export function surfaceFrameOf(
  engine: Engine,
  frame: FrameInput,
  out: FrameOutput | undefined,
  part: 'whole frame' | 'part of a frame' = 'whole frame',
): SurfaceFrame {
  const input = frameView(frame, engine.reads);
  if (part === 'whole frame') refuseOtherUnits(input, 'frame');
  const { temperature, flags } = outputOf(out, input.shape);
  const { band, targetBand } = engine.equation;
  const pixels = mapPixels(detached(input, temperature), temperature, flags, {
    kernel: surfaceKernel(engine, input.shape),
    saturation: saturationOf(engine),
    lowest: Math.max(surfaceRange.from, targetBand.range.from),
    highest: Math.min(surfaceRange.to, targetBand.range.to),
    readable: {
      from: Math.max(lowestTemperature, band.range.from),
      to: Math.min(highestTemperature, band.range.to),
    },
  });
  return { ...pixels, cautions: frameCautions(engine, pixels.counts.saturated) };
}

/** Cautions of the conditions, and of saturated pixels where there are some. */
export function frameCautions(engine: Engine, saturated: number): readonly Caution[] {
  const cautions = conditionCautions(engine);
  if (saturated > 0) cautions.push(saturatedCaution(`${saturated} pixels are`));
  return Object.freeze(cautions);
}

/** Solution of one pixel: kelvin, NaN for none; or why not. */
interface PixelKernel {
  readonly maps: readonly MapInput[];
  solve(reading: number, places: readonly number[]): number;
}

interface MapInput {
  readonly input: EquationInput;
  readonly x: Float64Array;
  readonly data: NumericArray;
  readonly operand: Operand;
}

/** Codes a kernel returns in place of a temperature; no temperature is negative. */
const INVALID = -1;
const NO_SOLUTION = -2;
const BELOW = -3;
const ABOVE = -4;

/** Table error a correction may magnify before the pixel goes the exact way: half of the 0.1 mK promised. */
const magnificationLimit: number = 5e-5 / tableError - 1;

function surfaceKernel(engine: Engine, shape: readonly number[]): PixelKernel {
  const { equation, recorded } = engine;
  const target = equation.targetBand;
  const source = recorded?.equation.targetBand ?? equation.band;
  const actual = startOf(equation);
  const settings = recorded
    ? startOf(recorded.equation)
    : { x: new Float64Array(0), affine: { gain: 1, offset: 0 } };
  const maps = [
    ...mapsOf(equation, actual.x, shape),
    ...(recorded ? mapsOf(recorded.equation, settings.x, shape) : []),
  ];
  const [lowest, highest] = [
    target.exact.radiance(target.range.from),
    target.exact.radiance(target.range.to),
  ];
  const { fast: sourceTable, exact: sourceExact } = source;
  const { fast: targetTable, exact: targetExact } = target;

  /** Reads the maps at a pixel into x, and gain and offset of it. Returns the slope that map temperatures add. */
  const readMaps = (places: readonly number[], exactly: boolean): number => {
    let slopes = 0;
    for (let i = 0; i < maps.length; i++) {
      const { input, x, data } = maps[i]!;
      const value = data[places[i]!]!;
      if (!allowed(input, value)) return Number.NaN;
      if (input.kind === 'temperature') {
        const kernel = exactly ? input.band.exact : input.band.fast;
        x[input.slot] = kernel.radiance(value);
        slopes += kernel.slope(value);
      } else x[input.slot] = value;
    }
    compose(equation, actual.x, actual.affine);
    if (recorded) compose(recorded.equation, settings.x, settings.affine);
    // An offset is NaN where the cells contradict each other: ε + τ or τ + ρ above 1.
    return Number.isFinite(actual.affine.offset) && Number.isFinite(settings.affine.offset)
      ? slopes
      : Number.NaN;
  };

  return {
    maps,
    solve(reading, places) {
      let mapSlopes = 0;
      if (maps.length > 0) {
        mapSlopes = readMaps(places, false);
        if (Number.isNaN(mapSlopes)) return INVALID;
      }
      const seen = settings.affine.gain * sourceTable.radiance(reading) + settings.affine.offset;
      const radiance = (seen - actual.affine.offset) / actual.affine.gain;
      const solution = targetTable.temperature(radiance);
      const slopeIn = settings.affine.gain * sourceTable.slope(reading) + mapSlopes;
      if (slopeIn <= magnificationLimit * actual.affine.gain * targetTable.slope(solution)) return solution;
      // Everything the table cannot hold, and everything without an answer, is decided by the exact chain.
      if (maps.length > 0) readMaps(places, true);
      const seenExactly = settings.affine.gain * sourceExact.radiance(reading) + settings.affine.offset;
      const exactly = (seenExactly - actual.affine.offset) / actual.affine.gain;
      if (!(exactly > 0)) return NO_SOLUTION;
      if (exactly < lowest) return BELOW;
      if (exactly > highest) return ABOVE;
      return targetExact.temperature(exactly);
    },
  };
}

/** Input vector and affine map of an equation, with numbers in place; maps are put in pixel by pixel. */
function startOf(equation: MeasurementEquation): { readonly x: Float64Array; readonly affine: Affine } {
  const x = startingVector(equation);
  for (const input of equation.inputs) {
    if (typeof input.value === 'number') x[input.slot] = inputValue(input, input.value);
  }
  const affine: Affine = { gain: 0, offset: 0 };
  compose(equation, x, affine);
  return { x, affine };
}

function mapsOf(equation: MeasurementEquation, x: Float64Array, shape: readonly number[]): MapInput[] {
  return equation.inputs.flatMap((input) =>
    isView(input.value)
      ? [{ input, x, data: input.value.data, operand: broadcast(input.value, shape, input.name) }]
      : [],
  );
}

function allowed({ kind }: EquationInput, value: number): boolean {
  if (kind === 'temperature') return value >= lowestTemperature && value <= highestTemperature;
  if (kind === 'positive ratio') return value > 0 && value <= 1;
  if (kind === 'ratio') return value >= 0 && value <= 1;
  return value >= 0 && value < Number.POSITIVE_INFINITY;
}

interface PixelRules {
  readonly kernel: PixelKernel;
  readonly saturation: { readonly from: number; readonly to: number } | undefined;
  readonly lowest: number;
  readonly highest: number;
  readonly readable: { readonly from: number; readonly to: number };
}

/** The loop over the pixels: readings in, temperatures, flags and counts out. */
function mapPixels(
  input: View,
  temperature: View<Float32Array>,
  flags: View<Uint8Array>,
  { kernel, saturation, lowest, highest, readable }: PixelRules,
): Omit<SurfaceFrame, 'cautions'> {
  const { maps } = kernel;
  const places = maps.map(() => 0);
  const counts = new Float64Array(256);
  const last = input.shape.length - 1;
  const steps = [input, temperature, flags, ...maps.map((map) => map.operand)].map(
    (view) => view.stride[last] ?? 0,
  );
  const from = saturation?.from ?? Number.NEGATIVE_INFINITY;
  const to = saturation?.to ?? Number.POSITIVE_INFINITY;
  const { data } = input;
  const operands = [input, temperature, flags, ...maps.map((map) => map.operand)];
  forEachRow(input.shape, operands, (starts, length) => {
    for (let column = 0; column < length; column++) {
      const reading = data[starts[0]! + column * steps[0]!]!;
      let flag: number = frameFlag.ok;
      let value = Number.NaN;
      if (reading >= readable.from && reading <= readable.to) {
        for (let i = 0; i < places.length; i++) places[i] = starts[i + 3]! + column * steps[i + 3]!;
        value = kernel.solve(reading, places);
        if (value >= lowest && value <= highest) {
          if (reading <= from || reading >= to) flag = frameFlag.saturated;
        } else {
          flag = flagOf(value, lowest);
          value = Number.NaN;
        }
      } else {
        flag = readingFlag(reading, readable.from);
      }
      temperature.data[starts[1]! + column * steps[1]!] = value;
      flags.data[starts[2]! + column * steps[2]!] = flag;
      counts[flag]! += 1;
    }
  });
  return {
    temperature,
    flags,
    array: temperature,
    quantity: 'surface temperature',
    unit: 'K',
    ...summary(counts),
  };
}

function flagOf(value: number, lowest: number): number {
  if (value === INVALID) return frameFlag['invalid-input'];
  if (value === NO_SOLUTION) return frameFlag['no-solution'];
  if (value === ABOVE) return frameFlag['result-above-range'];
  return value === BELOW || value < lowest
    ? frameFlag['result-below-range']
    : frameFlag['result-above-range'];
}

function readingFlag(reading: number, lowest: number): number {
  if (Number.isNaN(reading)) return frameFlag.missing;
  if (!Number.isFinite(reading)) return frameFlag['not-finite'];
  return reading < lowest ? frameFlag['reading-below-range'] : frameFlag['reading-above-range'];
}

/** Counts by name, and how many pixels have no value. */
export function summary(counts: Float64Array): Pick<SurfaceFrame, 'counts' | 'unsolved'> {
  const named = Object.fromEntries(Object.entries(frameFlag).map(([name, code]) => [name, counts[code]!]));
  const unsolved = counts.subarray(1, 128).reduce((sum, count) => sum + count, 0);
  return { counts: Object.freeze(named) as Record<FrameFlag, number>, unsolved };
}

/** A frame of apparent temperature; see {@link apparentFrame}. */
export interface ApparentFrame extends Omit<SurfaceFrame, 'quantity' | 'cautions'> {
  readonly quantity: 'apparent temperature';
}

/**
 * Apparent temperatures of a frame of band radiances: the temperature of the blackbody with that radiance. [K]
 *
 * @param frame - View of radiance in the band's unit, or `{ array, quantity: 'band radiance', unit }`.
 * @param band - The band the radiances are in.
 * @param out - As for `surfaceFrame`.
 * @returns float32 temperature and uint8 flags of the input's shape; `no-solution` for a radiance ≤ 0.
 * @throws {MeasurementError} `wrong-type`, `wrong-shape`, `already-corrected`; `wrong-quantity`, also when the frame
 *   states another unit than the band's.
 */
export function apparentFrame(frame: FrameInput, band: Band, out?: FrameOutput): ApparentFrame {
  if (!isBand(band)) {
    throw new MeasurementError('wrong-type', {
      path: 'band',
      expected: 'the band the radiances are in',
      received: band,
      hint: 'Write topHatBand(8, 14).',
    });
  }
  const input = frameView(frame, 'band radiance');
  refuseOtherRadiance(frame, band);
  const { temperature, flags } = outputOf(out, input.shape);
  const { from, to } = band.range;
  const lowest = band.exact.radiance(from);
  const kernel: PixelKernel = {
    maps: [],
    solve(radiance) {
      if (!(radiance > 0)) return NO_SOLUTION;
      const solution = band.fast.temperature(radiance);
      if (!Number.isNaN(solution)) return solution;
      return radiance < lowest ? BELOW : ABOVE;
    },
  };
  const result = mapPixels(detached(input, temperature), temperature, flags, {
    kernel,
    saturation: undefined,
    lowest: from,
    highest: to,
    readable: { from: -Number.MAX_VALUE, to: Number.MAX_VALUE },
  });
  return { ...result, quantity: 'apparent temperature' };
}
