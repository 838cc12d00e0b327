/**
 * Air as a layer: its transmittance and emission from temperature, humidity and distance, by a 25 cm⁻¹ band model.
 *
 * Lines of H₂O, CO₂, N₂O, CO, CH₄ and O₃ by Malkmus' statistical model (Malkmus 1967), the water continuum, the
 * N₂ continuum, and haze by visibility (Koschmieder 1924; Kruse et al. 1962).   [METHOD.md eq. 21–24]
 * Valid from 650 to 5000 cm⁻¹ (2…15.38 µm), 243.15…333.15 K, 60…105 kPa, to 2 km. Standard uncertainty of a band
 * transmittance max(0.0015, 0.06·(1 − τ)); of a single 25 cm⁻¹ bin up to 0.12. Asserted in test/humid-air.test.ts.
 *
 * A band model's transmittances do not multiply, so stretches of air on one path add their absorber amounts: a
 * stretch answers τ(nearer air and itself)/τ(nearer air), bin by bin.
 */

import type { Band } from './band.js';
import type { Caution } from './cautions.js';
import { finiteNumber, plainObject, positive, ratio } from './check.js';
import type { Curve } from './curve.js';
import { compact, type HumidAirDocument } from './document.js';
import { MeasurementError } from './errors.js';
import { binWidth, continuum, firstBin, type GasRow, gases } from './humid-air-data.js';
import { vapourPressure } from './humidity.js';
import type { Layer, LayerInBand } from './layer.js';
import type { AnyKelvin } from './units.js';

/** What {@link humidAir} takes. */
export interface HumidAirInput {
  /** Air temperature. [K], 243.15…333.15 */
  readonly temperature: AnyKelvin;
  /** Relative humidity over liquid water. 0…1 */
  readonly relativeHumidity: number;
  /** Length of the path through this air. [m], 0…2000 */
  readonly distance: number;
  /** Air pressure; 101325 when left out. [Pa], 60000…105000 */
  readonly pressure?: number;
  /** Amount fraction of carbon dioxide; 400e-6 when left out. 300e-6…1000e-6 */
  readonly carbonDioxide?: number;
  /** Meteorological visibility; no haze when left out. [km], ≥ 6 */
  readonly visibility?: number;
}

/** A stretch of air with its absorbers. */
export interface HumidAir extends Layer {
  readonly kind: 'air';
  readonly temperature: AnyKelvin;
  /** Exponents of the stretch, by bin. Added up with those of other stretches. */
  readonly absorption: Absorption;
  /** Transmittance over wavenumber, one value a 25 cm⁻¹ bin. */
  spectralTransmittance(): Curve;
  /**
   * Transmittance in a band, weighted by its responsivity and by a blackbody seen through the air.
   * @param band - Within 2…15.38 µm.
   * @param sourceTemperature - [K]
   * @throws {MeasurementError} `out-of-range` when the band reaches beyond the model; `unsupported` for a calibrated one.
   */
  bandTransmittance(band: Band, sourceTemperature: AnyKelvin): number;
}

/** Sums over a stretch, by gas and bin, that add for stretches on one path. */
export interface Absorption {
  /** Σ k·u of the lines, gas after gas. */
  readonly strength: Float64Array;
  /** Σ β·k·u: β of a mixture is its mean weighted by k·u. */
  readonly shape: Float64Array;
  /** Exponents of what has no line structure: gray wings, continua, haze. */
  readonly smooth: Float64Array;
}

const referenceTemperature = 296;
const referencePressure = 101_325;
const gasConstant = 8.31446261815324;
/** How much better water broadens its own lines than air does. */
const selfBroadening = 4;
const bins: number = continuum.length;
/** Largest haze extinction on the path that is computed rather than measured. */
const largestHaze = 0.05;

/**
 * A stretch of humid air as a layer of the path.
 *
 * @throws {MeasurementError} `wrong-type`, `not-finite`, `unknown-key`; `out-of-range` outside the validity of the
 *   model, for a visibility below 6 km and for a haze of more than 0.05 in extinction: give a measured transmittance
 *   with `air({ transmittance, temperature })` there.
 */
export function humidAir(input: HumidAirInput): HumidAir {
  const keys = ['temperature', 'relativeHumidity', 'distance', 'pressure', 'carbonDioxide', 'visibility'];
  plainObject(input, 'humidAir', keys);
  const temperature = within(input.temperature, 'temperature', 243.15, 333.15, 'K') as AnyKelvin;
  const humidity = ratio(input.relativeHumidity, 'humidAir.relativeHumidity');
  const distance = within(input.distance, 'distance', 0, 2000, 'm');
  const pressure = within(input.pressure ?? referencePressure, 'pressure', 60_000, 105_000, 'Pa');
  const carbonDioxide = within(input.carbonDioxide ?? 400e-6, 'carbonDioxide', 300e-6, 1000e-6, '');
  const haze = input.visibility === undefined ? undefined : hazeOf(input.visibility, distance);
  const vapour = vapourPressure(humidity, temperature);
  const absorption = absorptionOf(temperature, vapour, pressure, carbonDioxide, distance, haze);
  const { temperature: _temperature, ...rest } = input;
  // A budget and its cautions ask for the same band twice: the curve and the band it weights are kept.
  let curve: Curve | undefined;
  const alone = (): Curve => {
    curve ??= stepCurve(transmittanceOf([absorption]));
    return curve;
  };
  const weightedBands = new WeakMap<Band, Band>();
  const through = (band: Band): Band => {
    const weighted = weightedBands.get(band) ?? band.weightedBy(alone());
    weightedBands.set(band, weighted);
    return weighted;
  };
  const layer: HumidAir = {
    kind: 'air',
    temperature,
    reflectance: 0,
    mirroredTemperature: undefined,
    pathRadiance: undefined,
    halfWidths: Object.freeze({}),
    absorption,
    document: compact({
      kind: 'humid-air',
      temperature: { kelvin: temperature },
      ...rest,
    }) as HumidAirDocument,
    checkBand: (band) => refuseThickHaze(band, haze),
    inBand: (band, source) => inBand(band, layer.bandTransmittance(band, source), haze),
    spectralTransmittance: alone,
    bandTransmittance: (band, source) => through(band).radiance(source) / band.radiance(source),
    transmittanceBehind(nearer) {
      const others = nearer.filter(isHumidAir).map((stretch) => stretch.absorption);
      const before = transmittanceOf(others);
      const together = transmittanceOf([...others, absorption]);
      // Where the nearer air lets nothing through, what this stretch would do is not seen.
      return stepCurve(
        together.map((value, bin) => (before[bin]! > 0 ? Math.min(1, value / before[bin]!) : 0)),
      );
    },
  };
  return Object.freeze(layer);
}

/**
 * Standard uncertainty of a band transmittance of the model.
 *
 * @param transmittance - As the model gives it. 0…1
 * @returns max(0.0015, 0.06·(1 − τ)); from 100 held-out conditions, see docs/SOURCES.md.
 */
export function airStandardUncertainty(transmittance: number): number {
  return Math.max(0.0015, 0.06 * (1 - ratio(transmittance, 'transmittance')));
}

/** Fewer bins than this make a narrow filter: the model is fitted to bands, single bins err by up to 0.12. */
const narrowBins = 4;
/** Largest error of a single bin. */
const binError = 0.12;

/** How good the model is in a band. */
function inBand(
  band: Band,
  transmittance: number,
  haze: ((wavelength: number) => number) | undefined,
): LayerInBand {
  const { from, to } = band.limits ?? { from: 2, to: 15 };
  const width = 1e4 / from - 1e4 / to;
  const count = width / binWidth;
  const model = airStandardUncertainty(transmittance);
  // Errors of single bins are taken as independent of each other; a uniform one of ±0.12 has u = 0.12/√3.
  const narrow =
    count < narrowBins
      ? Math.max(model, (binError / Math.sqrt(3) / Math.sqrt(Math.max(1, count))) * (1 - transmittance))
      : model;
  const hazeOfBand = haze ? transmittance * haze((from + to) / 2) : 0;
  const standardUncertainty = Math.hypot(narrow, hazeOfBand);
  const cautions: Caution[] =
    count < narrowBins
      ? [
          {
            code: 'narrow-band',
            message: `The band is ${width.toFixed(0)} cm⁻¹ wide; the air model has bins of ${binWidth} cm⁻¹. Its transmittance is uncertain by ${standardUncertainty.toFixed(3)}.`,
            remedy: 'Measure the transmittance of the path, or keep the path short.',
          },
        ]
      : [];
  const origin = `air band model${haze ? ', haze by visibility with 100 %' : ''}`;
  return { uncertainties: { transmittance: { standardUncertainty, origin } }, cautions };
}

/** A haze of more than 0.05 in the band is not computed: the law was made for the visible. */
function refuseThickHaze(band: Band, haze: ((wavelength: number) => number) | undefined): void {
  const thickest = haze && band.limits ? haze(band.limits.from) : 0;
  if (thickest <= largestHaze) return;
  throw new MeasurementError('out-of-range', {
    path: 'humidAir.visibility',
    expected: `a haze of ${largestHaze} at most in the band`,
    received: thickest,
    hint: 'Measure the transmittance and write air({ transmittance, temperature }).',
  });
}

/** Whether a layer is computed air. */
export function isHumidAir(layer: Layer): layer is HumidAir {
  return 'absorption' in layer;
}

/** Amounts and exponents of one stretch.   [METHOD.md eq. 21–23] */
function absorptionOf(
  temperature: number,
  vapour: number,
  pressure: number,
  carbonDioxide: number,
  distance: number,
  haze: ((wavelength: number) => number) | undefined,
): Absorption {
  const t = referenceTemperature / temperature - 1;
  const warmth = referenceTemperature / temperature;
  const strength = new Float64Array(gases.length * bins);
  const shape = new Float64Array(gases.length * bins);
  const smooth = new Float64Array(bins);
  const molesOf = (partialPressure: number): number =>
    (partialPressure / (gasConstant * temperature)) * distance;
  gases.forEach(({ name, amountFraction, rows }, gas) => {
    const water = name === 'H2O';
    const fraction = name === 'CO2' ? carbonDioxide : amountFraction;
    const amount = molesOf(water ? vapour : fraction * pressure);
    const broadening = (pressure + (water ? selfBroadening * vapour : 0)) / referencePressure;
    for (const row of rows) {
      const bin = (row.edge - firstBin) / binWidth;
      const strong = row.k0 * Math.exp(row.a1 * t + row.a2 * t * t) * amount;
      strength[gas * bins + bin] = strong;
      shape[gas * bins + bin] = strong * row.beta0 * broadening * warmth ** row.m;
      smooth[bin]! += row.g0 * broadening * Math.exp(row.ag * t) * amount;
    }
  });
  const water = molesOf(vapour);
  continuum.forEach(([self, power, foreign, nitrogen], bin) => {
    smooth[bin]! +=
      (self * warmth * (vapour / referencePressure) * warmth ** power +
        foreign * warmth * ((pressure - vapour) / referencePressure)) *
        water +
      (nitrogen * 0.781 * (pressure / referencePressure) ** 2 * (273.15 / temperature) ** 1.5 * distance) /
        1000;
    if (haze) smooth[bin]! += haze(1e4 / (firstBin + (bin + 0.5) * binWidth));
  });
  return { strength, shape, smooth };
}

/** Transmittance of stretches together, by bin.   [METHOD.md eq. 21] */
function transmittanceOf(stretches: readonly Absorption[]): Float64Array {
  const transmittance = new Float64Array(bins).fill(1);
  if (stretches.length === 0) return transmittance;
  for (let bin = 0; bin < bins; bin++) {
    let smooth = 0;
    for (const stretch of stretches) smooth += stretch.smooth[bin]!;
    transmittance[bin] = Math.exp(-smooth);
  }
  gases.forEach(({ rows }, gas) => {
    for (const row of rows) {
      const bin = (row.edge - firstBin) / binWidth;
      let strength = 0;
      let shape = 0;
      for (const stretch of stretches) {
        strength += stretch.strength[gas * bins + bin]!;
        shape += stretch.shape[gas * bins + bin]!;
      }
      if (strength > 1e-200) transmittance[bin]! *= malkmus(strength, shape / strength, row);
    }
  });
  return transmittance;
}

/** (1 − f)·exp(−(β/π)(√(1 + 2π·ku/β) − 1)) + f, f the part of the bin without lines (Malkmus 1967). */
function malkmus(strength: number, beta: number, { f }: GasRow): number {
  // The same as (β/π)(√(1 + x) − 1), x = 2π·ku/β, written without the difference that cancels for a small x.
  const exponent = (2 * strength) / (1 + Math.sqrt(1 + (2 * Math.PI * strength) / beta));
  return (1 - f) * Math.exp(-exponent) + f;
}

/** Haze exponent over wavelength: σ = (3.912/V)(0.55 µm/λ)^q per km.   [METHOD.md eq. 24] */
function hazeOf(visibility: unknown, distance: number): (wavelength: number) => number {
  const kilometres = positive(visibility, 'humidAir.visibility');
  const hint = 'Measure the transmittance and write air({ transmittance, temperature }).';
  if (kilometres < 6) {
    throw new MeasurementError('out-of-range', {
      path: 'humidAir.visibility',
      expected: 'a visibility of 6 km or more: in fog the law does not hold in the infrared',
      received: visibility,
      hint,
    });
  }
  const power = kilometres > 50 ? 1.6 : 1.3;
  return (wavelength) => ((3.912 / kilometres) * (0.55 / wavelength) ** power * distance) / 1000;
}

/** A curve with one value a bin, steps between them. */
function stepCurve(values: Float64Array): Curve {
  const wavenumber: number[] = [];
  const value: number[] = [];
  values.forEach((transmittance, bin) => {
    wavenumber.push(firstBin + bin * binWidth, firstBin + (bin + 1) * binWidth);
    value.push(transmittance, transmittance);
  });
  return { wavenumber, value };
}

function within(value: unknown, key: string, from: number, to: number, unit: string): number {
  const number = finiteNumber(value, `humidAir.${key}`);
  if (number >= from && number <= to) return number;
  throw new MeasurementError('out-of-range', {
    path: `humidAir.${key}`,
    expected: `${from}…${to} ${unit}`.trim(),
    received: value,
    ...(key === 'temperature' && number > -40 && number < 61
      ? { hint: `Did you mean celsius(${number})?` }
      : {}),
  });
}
