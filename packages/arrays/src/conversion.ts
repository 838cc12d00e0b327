/**
 * From stored numbers to a quantity: no-data, scale, offset, unit and calibration, applied once and reported.
 *
 * Order: a stored number that stands for a missing cell becomes NaN; value = scale · number + offset; the value is a
 * temperature in the unit given, or a radiance, which a band turns into apparent temperature.
 */
import {
  apparentFrame,
  type Band,
  type BandDescriptor,
  isBand,
  type Quantity,
  quantities,
  view,
} from '@graybody/core';
import { type ArrayType, arrayType, type DataType, type ElementArray, isFloat } from './element-type.js';
import { ArrayError } from './errors.js';
import type { StoredArray } from './format.js';
import { numberOption, wordOption } from './options.js';
import type { NumberRange } from './plausibility.js';
import { likelyUnits } from './plausibility.js';
import { checkedTemperatureUnit, type ToKelvin, temperatureUnit } from './temperature-unit.js';

/** What a caller says about stored numbers. */
export interface ConversionOptions {
  /** Unit of the values after scale and offset: 'K', 'degC', 'degF' and other spellings; a radiance's own unit. */
  readonly unit?: string | undefined;
  /** What the frames hold, or become with `band`. */
  readonly quantity?: Quantity | undefined;
  /** What the frames hold where neither `quantity` nor the file says it. */
  readonly otherwise?: Quantity | undefined;
  /** value = scale · number + offset. */
  readonly scale?: number | undefined;
  readonly offset?: number | undefined;
  /** Stored numbers that stand for a missing cell, before scale and offset. */
  readonly noData?: number | readonly number[] | undefined;
  /** The band whose radiance the values are: they become apparent temperature. */
  readonly band?: Band | undefined;
  /** 'accept' takes numbers that look like another unit. Default 'check'. */
  readonly plausibility?: 'check' | 'accept' | undefined;
}

/** What was applied to the stored numbers. */
export interface Conversion {
  readonly storedDataType: DataType;
  readonly scale: number;
  readonly offset: number;
  readonly noData: readonly number[];
  /** Who declared the no-data numbers. */
  readonly noDataFrom: 'caller' | 'file' | 'nobody';
  /** Unit of the values before they became kelvin; of a radiance its own. */
  readonly unit: string | undefined;
  /** Who declared quantity and unit. */
  readonly declaredBy: 'caller' | 'file';
  /** The band a radiance was turned into apparent temperature with. */
  readonly band: BandDescriptor | undefined;
}

/** A conversion ready to run. */
export interface ConversionPlan {
  readonly conversion: Conversion;
  readonly quantity: Quantity;
  /** Unit of what comes out: 'K', that of a radiance where known, '1' for counts. */
  readonly unit: string | undefined;
  /** Type of what comes out. */
  readonly dataType: ArrayType;
  /** The unit checks of plausibility apply to; undefined for what is no temperature. */
  readonly temperatureUnit: ToKelvin | undefined;
  readonly checkPlausibility: boolean;
  readonly hasMask: boolean;
  /**
   * Converts one frame.
   * @param mask - For counts: 1 where a cell is missing.
   */
  convert(stored: ElementArray, out: ElementArray, mask: Uint8Array | undefined): Converted;
}

/** What a conversion counted. */
export interface Converted {
  readonly missing: number;
  /** Cells whose radiance no blackbody within the band's range gives; NaN in the frame. */
  readonly unsolved: number;
  /** Range of the values before they became kelvin. */
  readonly range: NumberRange;
}

const isTemperature = (quantity: Quantity): boolean => quantity !== 'counts' && quantity !== 'band radiance';

/**
 * Settles what a file and its caller say together.
 *
 * @throws {ArrayError} `missing-option`, `wrong-option`, `wrong-quantity`, `wrong-unit`.
 */
export async function planConversion(
  stored: StoredArray,
  options: ConversionOptions,
): Promise<ConversionPlan> {
  const { band } = options;
  if (band !== undefined && !isBand(band)) {
    throw new ArrayError('wrong-option', {
      path: 'band',
      expected: 'a band of @graybody/core',
      received: band,
    });
  }
  const scale = numberOption(options.scale, 'scale', 1);
  const offset = numberOption(options.offset, 'offset', 0);
  if (scale === 0)
    throw new ArrayError('wrong-option', { path: 'scale', expected: 'a number other than 0', received: 0 });
  const scaled = options.scale !== undefined || options.offset !== undefined;
  const quantity = quantityOf(stored, options, scaled);
  refuseUselessOptions(stored, options, quantity, scaled);
  const unit = await unitOf(stored, options, quantity);
  const noData = noDataOf(stored, options);
  const toApparent = band !== undefined && quantity === 'apparent temperature' ? band : undefined;
  const kelvin = isTemperature(quantity) && toApparent === undefined ? temperatureUnit(unit!) : undefined;
  const dataType = outputType(stored.dataType, quantity, toApparent !== undefined);
  return {
    quantity,
    unit: quantity === 'counts' ? '1' : isTemperature(quantity) ? 'K' : unit,
    dataType,
    temperatureUnit: kelvin,
    checkPlausibility:
      wordOption(options.plausibility ?? 'check', 'plausibility', ['check', 'accept']) === 'check',
    hasMask: quantity === 'counts' && (noData.length > 0 || isFloat(stored.dataType)),
    conversion: {
      storedDataType: stored.dataType,
      scale,
      offset,
      noData,
      noDataFrom: options.noData !== undefined ? 'caller' : noData.length > 0 ? 'file' : 'nobody',
      unit: toApparent?.radianceUnit ?? unit,
      declaredBy: stored.description === undefined ? 'caller' : 'file',
      band: toApparent?.descriptor,
    },
    convert: converter({ stored, scale, offset, noData, kelvin, counts: quantity === 'counts', toApparent }),
  };
}

function quantityOf(stored: StoredArray, options: ConversionOptions, scaled: boolean): Quantity {
  const { description } = stored;
  const given =
    options.quantity === undefined ? undefined : wordOption(options.quantity, 'quantity', quantities);
  const fallback =
    options.otherwise === undefined ? undefined : wordOption(options.otherwise, 'otherwise', quantities);
  const calibrated = options.band === undefined ? undefined : 'apparent temperature';
  if (description === undefined) {
    const quantity = given ?? calibrated ?? fallback;
    if (quantity !== undefined) return quantity;
    throw new ArrayError('missing-option', {
      path: 'quantity',
      expected: `to be told what the frames hold, as the file does not say: ${quantities.map((one) => `'${one}'`).join(', ')}`,
      hint: "Write { quantity: 'apparent temperature' } for what an instrument shows with emissivity 1 and no path.",
    });
  }
  const { quantity: held, content } = description;
  const calibration = given ?? calibrated ?? (scaled ? 'band radiance' : undefined);
  const convertible =
    content === 'frames' &&
    ((held === 'counts' &&
      (calibration === 'band radiance' ||
        (calibration !== 'counts' && (scaled || options.band !== undefined)))) ||
      (held === 'band radiance' && calibration === 'apparent temperature' && options.band !== undefined));
  if (calibration === undefined || calibration === held) return held;
  if (convertible) return calibration;
  throw new ArrayError('wrong-quantity', {
    path: 'quantity',
    expected: `'${content === 'flags' ? 'counts' : held}', as the file says it holds ${content === 'flags' ? 'reason codes' : held}`,
    received: calibration,
    hint:
      held === 'surface temperature'
        ? 'These temperatures are corrected already; correct the frames they were made from.'
        : 'Leave quantity out to take what the file says.',
  });
}

function refuseUselessOptions(
  { description }: StoredArray,
  { band, unit }: ConversionOptions,
  quantity: Quantity,
  scaled: boolean,
): void {
  const refused = (path: string, expected: string, hint: string): ArrayError =>
    new ArrayError('wrong-option', { path, expected, hint });
  if (quantity === 'counts' && (scaled || band !== undefined)) {
    throw refused(
      scaled ? 'scale' : 'band',
      'no calibration for counts, which are the numbers as stored',
      "Write { quantity: 'band radiance', scale, offset } or { band, scale, offset } to calibrate them.",
    );
  }
  if (quantity === 'counts' && unit !== undefined && unit !== '1') {
    throw refused(
      'unit',
      'no unit for counts',
      "Write { quantity: 'apparent temperature', unit } for temperatures.",
    );
  }
  if (scaled && description !== undefined && description.quantity !== 'counts') {
    throw refused(
      'scale',
      `no scale and offset, as the file says its numbers are ${description.quantity} in ${description.unit}`,
      'They were applied when the file was written.',
    );
  }
  if (band !== undefined && quantity !== 'apparent temperature' && quantity !== 'band radiance') {
    throw refused('band', `no band for ${quantity}`, 'A band turns radiance into apparent temperature.');
  }
}

/** Unit of the values after scale and offset. */
async function unitOf(
  stored: StoredArray,
  options: ConversionOptions,
  quantity: Quantity,
): Promise<string | undefined> {
  const { unit, band } = options;
  const { description } = stored;
  if (quantity === 'counts') return undefined;
  const calibrating = description === undefined || description.quantity === 'counts';
  if (quantity === 'band radiance' || band !== undefined) {
    const known = calibrating ? undefined : description.unit;
    const asRadiance = unit !== undefined && temperatureUnit(unit)?.unit !== 'K' ? unit : undefined;
    const all = [known, band?.radianceUnit, asRadiance].filter((one) => one !== undefined);
    const misplaced = unit !== undefined && asRadiance === undefined && quantity === 'band radiance';
    if (misplaced || all.some((one) => one !== all[0])) {
      throw new ArrayError('wrong-unit', {
        path: 'unit',
        expected: all[0] === undefined ? 'a unit of radiance' : `'${all[0]}', the unit of this radiance`,
        received: unit ?? all.at(-1),
      });
    }
    return all[0];
  }
  if (!calibrating) {
    const given = unit === undefined ? undefined : checkedTemperatureUnit(unit, 'unit');
    if (given === undefined || given.unit === 'K') return 'K';
    throw new ArrayError('wrong-unit', {
      path: 'unit',
      expected: "'K', as the file says",
      received: unit,
      hint: 'Leave unit out to take what the file says.',
    });
  }
  if (unit !== undefined) return checkedTemperatureUnit(unit, 'unit').unit;
  const scale = options.scale ?? 1;
  const offset = options.offset ?? 0;
  const range = rangeOf(await stored.read(0), noDataOf(stored, options), scale, offset);
  throw new ArrayError('missing-option', {
    path: 'unit',
    expected: `to be told the unit of ${quantity}, as the file does not say`,
    hint: likelyUnits(range),
  });
}

function noDataOf(stored: StoredArray, { noData }: ConversionOptions): readonly number[] {
  if (noData === undefined) return stored.noData;
  const list: readonly unknown[] = Array.isArray(noData) ? noData : [noData];
  if (list.every((value) => typeof value === 'number')) return list;
  throw new ArrayError('wrong-option', {
    path: 'noData',
    expected: 'a number or a list of numbers',
    received: noData,
  });
}

function outputType(stored: DataType, quantity: Quantity, toApparent: boolean): ConversionPlan['dataType'] {
  if (quantity === 'counts') return arrayType(stored);
  if (toApparent) return 'float32';
  return ['float64', 'int32', 'uint32', 'int64', 'uint64'].includes(stored) ? 'float64' : 'float32';
}

interface ConverterParts {
  readonly stored: StoredArray;
  readonly scale: number;
  readonly offset: number;
  readonly noData: readonly number[];
  readonly kelvin: ToKelvin | undefined;
  readonly counts: boolean;
  readonly toApparent: Band | undefined;
}

function converter({
  stored,
  scale,
  offset,
  noData,
  kelvin,
  counts,
  toApparent,
}: ConverterParts): ConversionPlan['convert'] {
  const isMissing = missingTest(noData, stored.dataType);
  const factor = kelvin?.factor ?? 1;
  const shift = kelvin?.shift ?? 0;
  return (numbers, out, mask) => {
    let missing = 0;
    let low = Number.POSITIVE_INFINITY;
    let high = Number.NEGATIVE_INFINITY;
    const values = toApparent === undefined ? out : new Float64Array(numbers.length);
    for (let i = 0; i < numbers.length; i++) {
      const number = numbers[i]!;
      if (isMissing(number)) {
        missing++;
        if (mask !== undefined) mask[i] = 1;
        values[i] = counts ? number : Number.NaN;
        continue;
      }
      const value = scale * number + offset;
      if (value < low && value !== Number.NEGATIVE_INFINITY) low = value;
      if (value > high && value !== Number.POSITIVE_INFINITY) high = value;
      values[i] = counts ? number : factor * (value + shift);
    }
    let unsolved = 0;
    if (toApparent !== undefined) {
      const shape = [1, numbers.length];
      const into = view(out as Float32Array, shape);
      const result = apparentFrame(view(values as Float64Array, shape), toApparent, into);
      unsolved = result.unsolved - missing;
    }
    return { missing, unsolved, range: { low, high } };
  };
}

function missingTest(noData: readonly number[], type: DataType): (value: number) => boolean {
  // A no-data number of a float32 file is met as it was rounded when stored.
  const met = noData.map((value) => (type === 'float32' || type === 'float16' ? Math.fround(value) : value));
  const [only] = met;
  if (met.length === 0) return Number.isNaN;
  if (met.length === 1) return (value) => value === only || Number.isNaN(value);
  return (value) => met.includes(value) || Number.isNaN(value);
}

function rangeOf(
  numbers: ElementArray,
  noData: readonly number[],
  scale: number,
  offset: number,
): NumberRange {
  let low = Number.POSITIVE_INFINITY;
  let high = Number.NEGATIVE_INFINITY;
  for (const number of numbers) {
    if (!Number.isFinite(number) || noData.includes(number)) continue;
    const value = scale * number + offset;
    if (value < low) low = value;
    if (value > high) high = value;
  }
  return { low, high };
}
