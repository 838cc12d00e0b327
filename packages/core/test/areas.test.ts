import { describe, expect, it } from 'vitest';
import {
  type Area,
  air,
  type Conditions,
  celsius,
  ellipse,
  type MeasurementModel,
  maskRegion,
  measurementModel,
  polygon,
  type Recorrection,
  type Region,
  recorrection,
  rectangle,
  regionMask,
  surfaceFrameByArea,
  topHatBand,
  type View,
  view,
} from '../src/index.js';
import { element, flagName, flat, laidOut, refused, worstAgainstSpot } from './support/measurement.js';

const base: Conditions = {
  band: topHatBand(8, 14),
  emissivity: 0.9,
  reflectedApparentTemperature: celsius(20),
};
const model = measurementModel(base);
const metal = measurementModel({ ...base, emissivity: 0.3 });
const behindAir = measurementModel({
  ...base,
  path: [air({ transmittance: 0.8, temperature: celsius(10) })],
});
const ramp = (count: number): number[] => Array.from({ length: count }, (_, i) => 310 + 0.7 * i);

/** The model of the last area that has the pixel, else the whole frame's: area by area, pixel by pixel. */
function brute<Model extends MeasurementModel | Recorrection>(
  whole: Model,
  areas: readonly Area<Model>[],
  plane: readonly [number, number],
): (index: readonly number[]) => Model {
  const masks = areas.map((area) => regionMask(area.region, plane));
  return (index) => {
    const last = masks.map((mask) => element(mask, index.slice(-2))).lastIndexOf(1);
    return last < 0 ? whole : areas[last]!.model;
  };
}

const check = (frame: View, areas: readonly Area<MeasurementModel>[], whole = model): void => {
  const copy = view(Float64Array.from(flat(frame)), frame.shape);
  const plane = frame.shape.slice(-2) as [number, number];
  const result = surfaceFrameByArea(frame, whole, areas);
  expect(worstAgainstSpot(brute(whole, areas, plane), copy, result).worst).toBeLessThan(1e-4);
  const codes = flat(result.flags);
  for (const [name, count] of Object.entries(result.counts)) {
    expect(codes.filter((code) => flagName(code) === name).length, name).toBe(count);
  }
  expect(result.unsolved).toBe(codes.filter((code) => code > 0 && code < 128).length);
};

describe('pixel by pixel as by hand', () => {
  const shape = [6, 8];
  const frame = view(Float32Array.from(ramp(48)), shape);
  const regions: Record<string, Region> = {
    rectangle: rectangle(1, 2, 3, 4),
    'fractional rectangle': rectangle(0.7, 1.2, 2.6, 3.3),
    ellipse: ellipse({ row: 2.5, column: 4 }, { row: 2, column: 3.2 }),
    polygon: polygon([
      { row: 0, column: 0 },
      { row: 5, column: 2 },
      { row: 2, column: 7 },
    ]),
    mask: maskRegion(
      view(
        ramp(48).map((_, i) => i % 3),
        shape,
      ),
    ),
    'partly outside': rectangle(-2, -3, 4, 5),
    'over the far corner': rectangle(4, 6, 9, 9),
    'wholly outside': rectangle(20, 20, 3, 3),
    'between pixels': rectangle(1.2, 1.2, 0.3, 0.3),
  };

  it('no areas: the whole frame', () => {
    check(frame, []);
    expect(flat(surfaceFrameByArea(frame, model, []).temperature)).toEqual(
      flat(model.surfaceFrame(frame).temperature),
    );
  });

  it.each(Object.entries(regions))('%s', (_name, region) => {
    check(frame, [{ region, model: metal }]);
  });

  it('overlapping areas: the later one holds', () => {
    check(frame, [
      { region: regions.ellipse!, model: metal },
      { region: regions.rectangle!, model: behindAir },
      { region: regions.polygon!, model: metal },
    ]);
    check(frame, [
      { region: rectangle(0, 0, 6, 8), model: metal },
      { region: rectangle(2, 2, 2, 2), model },
    ]);
  });

  it('areas with maps, beside a whole frame with maps', () => {
    const map = (from: number) =>
      view(
        ramp(48).map((_, i) => from + i / 200),
        shape,
      );
    const mapped = measurementModel({ ...base, emissivity: map(0.3) });
    check(frame, [{ region: regions.ellipse!, model: mapped }]);
    check(
      frame,
      [{ region: regions.ellipse!, model: mapped }],
      measurementModel({ ...base, emissivity: map(0.7) }),
    );
    check(frame, [{ region: rectangle(50, 50, 1, 1), model: mapped }]);
  });

  it('stacks of frames, strided and with a map of the full shape', () => {
    const stack = laidOut(ramp(144), [3, 6, 8], (length) => new Float32Array(length), {
      order: 'F',
      reversed: [1],
      spacing: 2,
    });
    check(stack, [
      { region: regions.rectangle!, model: metal },
      { region: regions.mask!, model: behindAir },
    ]);
    const full = view(
      ramp(144).map((_, i) => 0.3 + i / 300),
      [3, 6, 8],
    );
    check(stack, [{ region: regions.polygon!, model: measurementModel({ ...base, emissivity: full }) }]);
    check(view(ramp(96), [1, 2, 6, 8]), [{ region: regions.ellipse!, model: metal }]);
  });

  it('in place: the input holds the answer, areas were computed from what it was', () => {
    const areas = [
      { region: regions.ellipse!, model: metal },
      { region: regions.rectangle!, model: behindAir },
    ];
    const expected = surfaceFrameByArea(frame, model, areas);
    const own = view(Float32Array.from(ramp(48)), shape);
    const result = surfaceFrameByArea(own, model, areas, own);
    expect(result.temperature).toBe(own);
    expect(flat(own)).toEqual(flat(expected.temperature));
    const again = surfaceFrameByArea(frame, model, areas, result);
    expect(again.flags).toBe(result.flags);
    expect(flat(own)).toEqual(flat(expected.temperature));
    // And onto its own memory, turned round.
    const square = view(Float32Array.from(ramp(36)), [6, 6]);
    const plain = flat(surfaceFrameByArea(view(ramp(36).map(Math.fround), [6, 6]), model, areas).temperature);
    const turned = { data: square.data, shape: [6, 6], stride: [1, 6], offset: 0 };
    surfaceFrameByArea(square, model, areas, turned);
    expect(flat(turned)).toEqual(plain);
  });

  it('a frame that knows its quantity, recorded ones with recorrections', () => {
    const told = { emissivity: 0.95, reflectedApparentTemperature: celsius(20) };
    const [whole, part] = [recorrection(told, base), recorrection(told, { ...base, emissivity: 0.5 })];
    const areas = [{ region: regions.rectangle!, model: part }];
    const result = surfaceFrameByArea(
      { array: frame, quantity: 'recorded temperature', unit: 'K' },
      whole,
      areas,
    );
    expect(worstAgainstSpot(brute(whole, areas, [6, 8]), frame, result).worst).toBeLessThan(1e-4);
    expect(result).toMatchObject({ quantity: 'surface temperature', unit: 'K' });
  });

  it('flags of an area are counted anew, cautions are those of the whole and of areas, each once', () => {
    const hot = view([300, 300, Number.NaN, 393.15], [2, 2]);
    const range = { instrument: { measuringRange: { from: celsius(-20), to: celsius(120) } } };
    const [whole, shiny, other] = [
      measurementModel({ ...base, ...range }),
      measurementModel({ ...base, ...range, emissivity: 0.05, reflectedApparentTemperature: celsius(60) }),
      measurementModel({ ...base, ...range, emissivity: 0.05, viewAngle: 70 }),
    ];
    const areas = [
      { region: rectangle(0, 0, 1, 1), model: shiny },
      { region: rectangle(1, 1, 1, 1), model: other },
    ];
    const result = surfaceFrameByArea(hot, whole, areas);
    expect(flat(result.flags).map(flagName)).toEqual(['no-solution', 'ok', 'missing', 'saturated']);
    expect(result.counts).toMatchObject({ ok: 1, missing: 1, 'no-solution': 1, saturated: 1 });
    expect(result.unsolved).toBe(2);
    expect(result.cautions.map((caution) => caution.code)).toEqual([
      'low-emissivity',
      'steep-view-angle',
      'saturated',
    ]);
  });
});

describe('bad input', () => {
  const frame = view(Float32Array.from(ramp(6)), [2, 3]);
  const areas = [{ region: rectangle(0, 0, 1, 1), model: metal }];

  it('no frame, no model, no list of areas, no area', () => {
    refused(
      () => surfaceFrameByArea(null as never, model, areas),
      'wrong-type',
      'frame',
      'view(data, [rows, columns])',
    );
    refused(() => surfaceFrameByArea({} as never, model, areas), 'wrong-type', 'frame');
    refused(
      () => surfaceFrameByArea({ quantity: 'apparent temperature' } as never, model, areas),
      'wrong-type',
      'frame.array',
    );
    refused(
      () => surfaceFrameByArea(frame, base as never, areas),
      'wrong-type',
      'model',
      'measurementModel(conditions)',
    );
    refused(() => surfaceFrameByArea(frame, undefined as never, areas), 'wrong-type', 'model');
    refused(
      () => surfaceFrameByArea(frame, model, undefined as never),
      'wrong-type',
      'areas',
      '{ region, model }',
    );
    refused(() => surfaceFrameByArea(frame, model, [undefined] as never), 'wrong-type', 'areas[0].model');
    refused(
      () => surfaceFrameByArea(frame, model, [...areas, { region: rectangle(0, 0, 1, 1) }] as never),
      'wrong-type',
      'areas[1].model',
      'recorrection(recorded, actual)',
    );
    refused(
      () => surfaceFrameByArea(frame, model, [{ model }] as never),
      'wrong-type',
      'areas[0].region.kind',
    );
  });

  it('a region at fault, a mask of another shape: named by the area, before anything is written', () => {
    const negative = { kind: 'rectangle', row: 0, column: 0, height: -1, width: 2 } as const;
    refused(
      () => surfaceFrameByArea(frame, model, [...areas, { region: negative, model }]),
      'out-of-range',
      'areas[1].region.height',
    );
    const mask = maskRegion(view([1, 0], [1, 2]));
    refused(
      () => surfaceFrameByArea(frame, model, [{ region: mask, model }], frame),
      'wrong-shape',
      'areas[0].region.mask',
      '[2, 3]',
      '[1, 2]',
    );
    const map = measurementModel({ ...base, emissivity: view([0.5], [1, 1]) });
    refused(
      () => surfaceFrameByArea(frame, model, [{ region: rectangle(0, 0, 1, 1), model: map }], frame),
      'wrong-shape',
      'emissivity',
    );
    refused(() => surfaceFrameByArea(frame, map, areas, frame), 'wrong-shape', 'emissivity');
    expect(flat(frame)).toEqual(ramp(6).map(Math.fround));
  });

  it('a frame without rows and columns', () => {
    refused(
      () => surfaceFrameByArea(view([300, 310], [2]), model, areas),
      'wrong-shape',
      'frame',
      'rows and columns',
      '[2]',
    );
    expect(flat(surfaceFrameByArea(view([300, 310], [2]), model, []).flags)).toEqual([0, 0]);
  });

  it('another quantity, in the frame or between models', () => {
    refused(() => surfaceFrameByArea(model.surfaceFrame(frame), model, areas), 'already-corrected', 'frame');
    refused(
      () => surfaceFrameByArea({ array: frame, quantity: 'counts' }, model, areas),
      'wrong-quantity',
      'frame',
    );
    const again = recorrection({ emissivity: 1, reflectedApparentTemperature: celsius(20) }, base);
    refused(
      () =>
        surfaceFrameByArea<MeasurementModel | Recorrection>(frame, model, [
          { region: rectangle(0, 0, 1, 1), model: again },
        ]),
      'wrong-quantity',
      'areas[0].model',
      'a model that reads apparent temperature',
      '"recorded temperature"',
    );
  });

  it('a frame in degrees Celsius is refused and left as it was', () => {
    const cold = view(Float32Array.from([20, 30, 40, 50, 60, 70]), [2, 3]);
    refused(() => surfaceFrameByArea(cold, model, areas, cold), 'out-of-range', 'frame', 'degrees Celsius');
    expect(flat(cold)).toEqual([20, 30, 40, 50, 60, 70]);
  });
});
