import { describe, expect, it } from 'vitest';
import { air, celsius, infraredWindow, layer, measurementModel, topHatBand, view } from '../src/index.js';
import { isLayer } from '../src/layer.js';
import { K, refused } from './support/measurement.js';

const curve = { wavelength: [7, 10, 15], value: [0.5, 0.8, 0.6] };
const base = { band: topHatBand(8, 14), emissivity: 0.9, reflectedApparentTemperature: celsius(20) };

describe('what a layer is', () => {
  it('air: no reflectance, frozen, its transmittance whatever is nearer', () => {
    const own = air({ transmittance: 0.9, temperature: celsius(18) });
    expect(own).toMatchObject({ kind: 'air', reflectance: 0, temperature: 291.15, halfWidths: {} });
    expect(own.mirroredTemperature).toBeUndefined();
    expect(own.transmittanceBehind([])).toBe(0.9);
    expect(own.transmittanceBehind([own, own])).toBe(0.9);
    expect(Object.isFrozen(own) && Object.isFrozen(own.halfWidths)).toBe(true);
    expect(isLayer(own)).toBe(true);
    expect(isLayer({ kind: 'air' })).toBe(false);
    expect(isLayer(null)).toBe(false);
  });

  it('a temperature is required where the layer emits, and only there', () => {
    expect(air({ transmittance: 1 }).temperature).toBeUndefined();
    refused(
      () => air({ transmittance: 0.99 }),
      'missing-input',
      'air.temperature',
      'the layer emits (1 − τ − ρ > 0)',
      'celsius(20)',
    );
    refused(() => air({ transmittance: curve }), 'missing-input', 'air.temperature');
    refused(() => air({ transmittance: view([1], [1, 1]) }), 'missing-input', 'air.temperature');
    const lossless = infraredWindow({
      transmittance: 0.7,
      reflectance: 0.3,
      mirroredTemperature: celsius(20),
    });
    expect(lossless.temperature).toBeUndefined();
    expect(measurementModel({ ...base, path: [lossless] }).gain).toBeCloseTo(0.63, 12);
    refused(
      () => infraredWindow({ transmittance: 0.7, reflectance: 0.2, mirroredTemperature: celsius(20) }),
      'missing-input',
      'infraredWindow.temperature',
    );
  });

  it('a mirrored temperature is required where the layer mirrors, and only there', () => {
    const temperature = celsius(25);
    refused(
      () => infraredWindow({ transmittance: 0.7, reflectance: 0.2, temperature }),
      'missing-input',
      'infraredWindow.mirroredTemperature',
      'instrument side (ρ > 0)',
    );
    refused(
      () => infraredWindow({ transmittance: 0.7, reflectance: { low: 0, high: 0.1 }, temperature }),
      'missing-input',
      'infraredWindow.mirroredTemperature',
    );
    refused(
      () => layer({ transmittance: 0.7, reflectance: curve, temperature }),
      'missing-input',
      'layer.mirroredTemperature',
    );
    expect(infraredWindow({ transmittance: 0.7, temperature }).reflectance).toBe(0);
    expect(
      infraredWindow({ transmittance: 0.7, reflectance: 0, temperature }).mirroredTemperature,
    ).toBeUndefined();
  });

  it('an interval: its middle is used and its half-width is kept', () => {
    const own = infraredWindow({
      transmittance: { low: 0.6, high: 0.7 },
      reflectance: { low: 0.1, high: 0.2 },
      temperature: celsius(25),
      mirroredTemperature: celsius(22),
    });
    expect(own.transmittanceBehind([])).toBeCloseTo(0.65, 12);
    expect(own.reflectance).toBeCloseTo(0.15, 12);
    expect(own.halfWidths.transmittance).toBeCloseTo(0.05, 12);
    expect(own.halfWidths.reflectance).toBeCloseTo(0.05, 12);
  });

  it('a path radiance in place of a temperature', () => {
    const own = layer({ transmittance: 0.8, pathRadiance: 3 });
    expect(own).toMatchObject({ kind: 'layer', reflectance: 0, pathRadiance: 3 });
    expect(own.temperature).toBeUndefined();
    for (const [key, value] of [
      ['temperature', celsius(20)],
      ['reflectance', 0.1],
      ['mirroredTemperature', celsius(20)],
    ] as const) {
      refused(
        () => layer({ transmittance: 0.8, pathRadiance: 3, [key]: value } as never),
        'conflicting-inputs',
        `layer.${key}`,
        'either pathRadiance, or temperatures and a reflectance',
      );
    }
    refused(
      () => layer({ transmittance: 0.8, pathRadiance: -1 }),
      'out-of-range',
      'layer.pathRadiance',
      '≥ 0',
    );
    refused(
      () => layer({ transmittance: 0.8, pathRadiance: '3' } as never),
      'wrong-type',
      'layer.pathRadiance',
    );
    refused(() => layer({ pathRadiance: 3 } as never), 'missing-input', 'layer.transmittance');
  });
});

describe('bad input', () => {
  const temperature = celsius(20);
  const makers = [
    ['air', air],
    ['infraredWindow', infraredWindow],
    ['layer', layer],
  ] as const;

  it.each(makers)('%s: types, percents, limits', (name, make) => {
    const of = (input: unknown) => () => (make as (input: unknown) => unknown)(input);
    refused(of(undefined), 'wrong-type', name, 'an object with transmittance');
    refused(of(0.9), 'wrong-type', name);
    refused(of({ temperature }), 'missing-input', `${name}.transmittance`, 'a ratio of 0…1');
    refused(of({ transmittance: '0.9', temperature }), 'wrong-type', `${name}.transmittance`, '"0.9"');
    refused(
      of({ transmittance: 97, temperature }),
      'out-of-range',
      `${name}.transmittance`,
      '0 < transmittance ≤ 1',
      'Write 0.97 for 97 %.',
    );
    refused(of({ transmittance: 0, temperature }), 'out-of-range', `${name}.transmittance`);
    refused(of({ transmittance: -0.1, temperature }), 'out-of-range', `${name}.transmittance`);
    refused(of({ transmittance: Number.NaN, temperature }), 'not-finite', `${name}.transmittance`);
    refused(
      of({ transmittance: 0.9, temperature: 18 }),
      'out-of-range',
      `${name}.temperature`,
      'Did you mean celsius(18)?',
    );
    refused(
      of({ transmittance: 0.9, temperature: Number.POSITIVE_INFINITY }),
      'not-finite',
      `${name}.temperature`,
    );
    refused(of({ transmittance: 0.9, temperature: '18' }), 'wrong-type', `${name}.temperature`);
    refused(
      of({ transmitance: 0.9, temperature }),
      'unknown-key',
      `${name}.transmitance`,
      "Did you mean 'transmittance'?",
    );
    refused(
      of({ transmittance: { wavelength: [8, 14], value: [0.9, 97] }, temperature }),
      'out-of-range',
      `${name}.transmittance.value[1]`,
      'Write 0.97 for 97 %.',
    );
    refused(
      of({ transmittance: view([0.9], [1]), temperature }),
      'wrong-shape',
      `${name}.transmittance`,
      'two axes',
    );
  });

  it('air has no reflectance', () => {
    refused(
      () => air({ transmittance: 0.9, temperature, reflectance: 0.1 } as never),
      'unknown-key',
      'air.reflectance',
    );
  });

  it('intervals', () => {
    const of = (transmittance: unknown) => () => air({ transmittance, temperature } as never);
    refused(of({ low: 0.9, high: 0.8 }), 'out-of-range', 'air.transmittance.high');
    refused(of({ low: 0.9, high: 97 }), 'out-of-range', 'air.transmittance.high', 'Write 0.97 for 97 %.');
    refused(of({ low: '0.9', high: 1 }), 'wrong-type', 'air.transmittance.low');
    refused(of({ low: 0.9, high: 1, middle: 0.95 }), 'unknown-key', 'air.transmittance.middle');
    refused(of({ low: 0, high: 0 }), 'out-of-range', 'air.transmittance');
  });

  it('τ + ρ > 1', () => {
    const rest = { temperature, mirroredTemperature: temperature };
    refused(
      () => infraredWindow({ transmittance: 0.8, reflectance: 0.3, ...rest }),
      'out-of-range',
      'infraredWindow.reflectance',
      'transmittance + reflectance ≤ 1',
      '0.8 + 0.3',
    );
    refused(
      () => layer({ transmittance: 0.8, reflectance: { low: 0.2, high: 0.3 }, ...rest }),
      'out-of-range',
      'layer.reflectance',
    );
    refused(
      () => infraredWindow({ transmittance: 0.8, reflectance: 20, ...rest }),
      'out-of-range',
      'infraredWindow.reflectance',
      'Write 0.2 for 20 %.',
    );
    // 0.7 + 0.3 is above 1 by rounding in some orders: it is forgiven.
    expect(infraredWindow({ transmittance: 0.9, reflectance: 0.1, ...rest }).reflectance).toBe(0.1);
  });
});

describe('maps in a layer', () => {
  it('are kept by reference and read at a pixel', () => {
    const map = view(Float64Array.of(0.9, 0.8), [1, 2]);
    const own = air({ transmittance: map, temperature: K(290) });
    expect(own.transmittanceBehind([])).toBe(map);
    const model = measurementModel({ ...base, path: [own] });
    expect(model.at({ row: 0, column: 1 }).gain).toBeCloseTo(0.72, 12);
    map.data[1] = 0.5;
    expect(model.at({ row: 0, column: 1 }).gain).toBeCloseTo(0.45, 12);
    refused(() => model.gain, 'needs-pixel', 'path[0].transmittance');
    refused(
      () => model.at({ row: 0, column: 2 }),
      'out-of-range',
      'path[0].transmittance',
      'a pixel within [1, 2]',
    );
  });
});
