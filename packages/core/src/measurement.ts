/**
 * From a reading to the surface: the central calls.
 *
 * Conditions are compiled once into a frozen model; `surfaceTemperature` is the same for one reading.
 * Governing: ISO 18434-1 and ASTM E1933 for the terms; the equation is METHOD.md eq. 10–13. A spot throws when it
 * has no answer, a frame writes NaN and says why.
 */
import type { Band } from './band.js';
import { temperature } from './check.js';
import { type Conditions, checkedConditions } from './conditions.js';
import { type FrameInput, type FrameOutput, type SurfaceFrame, surfaceFrameOf } from './frame.js';
import type { RadianceTerm } from './measurement-equation.js';
import {
  checkedReading,
  type Engine,
  engineOf,
  placesOf,
  readingOf,
  sensitivitiesAt,
  surfaceOf,
  termsAt,
} from './model.js';
import type { Pixel } from './scalar.js';
import type { Sensitivities } from './sensitivity.js';
import type { AnyKelvin, Kelvin } from './units.js';

/** A temperature a correction takes: a plain `Kelvin`, apparent by contract, or one that says so. */
export type ApparentKelvin =
  | Kelvin<'apparent temperature' | undefined>
  | Kelvin<'apparent temperature'>
  | Kelvin;

/** What a model with numbers, or a model at one pixel, answers. */
export interface ModelAtPoint {
  /** Gain of the affine map of radiance. L_instrument = gain · targetBand.radiance(T) + offset */
  readonly gain: number;
  /** Offset of the affine map. [unit of the band] */
  readonly offset: number;
}

/** Conditions compiled once; frozen. Made by {@link measurementModel}. */
export interface MeasurementModel extends ModelAtPoint {
  readonly reads: 'apparent temperature';
  readonly conditions: Conditions;
  readonly band: Band;
  /** The band weighted by every curve over wavelength between target and detector; the band itself without such. */
  readonly targetBand: Band;
  /** Names of the inputs, as budget, sensitivities and errors use them. */
  readonly inputs: readonly string[];
  /** Whether an input is a map, so that answers for one reading need a pixel. */
  readonly needsPixel: boolean;
  /** @internal */
  readonly engine: Engine;
  /**
   * True temperature of the surface for an apparent temperature: the inverse of `apparentTemperature`.
   * Within 0.1 mK of quadrature from −40 to 2000 °C, 1 mK from −60 to 3000 °C.
   * @param apparent - What the instrument shows. [K]
   * @param pixel - Needed only where an input is a map.
   * @returns [K], −60…3000 °C
   * @throws {MeasurementError} `no-solution` when surroundings and path send more than was seen, `out-of-range`,
   *   `already-corrected`, `wrong-quantity`, `needs-pixel`, `wrong-type`, `not-finite`.
   */
  surfaceTemperature(apparent: ApparentKelvin, pixel?: Pixel): Kelvin<'surface temperature'>;
  /**
   * What the instrument would show for a surface at this temperature.
   * @param surface - True temperature. [K], 150…3500 K
   * @returns Apparent temperature. [K]
   * @throws {MeasurementError} `wrong-type`, `not-finite`, `out-of-range`, `needs-pixel`, `no-solution`.
   */
  apparentTemperature(surface: AnyKelvin, pixel?: Pixel): Kelvin<'apparent temperature'>;
  /**
   * Sensitivity of the surface temperature to the reading (`apparent`) and to every input, analytic.
   * For a curve: to a shift of the whole curve.
   * @param apparent - What the instrument shows. [K]
   * @returns By input name. [K per unit of the input]
   * @throws {MeasurementError} as `surfaceTemperature`.
   */
  sensitivities(apparent: ApparentKelvin, pixel?: Pixel): Sensitivities;
  /**
   * The parts of the radiance at the instrument for this reading; they add up to the whole.
   * @throws {MeasurementError} as `surfaceTemperature`.
   */
  radianceTerms(apparent: ApparentKelvin, pixel?: Pixel): readonly RadianceTerm[];
  /**
   * True surface temperatures of a frame of apparent temperatures. [K]
   * @param frame - View (row, column) or (…, row, column) of apparent temperature, or `{ array, quantity, unit }`.
   * @param out - Earlier result or a float32 view to write to; may be the input itself.
   * @returns float32 temperature and uint8 flags of the input's shape, NaN where a flag says why, and counts.
   * @throws {MeasurementError} `wrong-type`, `wrong-shape`, `already-corrected`, `wrong-quantity`; `out-of-range`
   *   when not one finite pixel is in kelvin.
   */
  surfaceFrame(frame: FrameInput, out?: FrameOutput): SurfaceFrame;
  /**
   * The model at one pixel, where inputs are maps.
   * @throws {MeasurementError} `out-of-range` for a pixel outside a map or a bad cell.
   */
  at(pixel: Pixel): MeasurementModel;
}

/**
 * Compiles conditions into a model: once, then for every reading and frame.
 *
 * @throws {MeasurementError} with the path of the input at fault: `missing-input`, `conflicting-inputs`,
 *   `unknown-key`, `wrong-type`, `not-finite`, `out-of-range`, `unsupported`.
 * @example
 * const model = measurementModel({ band: topHatBand(8, 14), emissivity: 0.86, reflectedApparentTemperature: celsius(21) });
 * toCelsius(model.surfaceTemperature(celsius(62.4))); // 68.06…
 */
export function measurementModel(conditions: Conditions): MeasurementModel {
  return modelOf(engineOf(checkedConditions(conditions)), undefined);
}

/**
 * True temperature of a surface, from one reading.
 *
 * @param apparent - What the instrument shows with its emissivity set to 1 and no path: apparent temperature. [K]
 * @param conditions - Band, emissivity, reflected apparent temperature, and what is on the path.
 * @returns [K], −60…3000 °C, within 0.1 mK of quadrature from −40 to 2000 °C
 * @throws {MeasurementError} as {@link measurementModel} and `MeasurementModel.surfaceTemperature`.
 */
export function surfaceTemperature(
  apparent: ApparentKelvin,
  conditions: Conditions,
): Kelvin<'surface temperature'> {
  return measurementModel(conditions).surfaceTemperature(apparent);
}

/**
 * What the instrument would show for a surface at this temperature: the inverse of {@link surfaceTemperature}.
 *
 * @param surface - True temperature. [K]
 * @throws {MeasurementError} as {@link measurementModel}.
 */
export function apparentTemperature(
  surface: AnyKelvin,
  conditions: Conditions,
): Kelvin<'apparent temperature'> {
  return measurementModel(conditions).apparentTemperature(surface);
}

function modelOf(engine: Engine, fixed: Pixel | undefined): MeasurementModel {
  const { at, needsPixel } = placesOf(engine, fixed);
  return Object.freeze({
    reads: 'apparent temperature' as const,
    conditions: engine.conditions,
    band: engine.equation.band,
    targetBand: engine.equation.targetBand,
    inputs: Object.freeze(['apparent', ...engine.equation.inputs.map((input) => input.name)]),
    needsPixel,
    engine,
    get gain() {
      return at(undefined).actual.gain;
    },
    get offset() {
      return at(undefined).actual.offset;
    },
    surfaceTemperature: (apparent, pixel) => surfaceOf(at(pixel), checkedReading(apparent, engine.reads)),
    apparentTemperature: (surface, pixel) =>
      readingOf(at(pixel), temperature(surface, 'surface')) as Kelvin<'apparent temperature'>,
    sensitivities: (apparent, pixel) => sensitivitiesAt(at(pixel), checkedReading(apparent, engine.reads)),
    radianceTerms(apparent, pixel) {
      const here = at(pixel);
      return termsAt(here, surfaceOf(here, checkedReading(apparent, engine.reads)));
    },
    surfaceFrame: (frame, out) => surfaceFrameOf(engine, frame, out),
    at: (pixel) => modelOf(engine, pixel),
  } satisfies MeasurementModel);
}
