/**
 * The inspection of an invented ice factory: synthetic frames whose truth is known, made by a Python script that
 * shares no code with this library. Each area of a frame has conditions of its own.
 */
import { readFrames } from '@graybody/arrays';
import {
  type AreaConditionsDocument,
  type ConditionsDocument,
  kelvin,
  type MeasurementResult,
  measurementResult,
  type SurfaceFrame,
  surfaceFrameByArea,
  type View,
} from '@graybody/core';
import { describedModels, readConditionsDocument } from '@graybody/core/record';
import { fixture, fixtureJson } from './files.js';

/** Scenes of the inspection, and the bands they were seen in. */
export const scenes = ['compressor', 'switch-cabinet', 'oven-front'] as const;
/** Name of a scene. */
export type Scene = (typeof scenes)[number];

/** What a correction forgets on purpose, to show that it matters. */
export type Omission = 'nothing' | 'emissivity' | 'reflected temperature' | 'window';

/** One region of a scene, over its pixels away from edges and saturation, all frames. */
export interface RegionOutcome {
  readonly name: string;
  /** Mean true, shown and recovered temperature. [K] */
  readonly truth: number;
  readonly shown: number;
  readonly recovered: number;
  /** Mean of recovered − true. [K] */
  readonly error: number;
  /** Standard error of that mean, s/√n. [K] */
  readonly standardError: number;
  readonly pixels: number;
  /** Mean place of its pixels. */
  readonly centre: { readonly row: number; readonly column: number };
  /** Result for the mean reading with the uncertainties of the conditions; none for recorded frames. */
  readonly result: MeasurementResult | undefined;
}

/** A scene, corrected. */
export interface SceneOutcome {
  readonly scene: Scene;
  readonly reading: View;
  readonly truth: View;
  readonly surface: SurfaceFrame;
  readonly regions: readonly RegionOutcome[];
}

/** Reads the frames of a scene: of an uncorrected instrument, or as one with wrong settings recorded them. */
export async function correctScene(
  scene: Scene,
  source: 'apparent' | 'recorded' = 'apparent',
  omission: Omission = 'nothing',
): Promise<SceneOutcome> {
  const folder = `ice-works/${scene}`;
  const document = fixtureJson(`${folder}/${source === 'apparent' ? 'conditions' : 'recorded'}.json`);
  const described = readConditionsDocument(without(document as ConditionsDocument, omission));
  const { model, areas } = describedModels(described);
  const { files, regions } = fixtureJson(`${folder}/scene.json`) as SceneFile;
  const { file, scale = 1, offset = 0 } = files[source];
  const frames = await readFrames(fixture(`${folder}/${file}`), {
    quantity: model.reads,
    unit: 'K',
    ...(scale === 1 ? {} : { scale, offset }),
  });
  const truth = await readFrames(fixture(`${folder}/${files.truth.file}`), {
    quantity: 'surface temperature',
    unit: 'K',
  });
  const core = await readFrames(fixture(`${folder}/core.npy`), { quantity: 'counts' });
  const surface = surfaceFrameByArea(frames, model, areas);
  const outcomes = regions
    .filter((region) => region.core_pixels > 0)
    .map(({ name, number }) => {
      const statistics = regionStatistics(frames.array, surface.array, truth.array, core.array, number);
      const { conditions, uncertainties } = described.areas.find((area) => area.name === name) ?? described;
      const result =
        source === 'apparent'
          ? measurementResult(kelvin(statistics.shown), conditions, uncertainties)
          : undefined;
      return { name, ...statistics, result };
    });
  return { scene, reading: frames.array, truth: truth.array, surface, regions: outcomes };
}

interface SceneFile {
  readonly files: Readonly<
    Record<
      'truth' | 'apparent' | 'recorded',
      { readonly file: string; readonly scale?: number; readonly offset?: number }
    >
  >;
  readonly regions: readonly {
    readonly name: string;
    readonly number: number;
    readonly core_pixels: number;
  }[];
}

/** Means over the pixels of one region in all frames, and how far off the recovered temperatures are. */
function regionStatistics(
  reading: View,
  surface: View,
  truth: View,
  core: View,
  number: number,
): Pick<RegionOutcome, 'truth' | 'shown' | 'recovered' | 'error' | 'standardError' | 'pixels' | 'centre'> {
  const [frames, rows, columns] = reading.shape as [number, number, number];
  const sums = { truth: 0, shown: 0, recovered: 0, error: 0, square: 0, row: 0, column: 0 };
  let pixels = 0;
  for (let frame = 0; frame < frames; frame++) {
    for (let row = 0; row < rows; row++) {
      for (let column = 0; column < columns; column++) {
        if (element(core, 0, row, column) !== number) continue;
        const trueValue = element(truth, 0, row, column);
        const recovered = element(surface, frame, row, column);
        sums.truth += trueValue;
        sums.shown += element(reading, frame, row, column);
        sums.recovered += recovered;
        sums.error += recovered - trueValue;
        sums.square += (recovered - trueValue) ** 2;
        sums.row += row;
        sums.column += column;
        pixels += 1;
      }
    }
  }
  const error = sums.error / pixels;
  const deviation = Math.sqrt((sums.square - pixels * error * error) / (pixels - 1));
  return {
    truth: sums.truth / pixels,
    shown: sums.shown / pixels,
    recovered: sums.recovered / pixels,
    error,
    standardError: deviation / Math.sqrt(pixels),
    pixels,
    centre: { row: sums.row / pixels, column: sums.column / pixels },
  };
}

function element({ data, stride, offset }: View, frame: number, row: number, column: number): number {
  return data[offset + frame * stride[0]! + row * stride[1]! + column * stride[2]!]!;
}

/** The document with something left out, everywhere in the frame. */
function without(document: ConditionsDocument, omission: Omission): ConditionsDocument {
  if (omission === 'nothing') return document;
  const change = <T extends AreaConditionsDocument>(conditions: T): T => {
    if (omission === 'emissivity') return { ...conditions, emissivity: 1 };
    if (omission === 'reflected temperature')
      return { ...conditions, reflectedApparentTemperature: { celsius: 20 } };
    return conditions.path
      ? { ...conditions, path: conditions.path.filter((layer) => layer.kind !== 'window') }
      : conditions;
  };
  const { areas = [], uncertainties: _uncertainties, ...rest } = document;
  return {
    ...change(rest),
    areas: areas.map(({ uncertainties: _own, ...area }) => ({
      ...area,
      conditions: change(area.conditions),
    })),
  };
}
