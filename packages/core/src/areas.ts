/**
 * Parameters per area: parts of one frame corrected with conditions of their own.
 */

import { saturatedCaution } from './cautions.js';
import { MeasurementError } from './errors.js';
import {
  type FrameInput,
  type FrameOutput,
  frameCautions,
  type SurfaceFrame,
  summary,
  surfaceFrameOf,
} from './frame.js';
import { frameView } from './frame-io.js';
import type { MeasurementModel } from './measurement.js';
import type { Recorrection } from './recorrection.js';
import { checkedRegion, checkMaskFits, forEachPixel, type Region, regionBounds } from './regions.js';
import { forEachRow, isView, type View } from './view.js';

/** A region and the model that holds in it. */
export interface Area<Model extends MeasurementModel | Recorrection = MeasurementModel | Recorrection> {
  readonly region: Region;
  readonly model: Model;
}

/**
 * Surface temperatures of a frame in which areas have conditions of their own; where areas overlap the later holds.
 *
 * @param frame - View (row, column) or (…, row, column); as for `surfaceFrame`.
 * @param model - What holds outside all areas.
 * @param areas - Regions with their models; all read the same quantity as `model`.
 * @param out - As for `surfaceFrame`; may be the input.
 * @throws {MeasurementError} as `surfaceFrame`; `wrong-quantity` when an area's model reads another quantity.
 */
export function surfaceFrameByArea<Model extends MeasurementModel | Recorrection>(
  frame: FrameInput,
  model: Model,
  areas: readonly Area<Model>[],
  out?: FrameOutput,
): SurfaceFrame {
  checkModel(model, 'model');
  const input = frameView(frame, model.reads);
  const shape = input.shape;
  if (!Array.isArray(areas)) {
    throw new MeasurementError('wrong-type', {
      path: 'areas',
      expected: 'an array of { region, model }',
      received: areas,
    });
  }
  if (areas.length > 0 && shape.length < 2) {
    throw new MeasurementError('wrong-shape', {
      path: 'frame',
      expected: 'rows and columns',
      received: shape,
    });
  }
  const plane = shape.slice(-2) as [number, number];
  // Areas first: the output may be the input, and nothing is written before everything is checked.
  const parts = areas.map((area: Area<Model>, i) => {
    const { region, model: own } = Object(area) as Area<Model>;
    checkModel(own, `areas[${i}].model`);
    if (own.reads !== model.reads) {
      throw new MeasurementError('wrong-quantity', {
        path: `areas[${i}].model`,
        expected: `a model that reads ${model.reads}`,
        received: own.reads,
      });
    }
    checkMaskFits(checkedRegion(region, `areas[${i}].region`), plane, `areas[${i}].region`);
    const { rows, columns } = regionBounds(region, plane);
    const box: Box = own.needsPixel
      ? { row: 0, column: 0, height: plane[0], width: plane[1] }
      : {
          row: rows[0],
          column: columns[0],
          height: rows[1] - rows[0] + 1,
          width: columns[1] - columns[0] + 1,
        };
    if (box.height <= 0 || box.width <= 0) return undefined;
    const cut = isView(frame) ? window(input, box) : { ...frame, array: window(input, box) };
    return { region, box, frame: surfaceFrameOf(own.engine, cut, undefined, 'part of a frame') };
  });
  const result = model.surfaceFrame(frame, out);
  for (const part of parts) if (part) paste(part.region, part.box, part.frame, result, plane);
  const counted = recount(result.flags);
  return { ...result, ...counted, cautions: areaCautions(model, areas, counted.counts.saturated) };
}

function checkModel(value: unknown, path: string): void {
  if (typeof value === 'object' && value !== null && 'engine' in value && 'surfaceFrame' in value) return;
  throw new MeasurementError('wrong-type', {
    path,
    expected: 'a model',
    received: value,
    hint: 'Write measurementModel(conditions) or recorrection(recorded, actual).',
  });
}

/** Cautions of the whole and of every area, each once. */
function areaCautions(
  model: MeasurementModel | Recorrection,
  areas: readonly Area[],
  saturated: number,
): SurfaceFrame['cautions'] {
  const all = [model, ...areas.map((area) => area.model)].flatMap(({ engine }) => frameCautions(engine, 0));
  const once = [...new Map(all.map((caution) => [caution.message, caution])).values()];
  return Object.freeze(saturated > 0 ? [...once, saturatedCaution(`${saturated} pixels are`)] : once);
}

interface Box {
  readonly row: number;
  readonly column: number;
  readonly height: number;
  readonly width: number;
}

/** A part of a view, in the same data. */
function window(source: View, { row, column, height, width }: Box): View {
  const last = source.shape.length - 1;
  return {
    data: source.data,
    shape: [...source.shape.slice(0, -2), height, width],
    stride: source.stride,
    offset: source.offset + row * source.stride[last - 1]! + column * source.stride[last]!,
  };
}

function paste(
  region: Region,
  box: Box,
  part: SurfaceFrame,
  whole: SurfaceFrame,
  plane: [number, number],
): void {
  const frames = whole.temperature.shape.slice(0, -2);
  const layers = [part.temperature, part.flags, whole.temperature, whole.flags];
  const last = frames.length + 1;
  // One visit a frame: the starts of its first row in the four layers.
  forEachRow(
    [...frames, 1],
    layers.map((layer) => ({ stride: [...layer.stride.slice(0, -2), 0], offset: layer.offset })),
    (starts) => {
      forEachPixel(region, plane, (row, column) => {
        const at = (layer: number, r: number, c: number): number =>
          starts[layer]! + r * layers[layer]!.stride[last - 1]! + c * layers[layer]!.stride[last]!;
        const [r, c] = [row - box.row, column - box.column];
        whole.temperature.data[at(2, row, column)] = part.temperature.data[at(0, r, c)]!;
        whole.flags.data[at(3, row, column)] = part.flags.data[at(1, r, c)]!;
      });
    },
  );
}

function recount(flags: View<Uint8Array>): Pick<SurfaceFrame, 'counts' | 'unsolved'> {
  const counts = new Float64Array(256);
  const step = flags.stride.at(-1) ?? 0;
  forEachRow(flags.shape, [flags], ([start], length) => {
    for (let column = 0; column < length; column++) counts[flags.data[start! + column * step]!]! += 1;
  });
  return summary(counts);
}
