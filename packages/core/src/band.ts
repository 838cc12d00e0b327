/**
 * Bands: how a detector weights wavelength. A band owns the monotone pair temperature ↔ radiance and its slope.
 *
 * L(T) = ∫ R(λ)·L_λ(λ, T) dλ with the responsivity R used as given, never renormalised.   [METHOD.md eq. 7–9]
 * Proven for any band inside 2–15 µm: temperature(radiance(T)) within 0.1 mK from −40 to 2000 °C and within 1 mK
 * from −60 to 3000 °C; radiance within 1e-10 relative, 150–3500 K. Asserted in test/band.test.ts.
 */
import { temperature as checkTemperature, finiteNumber, oneOf, plainObject, positive } from './check.js';
import { type Curve, plainAbscissa, product, type SpectralFunction, spectralFunction } from './curve.js';
import type {
  BandDescriptor,
  CalibratedDescriptor,
  Calibration,
  Detector,
  RadianceUnit,
  SampledDescriptor,
} from './descriptor.js';
import { MeasurementError } from './errors.js';
import { calibratedKernel, monochromaticKernel, quadratureKernel } from './kernel.js';
import { photonsPerJoule, planck } from './planck.js';
import { type Rule, wavelengthRule } from './quadrature.js';
import { type RadianceKernel, tabulated } from './table.js';
import { type AnyKelvin, highestTemperature, type Kelvin, lowestTemperature } from './units.js';

/**
 * How a detector weights wavelength. Made by {@link topHatBand}, {@link sampledBand}, {@link monochromaticBand},
 * {@link calibratedBand} or `weightedBy`. Frozen.
 */
export interface Band {
  readonly kind: BandDescriptor['kind'];
  /** The band as plain data. */
  readonly descriptor: BandDescriptor;
  /** Unit of `radiance`. */
  readonly radianceUnit: RadianceUnit;
  /** Temperatures the band can be evaluated at. [K] */
  readonly range: { readonly from: Kelvin; readonly to: Kelvin };
  /** Wavelength limits; undefined for a calibrated band. [µm] */
  readonly limits: { readonly from: number; readonly to: number } | undefined;
  /**
   * Radiance of a blackbody within the band.
   * @param temperature - [K], within `range`
   * @returns Radiance in `radianceUnit`.
   * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
   */
  radiance(temperature: AnyKelvin): number;
  /**
   * Temperature of the blackbody that gives this radiance: the inverse of `radiance`.
   * @param radiance - In `radianceUnit`.
   * @returns [K]. Never NaN: a radiance outside that of `range` throws.
   * @throws {MeasurementError} `wrong-type`, `not-finite`; `no-solution` when no blackbody within `range` gives it.
   */
  temperature(radiance: number): Kelvin;
  /**
   * Slope of the radiance with temperature.
   * @param temperature - [K], within `range`
   * @returns In `radianceUnit` per kelvin.
   * @throws {MeasurementError} as `radiance`.
   */
  slope(temperature: AnyKelvin): number;
  /**
   * Photons a blackbody sends within the band: ∫ R(λ)·L_λ·λ/(hc) dλ, R as the band uses it.
   * @param temperature - [K], within `range`
   * @returns [s⁻¹·m⁻²·sr⁻¹], for a single wavelength per µm
   * @throws {MeasurementError} as `radiance`; `unsupported` for a calibrated band, which knows no wavelength.
   */
  photonRadiance(temperature: AnyKelvin): number;
  /**
   * The band weighted by a curve over wavelength, R(λ)·curve(λ), not renormalised.
   * @param curve - Must cover the limits of the band.
   * @throws {MeasurementError} `out-of-range` when the curve does not cover the band; `unsupported` for a calibrated band.
   */
  weightedBy(curve: Curve): Band;
  /** The pair temperature ↔ radiance on bare numbers, exact, unchecked. */
  readonly exact: RadianceKernel;
  /** The same from a table, for frames: within 2 µK of `exact`. Built on first use. */
  readonly fast: RadianceKernel;
  /** The band's weight of a wavelength; undefined for a calibrated band. */
  readonly responsivity: SpectralFunction | undefined;
}

/**
 * A band that weights every wavelength between two limits alike and nothing outside.
 *
 * @param from - Lower limit. [µm], > 0
 * @param to - Upper limit. [µm], > from
 * @param options - `detector: 'photon'` multiplies R by λ/λ_mid, λ_mid the middle of the limits.
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`, `unknown-key`.
 * @example
 * topHatBand(8, 14).radiance(celsius(25)) // 53.39…
 */
export function topHatBand(from: number, to: number, options: { readonly detector?: Detector } = {}): Band {
  const { detector } = detectorOf(options, '', ['detector']);
  limit(from, 'from');
  if (limit(to, 'to') <= from) {
    throw new MeasurementError('out-of-range', {
      path: 'to',
      expected: `a limit above from = ${from} µm`,
      received: to,
    });
  }
  const flat: SpectralFunction = { breakpoints: [from, to], at: () => 1 };
  return spectralBand(withDetector(flat, detector), { kind: 'top-hat', from, to, ...detectorKey(detector) });
}

/**
 * A band given by its sampled responsivity: piecewise linear in the abscissa it is given in, zero outside.
 *
 * @param samples - `wavelength` [µm] or `wavenumber` [cm⁻¹], ascending (two alike make a step), and `responsivity`
 *   ≥ 0 in any unit; `detector: 'photon'` multiplies it by λ/λ_mid. Lists of equal length ≥ 2.
 * @throws {MeasurementError} `wrong-type`, `wrong-shape`, `missing-input`, `conflicting-inputs`, `out-of-range`.
 */
export function sampledBand(
  samples: { readonly responsivity: readonly number[]; readonly detector?: Detector } & (
    | { readonly wavelength: readonly number[] }
    | { readonly wavenumber: readonly number[] }
  ),
): Band {
  const response = spectralFunction(samples, '', 'responsivity', ['detector']);
  const detector = samples.detector === undefined ? 'energy' : oneOf(samples.detector, 'detector', detectors);
  const abscissa = plainAbscissa(samples);
  limit(response.breakpoints[0]!, 'wavelength' in abscissa ? 'wavelength' : 'wavenumber');
  limit(response.breakpoints.at(-1)!, 'wavelength' in abscissa ? 'wavelength' : 'wavenumber');
  const responsivity = [...samples.responsivity];
  const descriptor: SampledDescriptor = {
    kind: 'sampled',
    ...abscissa,
    responsivity,
    ...detectorKey(detector),
  };
  const band = spectralBand(withDetector(response, detector), descriptor);
  // Samples of 0, or a step whose only value above 0 has no width.
  if (band.exact.radiance(band.range.to) > 0) return band;
  throw new MeasurementError('out-of-range', {
    path: 'responsivity',
    expected: 'some value above 0 that spans an interval',
    received: responsivity,
  });
}

/**
 * A single wavelength. Its radiance is spectral, per micrometre.
 *
 * @param wavelength - [µm], > 0
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`.
 */
export function monochromaticBand(wavelength: number): Band {
  limit(wavelength, 'wavelength');
  const point: SpectralFunction = { breakpoints: [wavelength, wavelength], at: () => 1 };
  return spectralBand(point, { kind: 'monochromatic', wavelength });
}

/**
 * A band known by its calibration: signal as a formula of temperature. It carries no wavelengths, so curves over
 * wavelength cannot weight it; gray emissivity, air and windows can.
 *
 * @param calibration - `{ form: 'k1k2', k1, k2 }` or `{ form: 'sakuma-hattori', a, b, c }`.
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`, `unknown-key`.
 */
export function calibratedBand(calibration: Calibration): Band {
  const form = oneOf((calibration as { form?: unknown } | null)?.form, 'form', [
    'k1k2',
    'sakuma-hattori',
  ] as const);
  const keys = form === 'k1k2' ? ['k1', 'k2'] : ['a', 'b', 'c'];
  const record = plainObject(calibration, '', ['form', ...keys, 'radianceUnit', 'range']);
  for (const key of keys) {
    if (key === 'b') finiteNumber(record.b, 'b');
    else positive(record[key], key);
  }
  const radianceUnit =
    record.radianceUnit === undefined ? 'signal' : oneOf(record.radianceUnit, 'radianceUnit', radianceUnits);
  const given = record.range === undefined ? undefined : plainObject(record.range, 'range', ['from', 'to']);
  const range = {
    from: (given ? checkTemperature(given.from, 'range.from') : lowestTemperature) as Kelvin,
    to: (given ? checkTemperature(given.to, 'range.to') : highestTemperature) as Kelvin,
  };
  if (range.to <= range.from) {
    throw new MeasurementError('out-of-range', {
      path: 'range.to',
      expected: `above ${range.from} K`,
      received: range.to,
    });
  }
  if ('a' in calibration && !(calibration.a * range.from + calibration.b > 0)) {
    throw new MeasurementError('out-of-range', {
      path: 'range.from',
      expected: 'a·T + b above 0 µm·K from range.from on',
      received: range.from,
      hint: 'State the range the calibration holds for.',
    });
  }
  const exact = calibratedKernel(calibration, range.from, range.to);
  const descriptor: CalibratedDescriptor = {
    kind: 'calibrated',
    ...calibration,
    ...(given ? { range } : {}),
  };
  return finished(exact, exact, undefined, descriptor, radianceUnit, range, undefined);
}

/**
 * The band a descriptor describes: the inverse of `band.descriptor`.
 *
 * @throws {MeasurementError} as the function that makes the kind, and `unknown-key`, `out-of-range` for another kind.
 */
export function bandFromDescriptor(descriptor: BandDescriptor): Band {
  const kinds = ['top-hat', 'sampled', 'monochromatic', 'calibrated', 'weighted'] as const;
  const kind = oneOf((descriptor as { kind?: unknown } | null)?.kind, 'band.kind', kinds);
  const { kind: _kind, ...rest } = descriptor as unknown as Record<string, unknown>;
  switch (kind) {
    case 'top-hat': {
      const { from, to, ...options } = plainObject(rest, 'band', ['from', 'to', 'detector']);
      return topHatBand(from as number, to as number, options);
    }
    case 'sampled':
      return sampledBand(rest as unknown as Parameters<typeof sampledBand>[0]);
    case 'monochromatic':
      return monochromaticBand(plainObject(rest, 'band', ['wavelength']).wavelength as number);
    case 'calibrated':
      return calibratedBand(rest as unknown as Calibration);
    case 'weighted': {
      const { band, curve } = plainObject(rest, 'band', ['band', 'curve']);
      return bandFromDescriptor(band as BandDescriptor).weightedBy(curve as Curve);
    }
  }
}

/** Whether a value is a band made by this package. */
export function isBand(value: unknown): value is Band {
  return (
    typeof value === 'object' &&
    value !== null &&
    'descriptor' in value &&
    'exact' in value &&
    'weightedBy' in value
  );
}

const detectors = ['energy', 'photon'] as const;
const radianceUnits = ['W·m⁻²·sr⁻¹', 'W·m⁻²·sr⁻¹·µm⁻¹', 'signal'] as const;

/** The band with another responsivity over the same limits; the descriptor says how it came about. */
export function reweighted(band: Band, weight: SpectralFunction, descriptor: BandDescriptor): Band {
  if (band.limits === undefined || band.responsivity === undefined) {
    throw new MeasurementError('unsupported', {
      path: 'band',
      expected: 'a band with wavelengths where a curve weights it',
      received: 'a calibrated band',
      hint: 'Give emissivity and transmittance as numbers, or the responsivity of the band by sampledBand().',
    });
  }
  const { from, to } = band.limits;
  // 1e-12 forgives the rounding of limits that were turned from wavenumbers.
  if (weight.breakpoints[0]! > from * (1 + 1e-12) || weight.breakpoints.at(-1)! < to * (1 - 1e-12)) {
    throw new MeasurementError('out-of-range', {
      path: 'curve',
      expected: `a curve that covers the band, ${from}…${to} µm`,
      received: `${weight.breakpoints[0]}…${weight.breakpoints.at(-1)} µm`,
    });
  }
  const point = band.limits.from === band.limits.to;
  const joined = point ? pointwise(band.responsivity, weight) : product(band.responsivity, weight);
  return spectralBand(joined, descriptor);
}

function pointwise(a: SpectralFunction, b: SpectralFunction): SpectralFunction {
  return { breakpoints: a.breakpoints, at: (wavelength) => a.at(wavelength) * b.at(wavelength) };
}

function spectralBand(responsivity: SpectralFunction, descriptor: BandDescriptor): Band {
  const from = responsivity.breakpoints[0]!;
  const to = responsivity.breakpoints.at(-1)!;
  const range = { from: lowestTemperature as Kelvin, to: highestTemperature as Kelvin };
  if (from === to) {
    const rule = { node: Float64Array.of(from), weight: Float64Array.of(responsivity.at(from)) };
    const exact = monochromaticKernel(from, rule.weight[0]!, range.from, range.to);
    return finished(exact, exact, responsivity, descriptor, 'W·m⁻²·sr⁻¹·µm⁻¹', range, rule);
  }
  const rule = wavelengthRule(responsivity.breakpoints, responsivity.at);
  const exact = quadratureKernel(rule, range.from, range.to);
  return finished(exact, undefined, responsivity, descriptor, 'W·m⁻²·sr⁻¹', range, rule);
}

function finished(
  exact: RadianceKernel,
  fast: RadianceKernel | undefined,
  responsivity: SpectralFunction | undefined,
  descriptor: BandDescriptor,
  radianceUnit: RadianceUnit,
  range: { readonly from: Kelvin; readonly to: Kelvin },
  rule: Rule | undefined,
): Band {
  let table = fast;
  const band: Band = {
    kind: descriptor.kind,
    descriptor: Object.freeze(descriptor),
    radianceUnit,
    range: Object.freeze(range),
    limits:
      responsivity &&
      Object.freeze({ from: responsivity.breakpoints[0]!, to: responsivity.breakpoints.at(-1)! }),
    exact,
    responsivity,
    get fast() {
      table ??= tabulated(exact, range.from, range.to);
      return table;
    },
    radiance: (temperature) => exact.radiance(inRange(temperature, range)),
    slope: (temperature) => exact.slope(inRange(temperature, range)),
    temperature(radiance) {
      const solution = exact.temperature(finiteNumber(radiance, 'radiance'));
      if (Number.isNaN(solution)) throw noBlackbody(radiance, band);
      return solution as Kelvin;
    },
    photonRadiance(temperature) {
      const kelvin = inRange(temperature, range);
      if (rule === undefined) {
        throw new MeasurementError('unsupported', {
          path: 'band',
          expected: 'a band with wavelengths for a photon radiance',
          received: 'a calibrated band',
        });
      }
      let photons = 0;
      for (let i = 0; i < rule.node.length; i++) {
        photons += rule.weight[i]! * photonsPerJoule(rule.node[i]!) * planck(rule.node[i]!, kelvin);
      }
      return photons;
    },
    weightedBy: (curve) =>
      reweighted(band, spectralFunction(curve, 'curve'), {
        kind: 'weighted',
        band: descriptor,
        curve: { ...plainAbscissa(curve), value: [...curve.value] },
      }),
  };
  return Object.freeze(band);
}

function noBlackbody(radiance: number, band: Band): MeasurementError {
  const { from, to } = band.range;
  return new MeasurementError('no-solution', {
    path: 'radiance',
    expected: `a radiance of ${band.exact.radiance(from).toPrecision(4)}…${band.exact.radiance(to).toPrecision(4)} ${band.radianceUnit} (a blackbody of ${from}…${to} K)`,
    received: radiance,
  });
}

function inRange(value: unknown, range: { readonly from: number; readonly to: number }): number {
  const kelvin = checkTemperature(value, 'temperature');
  if (kelvin >= range.from && kelvin <= range.to) return kelvin;
  throw new MeasurementError('out-of-range', {
    path: 'temperature',
    expected: `a temperature the band is calibrated for, ${range.from}…${range.to} K`,
    received: value,
  });
}

/** Wavelengths of thermal radiation this library is made for. */
function limit(value: unknown, path: string): number {
  const wavelength = positive(value, path);
  if (wavelength >= 0.3 && wavelength <= 100) return wavelength;
  throw new MeasurementError('out-of-range', {
    path,
    expected: 'a wavelength of 0.3…100 µm',
    received: value,
    hint: 'Wavelengths are in micrometres (8 for 8 µm), wavenumbers in cm⁻¹ (1250 for 8 µm).',
  });
}

function detectorOf(options: unknown, path: string, keys: readonly string[]): { detector: Detector } {
  const { detector } = plainObject(options, path, keys);
  return { detector: detector === undefined ? 'energy' : oneOf(detector, 'detector', detectors) };
}

function detectorKey(detector: Detector): { detector?: Detector } {
  return detector === 'photon' ? { detector } : {};
}

/** A photon detector answers in proportion to wavelength: R·λ/λ_mid.   [METHOD.md eq. 8] */
function withDetector(response: SpectralFunction, detector: Detector): SpectralFunction {
  if (detector === 'energy') return response;
  const middle = (response.breakpoints[0]! + response.breakpoints.at(-1)!) / 2;
  return {
    breakpoints: response.breakpoints,
    at: (wavelength) => (response.at(wavelength) * wavelength) / middle,
  };
}
