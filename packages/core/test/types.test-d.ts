import { describe, expectTypeOf, it } from 'vitest';
import {
  type AnyKelvin,
  apparentFrame,
  apparentTemperature,
  type Conditions,
  celsius,
  isMeasurementError,
  type Kelvin,
  type MeasurementError,
  measurementModel,
  measurementResult,
  recorrection,
  recorrectionResult,
  rectangle,
  type SurfaceFrame,
  surfaceFrameByArea,
  surfaceTemperature,
  toCelsius,
  topHatBand,
  type View,
  view,
} from '../src/index.js';

const conditions: Conditions = {
  band: topHatBand(8, 14),
  emissivity: 0.86,
  reflectedApparentTemperature: celsius(21),
};
const model = measurementModel(conditions);
const again = recorrection({ emissivity: 0.95, reflectedApparentTemperature: celsius(20) }, conditions);
const frame = view(new Float32Array(4).fill(300), [2, 2]);

describe('correcting twice does not compile', () => {
  const surface = surfaceTemperature(celsius(62.4), conditions);

  it('a surface temperature is not an apparent one', () => {
    expectTypeOf(surface).toEqualTypeOf<Kelvin<'surface temperature'>>();
    // @ts-expect-error: it is corrected already
    surfaceTemperature(surface, conditions);
    // @ts-expect-error: it is corrected already
    model.surfaceTemperature(surface);
    // @ts-expect-error: it is corrected already
    model.sensitivities(surface);
    // @ts-expect-error: it is corrected already
    model.radianceTerms(surface);
    // @ts-expect-error: it is corrected already
    measurementResult(surface, conditions);
    // @ts-expect-error: it is corrected already
    again.surfaceTemperature(surface);
    // @ts-expect-error: it is corrected already
    recorrectionResult(surface, { emissivity: 1, reflectedApparentTemperature: celsius(20) }, conditions);
    expectTypeOf<Kelvin<'surface temperature'>>().not.toExtend<Parameters<typeof surfaceTemperature>[0]>();
  });

  it('nor is a result, whole or by its temperature', () => {
    const result = measurementResult(celsius(62.4), conditions);
    // @ts-expect-error: a result is no reading
    model.surfaceTemperature(result);
    // @ts-expect-error: it is corrected already
    model.surfaceTemperature(result.temperature);
    expectTypeOf(result.temperature).toEqualTypeOf<Kelvin<'surface temperature'>>();
    expectTypeOf(result.quantity).toEqualTypeOf<'surface temperature'>();
  });

  it('apparent and recorded temperatures are not exchanged', () => {
    const apparent = apparentTemperature(celsius(70), conditions);
    const recorded = again.recordedTemperature(celsius(70));
    expectTypeOf(apparent).toEqualTypeOf<Kelvin<'apparent temperature'>>();
    expectTypeOf(recorded).toEqualTypeOf<Kelvin<'recorded temperature'>>();
    expectTypeOf(model.surfaceTemperature(apparent)).toEqualTypeOf<Kelvin<'surface temperature'>>();
    expectTypeOf(again.surfaceTemperature(recorded)).toEqualTypeOf<Kelvin<'surface temperature'>>();
    // @ts-expect-error: a recorded temperature is taken back with recorrection
    model.surfaceTemperature(recorded);
    // @ts-expect-error: an apparent temperature has no recorded settings
    again.surfaceTemperature(apparent);
  });
});

describe('temperatures are branded', () => {
  it('a plain number is no temperature', () => {
    // @ts-expect-error: write celsius(62.4)
    model.surfaceTemperature(62.4);
    // @ts-expect-error: write celsius(21)
    measurementModel({ ...conditions, reflectedApparentTemperature: 21 });
    // @ts-expect-error: write kelvin(300)
    toCelsius(300);
    expectTypeOf(celsius(20)).toEqualTypeOf<Kelvin>();
    expectTypeOf(toCelsius).parameter(0).toEqualTypeOf<AnyKelvin>();
  });

  it('any of them is a number, a difference is a plain one', () => {
    const difference: number = celsius(62.4) - celsius(21);
    expectTypeOf(difference).toEqualTypeOf<number>();
    expectTypeOf<Kelvin<'surface temperature'>>().toExtend<number>();
    expectTypeOf(toCelsius(surfaceTemperature(celsius(62.4), conditions))).toEqualTypeOf<number>();
  });

  it('the forward direction takes any temperature of a surface', () => {
    expectTypeOf(model.apparentTemperature).parameter(0).toEqualTypeOf<AnyKelvin>();
    model.apparentTemperature(surfaceTemperature(celsius(62.4), conditions));
  });
});

describe('conditions', () => {
  it('have no default band, emissivity or unknown key', () => {
    // @ts-expect-error: there is no default band
    measurementModel({ emissivity: 0.9, reflectedApparentTemperature: celsius(20) });
    // @ts-expect-error: there is no default emissivity
    measurementModel({ band: topHatBand(8, 14), reflectedApparentTemperature: celsius(20) });
    // @ts-expect-error: emissivity
    measurementModel({ ...conditions, emisivity: 0.9 });
    // @ts-expect-error: an uncertainty of an input there is not
    measurementResult(celsius(62.4), conditions, { emisivity: 0.02 });
  });
});

describe('frames', () => {
  it('are views of float32 and uint8, and know their quantity', () => {
    const result = model.surfaceFrame(frame);
    expectTypeOf(result).toEqualTypeOf<SurfaceFrame>();
    expectTypeOf(result.temperature).toEqualTypeOf<View<Float32Array>>();
    expectTypeOf(result.flags).toEqualTypeOf<View<Uint8Array>>();
    expectTypeOf(result.quantity).toEqualTypeOf<'surface temperature'>();
    expectTypeOf(apparentFrame(frame, conditions.band).quantity).toEqualTypeOf<'apparent temperature'>();
    model.surfaceFrame(frame, result);
    model.surfaceFrame(frame, frame);
    // @ts-expect-error: temperatures are written as float32
    model.surfaceFrame(frame, view(new Float64Array(4), [2, 2]));
    // @ts-expect-error: a view, not a list
    model.surfaceFrame([300, 310]);
  });

  it('areas read what the whole frame reads', () => {
    const region = rectangle(0, 0, 1, 1);
    surfaceFrameByArea(frame, model, [{ region, model }]);
    surfaceFrameByArea(frame, again, [{ region, model: again }]);
    // @ts-expect-error: a recorrection beside a model of apparent temperature
    surfaceFrameByArea<typeof model>(frame, model, [{ region, model: again }]);
  });
});

describe('errors', () => {
  it('the guard narrows to the closed list of codes', () => {
    const caught: unknown = new Error('x');
    if (isMeasurementError(caught)) {
      expectTypeOf(caught).toEqualTypeOf<MeasurementError>();
      expectTypeOf<'no-solution'>().toExtend<typeof caught.code>();
      expectTypeOf<'no-such-code'>().not.toExtend<typeof caught.code>();
    }
  });
});
