/**
 * A quantity sampled over wavelength or wavenumber: responsivity, emissivity, transmittance, reflectance.
 *
 * Linear between samples **in the abscissa it was given in**. Two samples at one abscissa make a step.
 */
import { numberList, plainObject } from './check.js';
import { MeasurementError } from './errors.js';
import { wavelengthFromWavenumber, wavenumberFromWavelength } from './units.js';

/** A sampled ratio over wavelength in micrometres, or over wavenumber in cm⁻¹. Values 0…1. */
export type Curve =
  | { readonly wavelength: readonly number[]; readonly value: readonly number[] }
  | { readonly wavenumber: readonly number[]; readonly value: readonly number[] };

/** A function of wavelength that is smooth between its breakpoints. */
export interface SpectralFunction {
  /** Wavelengths between which `at` is smooth, ascending, limits included. [µm] */
  readonly breakpoints: readonly number[];
  /** Value at a wavelength within the limits. */
  at(wavelength: number): number;
}

/** Whether a value has the shape of a {@link Curve}. */
export function isCurve(value: unknown): value is Curve {
  return (
    typeof value === 'object' &&
    value !== null &&
    'value' in value &&
    ('wavelength' in value || 'wavenumber' in value)
  );
}

/**
 * Checks samples and makes a function of wavelength of them.
 *
 * @param valueKey - What the values are called: `value` for a curve, `responsivity` for a band.
 * @throws {MeasurementError} `wrong-type`, `missing-input`, `conflicting-inputs`, `wrong-shape`, `out-of-range`.
 */
export function spectralFunction(
  samples: unknown,
  path: string,
  valueKey: 'value' | 'responsivity' = 'value',
  otherKeys: readonly string[] = [],
): SpectralFunction {
  const record = plainObject(samples, path, ['wavelength', 'wavenumber', valueKey, ...otherKeys]);
  const at = (key: string): string => (path === '' ? key : `${path}.${key}`);
  if ((record.wavelength === undefined) === (record.wavenumber === undefined)) {
    throw new MeasurementError(record.wavelength === undefined ? 'missing-input' : 'conflicting-inputs', {
      path: at('wavelength'),
      expected: 'exactly one of wavelength [µm] and wavenumber [cm⁻¹]',
      received: record,
    });
  }
  const key = record.wavelength === undefined ? 'wavenumber' : 'wavelength';
  const abscissa = numberList(record[key], at(key));
  const value = numberList(record[valueKey], at(valueKey));
  if (abscissa.length !== value.length || abscissa.length < 2) {
    throw new MeasurementError('wrong-shape', {
      path: at(valueKey),
      expected: `as many values as ${key}s, at least 2`,
      received: `${value.length} for ${abscissa.length}`,
    });
  }
  abscissa.forEach((x, index) => {
    const previous = abscissa[index - 1] ?? 0;
    const isThird = index >= 2 && x === previous && x === abscissa[index - 2];
    if (x > 0 && x >= previous && !isThird) return;
    throw new MeasurementError('out-of-range', {
      path: `${at(key)}[${index}]`,
      expected: `positive, ascending ${key}s, two alike at most (a step)`,
      received: x,
    });
  });
  // A responsivity is used as given, in whatever unit; every other curve is a ratio.
  const highest = valueKey === 'responsivity' ? Number.POSITIVE_INFINITY : 1;
  value.forEach((y, index) => {
    if (y >= 0 && y <= highest) return;
    throw new MeasurementError('out-of-range', {
      path: `${at(valueKey)}[${index}]`,
      expected: highest === 1 ? '0 ≤ value ≤ 1' : 'responsivity ≥ 0',
      received: y,
      ...(y > 1 && y <= 100 ? { hint: `Write ${y / 100} for ${y} %.` } : {}),
    });
  });
  if (abscissa[0] === abscissa.at(-1)) {
    throw new MeasurementError('out-of-range', {
      path: at(key),
      expected: `${key}s that span an interval`,
      received: abscissa,
    });
  }
  const breakpoints = key === 'wavelength' ? [...abscissa] : abscissa.map(wavelengthFromWavenumber).reverse();
  const interpolate = linear(abscissa, value);
  return {
    breakpoints: [...new Set(breakpoints)],
    at:
      key === 'wavelength'
        ? interpolate
        : (wavelength: number): number => interpolate(wavenumberFromWavelength(wavelength)),
  };
}

/** The abscissa of checked samples as a plain list of its own, which the caller's later changes do not reach. */
export function plainAbscissa(samples: {
  readonly wavelength?: readonly number[];
  readonly wavenumber?: readonly number[];
}): { readonly wavelength: readonly number[] } | { readonly wavenumber: readonly number[] } {
  const { wavelength, wavenumber = [] } = samples;
  return wavelength === undefined ? { wavenumber: [...wavenumber] } : { wavelength: [...wavelength] };
}

/** The product of two functions over the part they share; both must be smooth between the merged breakpoints. */
export function product(a: SpectralFunction, b: SpectralFunction): SpectralFunction {
  const from = Math.max(a.breakpoints[0]!, b.breakpoints[0]!);
  const to = Math.min(a.breakpoints.at(-1)!, b.breakpoints.at(-1)!);
  const inside = [...a.breakpoints, ...b.breakpoints].filter((x) => x > from && x < to);
  return {
    breakpoints: [from, ...[...new Set(inside)].sort((x, y) => x - y), to],
    at: (wavelength) => a.at(wavelength) * b.at(wavelength),
  };
}

/** A function with another value at each wavelength and the same breakpoints. */
export function mapped(source: SpectralFunction, change: (value: number) => number): SpectralFunction {
  return { breakpoints: source.breakpoints, at: (wavelength) => change(source.at(wavelength)) };
}

/** Piecewise-linear interpolation; held constant outside, where callers never ask but for rounding. */
function linear(x: readonly number[], y: readonly number[]): (at: number) => number {
  return (at) => {
    let low = 0;
    let high = x.length - 1;
    if (at <= x[0]!) return y[0]!;
    if (at >= x[high]!) return y[high]!;
    while (high - low > 1) {
      const middle = (low + high) >> 1;
      if (x[middle]! <= at) low = middle;
      else high = middle;
    }
    const share = (at - x[low]!) / (x[high]! - x[low]!);
    return y[low]! + share * (y[high]! - y[low]!);
  };
}
