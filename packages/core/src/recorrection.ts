/**
 * Recorrection: a temperature an instrument stored after a correction of its own is taken back with the recorded
 * settings, and corrected anew with the actual conditions. Same band on both sides.   [METHOD.md eq. 16]
 */
import type { Band } from './band.js';
import { temperature } from './check.js';
import {
  type Conditions,
  checkedConditions,
  checkedRecorded,
  type RecordedConditions,
  type RecordedSettings,
} from './conditions.js';
import { type FrameInput, type FrameOutput, type SurfaceFrame, surfaceFrameOf } from './frame.js';
import {
  checkedReading,
  type Engine,
  engineOf,
  placesOf,
  readingOf,
  sensitivitiesAt,
  surfaceOf,
} from './model.js';
import type { Pixel } from './scalar.js';
import type { Sensitivities } from './sensitivity.js';
import type { AnyKelvin, Kelvin } from './units.js';

/** A temperature a recorrection takes: a plain `Kelvin`, recorded by contract, or one that says so. */
export type RecordedKelvin = Kelvin | Kelvin<'recorded temperature'>;

/** Recorded settings and actual conditions compiled once; frozen. Made by {@link recorrection}. */
export interface Recorrection {
  readonly reads: 'recorded temperature';
  readonly conditions: Conditions;
  readonly recorded: RecordedSettings;
  readonly band: Band;
  readonly targetBand: Band;
  /** Names of the inputs; those of the recorded settings begin with `recorded.` */
  readonly inputs: readonly string[];
  readonly needsPixel: boolean;
  /** @internal */
  readonly engine: Engine;
  /**
   * True temperature of the surface for a recorded temperature.
   * @param recorded - What the instrument stored. [K]
   * @throws {MeasurementError} as `MeasurementModel.surfaceTemperature`.
   */
  surfaceTemperature(recorded: RecordedKelvin, pixel?: Pixel): Kelvin<'surface temperature'>;
  /**
   * What the instrument would have stored for a surface at this temperature: the inverse.
   * @throws {MeasurementError} `no-solution` when the recorded settings leave nothing for the target.
   */
  recordedTemperature(surface: AnyKelvin, pixel?: Pixel): Kelvin<'recorded temperature'>;
  /**
   * Sensitivity of the surface temperature to `recorded`, to the recorded settings and to every actual input.
   * @throws {MeasurementError} as `surfaceTemperature`.
   */
  sensitivities(recorded: RecordedKelvin, pixel?: Pixel): Sensitivities;
  /**
   * True surface temperatures of a frame of recorded temperatures; as `MeasurementModel.surfaceFrame`.
   * @throws {MeasurementError} as there.
   */
  surfaceFrame(frame: FrameInput, out?: FrameOutput): SurfaceFrame;
  /**
   * The recorrection at one pixel, where inputs are maps.
   * @throws {MeasurementError} `out-of-range` for a pixel outside a map or a bad cell.
   */
  at(pixel: Pixel): Recorrection;
}

/**
 * Compiles a recorrection.
 *
 * @param recorded - Settings the instrument applied: exact numbers it was told. Its air is the transmittance it
 *   applied; without that number say 1, or give an interval, which enters the budget.
 * @param actual - The conditions as they were. Same band.
 * @throws {MeasurementError} as `measurementModel`; `wrong-band` when the bands differ.
 * @example
 * recorrection({ emissivity: 0.95, reflectedApparentTemperature: celsius(20) }, conditions).surfaceTemperature(celsius(64))
 */
export function recorrection(recorded: RecordedConditions, actual: Conditions): Recorrection {
  const conditions = checkedConditions(actual);
  const settings = checkedRecorded(recorded, conditions.band);
  return recorrectionOf(engineOf(conditions, settings), settings, undefined);
}

function recorrectionOf(engine: Engine, settings: RecordedSettings, fixed: Pixel | undefined): Recorrection {
  const { at, needsPixel } = placesOf(engine, fixed);
  const names = engine.equation.inputs.map((input) => input.name);
  const recordedNames = engine.recorded?.equation.inputs.map((input) => `recorded.${input.name}`) ?? [];
  return Object.freeze({
    reads: 'recorded temperature' as const,
    conditions: engine.conditions,
    recorded: settings,
    band: engine.equation.band,
    targetBand: engine.equation.targetBand,
    inputs: Object.freeze(['recorded', ...recordedNames, ...names]),
    needsPixel,
    engine,
    surfaceTemperature: (recorded, pixel) => surfaceOf(at(pixel), checkedReading(recorded, engine.reads)),
    recordedTemperature: (surface, pixel) =>
      readingOf(at(pixel), temperature(surface, 'surface')) as Kelvin<'recorded temperature'>,
    sensitivities: (recorded, pixel) => sensitivitiesAt(at(pixel), checkedReading(recorded, engine.reads)),
    surfaceFrame: (frame, out) => surfaceFrameOf(engine, frame, out),
    at: (pixel) => recorrectionOf(engine, settings, pixel),
  } satisfies Recorrection);
}
