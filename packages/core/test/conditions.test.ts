import { describe, expect, it } from 'vitest';
import {
  air,
  type Conditions,
  celsius,
  type Instrument,
  measurementModel,
  measurementResult,
  topHatBand,
  view,
} from '../src/index.js';
import { bands, K, refused } from './support/measurement.js';

const band = topHatBand(8, 14);
const base: Conditions = { band, emissivity: 0.9, reflectedApparentTemperature: celsius(20) };
const of = (changes: object) => () => measurementModel({ ...base, ...changes } as Conditions);
const without =
  (...keys: (keyof Conditions)[]) =>
  () =>
    measurementModel(
      Object.fromEntries(
        Object.entries(base).filter(([key]) => !keys.includes(key as keyof Conditions)),
      ) as never,
    );

describe('what must be given', () => {
  it('conditions at all', () => {
    refused(() => measurementModel(undefined as never), 'wrong-type', '', 'an object with band, emissivity');
    refused(() => measurementModel([] as never), 'wrong-type', '');
    refused(() => measurementModel(band as never), 'unknown-key', 'kind');
  });

  it('a band: there is no default', () => {
    refused(without('band'), 'missing-input', 'band', 'there is no default', 'topHatBand(8, 14)');
    refused(of({ band: { kind: 'top-hat', from: 8, to: 14 } }), 'wrong-type', 'band', 'bandFromDescriptor()');
    refused(of({ band: 'LW' }), 'wrong-type', 'band', '"LW"');
  });

  it('an emissivity, as a ratio', () => {
    refused(without('emissivity'), 'missing-input', 'emissivity', 'a ratio of 0…1');
    refused(of({ emissivity: '0.9' }), 'wrong-type', 'emissivity', '0 < emissivity ≤ 1', '"0.9"');
    refused(
      of({ emissivity: 95 }),
      'out-of-range',
      'emissivity',
      'expected 0 < emissivity ≤ 1, got 95. Write 0.95 for 95 %.',
    );
    refused(of({ emissivity: 0 }), 'out-of-range', 'emissivity', 'got 0');
    refused(of({ emissivity: -0.5 }), 'out-of-range', 'emissivity');
    refused(of({ emissivity: 1.0001 }), 'out-of-range', 'emissivity');
    refused(of({ emissivity: 200 }), 'out-of-range', 'emissivity', 'got 200.');
    refused(of({ emissivity: Number.NaN }), 'not-finite', 'emissivity');
    refused(of({ emissivity: { wavelength: [8, 14], value: [0.5] } }), 'wrong-shape', 'emissivity.value');
    refused(
      of({ emissivity: { wavelength: [8, 14], value: [0.5, 95] } }),
      'out-of-range',
      'emissivity.value[1]',
      'Write 0.95',
    );
    refused(
      of({ emissivity: { wavelength: [8, 14], wavenumber: [700, 1200], value: [0.5, 0.5] } }),
      'conflicting-inputs',
      'emissivity.wavelength',
    );
    refused(
      of({ emissivity: { data: [0.9], shape: [2, 2], stride: [2, 1], offset: 0 } }),
      'wrong-shape',
      'emissivity',
    );
  });

  it('exactly one of reflectedApparentTemperature and reflectedRadiance', () => {
    refused(
      without('reflectedApparentTemperature'),
      'missing-input',
      'reflectedApparentTemperature',
      'exactly one of',
      'celsius(21)',
    );
    refused(
      of({ reflectedRadiance: 40 }),
      'conflicting-inputs',
      'reflectedApparentTemperature',
      'exactly one of',
    );
    refused(
      of({ reflectedApparentTemperature: 21 }),
      'out-of-range',
      'reflectedApparentTemperature',
      'Did you mean celsius(21)?',
    );
    refused(of({ reflectedApparentTemperature: '21' }), 'wrong-type', 'reflectedApparentTemperature');
    const radiance = (value: unknown) => () =>
      measurementModel({ band, emissivity: 0.9, reflectedRadiance: value } as never);
    refused(radiance(-1), 'out-of-range', 'reflectedRadiance', '≥ 0');
    refused(radiance('40'), 'wrong-type', 'reflectedRadiance');
    refused(radiance(Number.POSITIVE_INFINITY), 'not-finite', 'reflectedRadiance');
    expect(measurementModel({ band, emissivity: 0.9, reflectedRadiance: 0 }).offset).toBe(0);
  });

  it('only known keys, the nearest one named', () => {
    refused(of({ emisivity: 0.9 }), 'unknown-key', 'emisivity', "Did you mean 'emissivity'?");
    refused(
      of({ reflectedTemperature: celsius(20) }),
      'unknown-key',
      'reflectedTemperature',
      "'reflectedApparentTemperature'",
    );
    refused(of({ paths: [] }), 'unknown-key', 'paths', "'path'");
    refused(of({ distance: 3 }), 'unknown-key', 'distance', 'only the keys band, emissivity');
  });
});

describe('path, surface, angle, place, origins', () => {
  it('a path is a list of layers', () => {
    refused(of({ path: air({ transmittance: 1 }) }), 'wrong-type', 'path', 'from target to instrument');
    refused(
      of({ path: [{ kind: 'air', transmittance: 0.9 }] }),
      'wrong-type',
      'path',
      '[air({ … }), infraredWindow({ … })]',
    );
    refused(of({ path: 'air' }), 'wrong-type', 'path');
  });

  it('a surface that is not opaque', () => {
    const surface = { transmittance: 0.05, backgroundApparentTemperature: celsius(40) };
    expect(of({ surface })().gain).toBe(0.9);
    refused(
      of({ surface: { ...surface, transmittance: 0.2 } }),
      'out-of-range',
      'surface.transmittance',
      'emissivity + transmittance ≤ 1',
      '0.9 + 0.2',
    );
    refused(
      of({ surface: { ...surface, transmittance: 5 } }),
      'out-of-range',
      'surface.transmittance',
      'Write 0.05 for 5 %.',
    );
    refused(
      of({ surface: { transmittance: 0.05 } }),
      'missing-input',
      'surface.backgroundApparentTemperature',
      'behind the target',
    );
    refused(
      of({ surface: { backgroundApparentTemperature: celsius(40) } }),
      'wrong-type',
      'surface.transmittance',
    );
    refused(
      of({ surface: { ...surface, backgroundApparentTemperature: 40 } }),
      'out-of-range',
      'surface.backgroundApparentTemperature',
      'celsius(40)',
    );
    refused(
      of({ surface: { ...surface, background: 1 } }),
      'unknown-key',
      'surface.background',
      'only the keys transmittance, backgroundApparentTemperature',
    );
    refused(of({ surface: 0.1 }), 'wrong-type', 'surface');
    refused(
      of({ surface, emissivity: { wavelength: [8, 14], value: [0.5, 0.5] } }),
      'unsupported',
      'surface',
      'a number or a map',
    );
    expect(of({ surface: { ...surface, transmittance: 0.1 } })().gain).toBe(0.9); // 0.9 + 0.1: exactly 1
  });

  it('a view angle of 0…90°, and a place', () => {
    expect(of({ viewAngle: 0 })().conditions.viewAngle).toBe(0);
    refused(of({ viewAngle: 90 }), 'out-of-range', 'viewAngle', '0…90° from the normal');
    refused(of({ viewAngle: -1 }), 'out-of-range', 'viewAngle');
    refused(of({ viewAngle: '30' }), 'wrong-type', 'viewAngle');
    refused(
      of({ reflectedMeasuredAt: 'targte' }),
      'out-of-range',
      'reflectedMeasuredAt',
      "Did you mean 'target'?",
    );
    refused(of({ reflectedMeasuredAt: true }), 'wrong-type', 'reflectedMeasuredAt');
  });

  it('origins are texts', () => {
    expect(of({ origins: { emissivity: 'tape' } })().conditions.origins).toEqual({ emissivity: 'tape' });
    refused(of({ origins: { emissivity: 5 } }), 'wrong-type', 'origins.emissivity', 'a text', 'got 5');
    refused(of({ origins: 'tape' }), 'wrong-type', 'origins');
    refused(of({ origins: null }), 'wrong-type', 'origins');
  });
});

describe('the instrument', () => {
  const full: Instrument = {
    measuringRange: { from: celsius(-20), to: celsius(120) },
    netd: { value: 0.05, sceneTemperature: celsius(30) },
    accuracy: { kelvin: 2, percent: 2, percentOf: 'celsius' },
    ifov: 1.4,
    lens: '25°',
    calibrationDate: '2026-03-01',
    warmUp: 600,
  };
  const with_ = (changes: object) => of({ instrument: { ...full, ...changes } });

  it('is taken as it is, copied and frozen', () => {
    const own = { ...full, measuringRange: { ...full.measuringRange! } };
    const model = of({ instrument: own })();
    expect(model.conditions.instrument).toEqual(full);
    own.measuringRange.to = celsius(50);
    expect(model.conditions.instrument!.measuringRange!.to).toBe(celsius(120));
    expect(Object.isFrozen(model.conditions) && Object.isFrozen(model.conditions.instrument)).toBe(true);
  });

  it('every key is checked', () => {
    refused(of({ instrument: 'camera' }), 'wrong-type', 'instrument');
    refused(with_({ netdd: 1 }), 'unknown-key', 'instrument.netdd', "'netd'");
    refused(
      with_({ measuringRange: { from: -20, to: celsius(120) } }),
      'out-of-range',
      'instrument.measuringRange.from',
      'celsius(-20)',
    );
    refused(
      with_({ measuringRange: { from: celsius(120), to: celsius(120) } }),
      'out-of-range',
      'instrument.measuringRange.to',
      'above from = 393.15 K',
    );
    refused(with_({ measuringRange: [253, 393] }), 'wrong-type', 'instrument.measuringRange');
    refused(with_({ measuringRange: { from: celsius(0) } }), 'wrong-type', 'instrument.measuringRange.to');
    refused(
      with_({ netd: { value: 0, sceneTemperature: celsius(30) } }),
      'out-of-range',
      'instrument.netd.value',
    );
    refused(
      with_({ netd: { value: 0.05, sceneTemperature: 30 } }),
      'out-of-range',
      'instrument.netd.sceneTemperature',
      'celsius(30)',
    );
    refused(with_({ netd: 0.05 }), 'wrong-type', 'instrument.netd');
    refused(with_({ ifov: 0 }), 'out-of-range', 'instrument.ifov');
    refused(with_({ warmUp: -1 }), 'out-of-range', 'instrument.warmUp');
    refused(with_({ lens: 25 }), 'wrong-type', 'instrument.lens', 'a text');
    refused(with_({ calibrationDate: 20260301 }), 'wrong-type', 'instrument.calibrationDate');
    refused(with_({ accuracy: {} }), 'missing-input', 'instrument.accuracy', 'kelvin, percent, or both');
    refused(with_({ accuracy: { kelvin: -2 } }), 'out-of-range', 'instrument.accuracy.kelvin');
    refused(with_({ accuracy: { percent: 2 } }), 'wrong-type', 'instrument.accuracy.percentOf', "'celsius'");
    refused(
      with_({ accuracy: { percent: 2, percentOf: 'kelvins' } }),
      'out-of-range',
      'instrument.accuracy.percentOf',
      "Did you mean 'kelvin'?",
    );
    refused(
      with_({ accuracy: { percent: -2, percentOf: 'kelvin' } }),
      'out-of-range',
      'instrument.accuracy.percent',
    );
    refused(
      of({ instrument: { accuracy: { percent: 2, percentOf: 'range' } } }),
      'missing-input',
      'instrument.measuringRange',
      'a percentage of it',
    );
  });

  it('accuracy: the larger of kelvin and percent, of what it says, as a rectangular half-width', () => {
    const half = (accuracy: object, reading: number): number => {
      const instrument = { ...full, accuracy } as Instrument;
      const { budget } = measurementResult(celsius(reading), { ...base, instrument });
      expect(budget).toHaveLength(1);
      expect(budget[0]).toMatchObject({
        name: 'apparent',
        origin: expect.stringContaining('accuracy stated'),
      });
      return budget[0]!.standardUncertainty * Math.sqrt(3);
    };
    expect(half({ kelvin: 2, percent: 2, percentOf: 'celsius' }, 62.4)).toBeCloseTo(2, 12);
    expect(half({ kelvin: 2, percent: 2, percentOf: 'celsius' }, 110)).toBeCloseTo(2.2, 12);
    expect(half({ percent: 2, percentOf: 'celsius' }, -15)).toBeCloseTo(0.3, 12);
    expect(half({ percent: 1, percentOf: 'kelvin' }, 26.85)).toBeCloseTo(3, 12);
    expect(half({ percent: 1, percentOf: 'range' }, 26.85)).toBeCloseTo(1.4, 12);
    expect(half({ kelvin: 1.5 }, 26.85)).toBeCloseTo(1.5, 12);
  });
});

describe('a model', () => {
  it('is frozen and keeps what it was made of', () => {
    const path = [air({ transmittance: 0.9, temperature: celsius(20) })];
    const model = of({ path })();
    path.length = 0;
    expect(model.conditions.path).toHaveLength(1);
    expect(Object.isFrozen(model) && Object.isFrozen(model.conditions.path)).toBe(true);
    expect(model.reads).toBe('apparent temperature');
    expect(model.needsPixel).toBe(false);
    expect(model.band).toBe(band);
  });

  it('takes every kind of band', () => {
    for (const own of bands) expect(of({ band: own })().surfaceTemperature(K(340))).toBeGreaterThan(340);
  });

  it('with a map needs a pixel, and answers at one', () => {
    const model = of({ emissivity: view([0.9, 0.5], [1, 2]) })();
    expect(model.needsPixel).toBe(true);
    refused(() => model.surfaceTemperature(K(340)), 'needs-pixel', 'emissivity', 'model.at({ row, column })');
    refused(() => model.apparentTemperature(K(340)), 'needs-pixel', 'emissivity');
    refused(() => model.gain, 'needs-pixel', 'emissivity');
    refused(() => model.offset, 'needs-pixel', 'emissivity');
    refused(() => model.sensitivities(K(340)), 'needs-pixel', 'emissivity');
    const here = model.at({ row: 0, column: 1 });
    expect(here.needsPixel).toBe(false);
    expect(here.gain).toBe(0.5);
    expect(here.surfaceTemperature(K(340))).toBe(model.surfaceTemperature(K(340), { row: 0, column: 1 }));
    expect(here.surfaceTemperature(K(340))).toBe(of({ emissivity: 0.5 })().surfaceTemperature(K(340)));
    expect(here.at({ row: 0, column: 0 }).gain).toBe(0.9);
    refused(
      () => model.surfaceTemperature(K(340), { row: 1, column: 0 }),
      'out-of-range',
      'emissivity',
      'a pixel within [1, 2]',
      '[1, 0]',
    );
    refused(() => model.surfaceTemperature(K(340), { row: 0.5, column: 0 }), 'out-of-range', 'emissivity');
    refused(() => model.surfaceTemperature(K(340), { row: 0 } as never), 'out-of-range', 'emissivity');
    refused(() => model.surfaceTemperature(K(340), null as never), 'wrong-type', 'pixel', '{ row, column }');
    refused(() => model.surfaceTemperature(K(340), 3 as never), 'wrong-type', 'pixel');
    const deep = of({ emissivity: view([0.9, 0.5], [2, 1, 1]) })();
    expect(deep.at({ frame: 1, row: 0, column: 0 }).gain).toBe(0.5);
    refused(() => deep.at({ row: 0, column: 0 }), 'out-of-range', 'emissivity', 'a pixel within [2, 1, 1]');
  });
});
