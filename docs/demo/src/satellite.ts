/**
 * A real scene seen by a two-band long-wave radiometer in orbit: counts → radiance → brightness temperature →
 * surface temperature.
 *
 * Emissivity, transmittance, path and down-welling radiance are assumed values with generous uncertainties; nothing
 * is adjusted to make the two bands agree. The difference is printed whatever it is.
 */
import { readFrames } from '@graybody/arrays';
import {
  apparentFrame,
  type Band,
  type Conditions,
  calibratedBand,
  kelvin,
  layer,
  type MeasurementResult,
  measurementModel,
  measurementResult,
  type SurfaceFrame,
  type Uncertainties,
  type View,
} from '@graybody/core';
import { fixture, fixtureJson } from './files.js';

interface Assumed {
  readonly value: number;
  readonly standardUncertainty: number;
  readonly origin: string;
}

interface SceneBand {
  readonly name: string;
  readonly file: string;
  readonly scale: number;
  readonly offset: number;
  readonly k1: number;
  readonly k2: number;
  readonly emissivity: Assumed;
  readonly transmittance: Assumed;
  readonly pathRadiance: Assumed;
  readonly downwellingRadiance: Assumed;
  readonly apparentTemperature: { readonly standardUncertainty: number };
}

/** One band of the scene, corrected. */
export interface SatelliteBand {
  readonly name: string;
  readonly brightness: View<Float32Array>;
  readonly surface: SurfaceFrame;
  readonly meanBrightness: number;
  readonly meanSurface: number;
  /** Result for the mean brightness temperature, with its budget. */
  readonly result: MeasurementResult;
}

/** Corrects both bands of the scene. */
export async function satelliteScene(): Promise<readonly SatelliteBand[]> {
  const { bands } = fixtureJson('satellite/scene.json') as { bands: readonly SceneBand[] };
  return Promise.all(bands.map(correctBand));
}

async function correctBand(scene: SceneBand): Promise<SatelliteBand> {
  const band: Band = calibratedBand({
    form: 'k1k2',
    k1: scene.k1,
    k2: scene.k2,
    radianceUnit: 'W·m⁻²·sr⁻¹·µm⁻¹',
  });
  const frames = await readFrames(fixture(`satellite/${scene.file}`), {
    quantity: 'band radiance',
    scale: scene.scale,
    offset: scene.offset,
  });
  const brightness = apparentFrame(frames, band);
  const conditions: Conditions = {
    band,
    emissivity: scene.emissivity.value,
    reflectedRadiance: scene.downwellingRadiance.value,
    path: [layer({ transmittance: scene.transmittance.value, pathRadiance: scene.pathRadiance.value })],
    origins: {
      emissivity: scene.emissivity.origin,
      reflectedRadiance: scene.downwellingRadiance.origin,
      'path[0].transmittance': scene.transmittance.origin,
      'path[0].pathRadiance': scene.pathRadiance.origin,
    },
  };
  const uncertainties: Uncertainties = {
    apparent: scene.apparentTemperature.standardUncertainty,
    emissivity: scene.emissivity.standardUncertainty,
    reflectedRadiance: scene.downwellingRadiance.standardUncertainty,
    path: [
      {
        transmittance: scene.transmittance.standardUncertainty,
        pathRadiance: scene.pathRadiance.standardUncertainty,
      },
    ],
  };
  const surface = measurementModel(conditions).surfaceFrame(brightness);
  const meanBrightness = mean(brightness.temperature.data);
  return {
    name: scene.name,
    brightness: brightness.temperature,
    surface,
    meanBrightness,
    meanSurface: mean(surface.temperature.data),
    result: measurementResult(kelvin(meanBrightness), conditions, uncertainties),
  };
}

function mean(values: Float32Array): number {
  let sum = 0;
  for (const value of values) sum += value;
  return sum / values.length;
}
