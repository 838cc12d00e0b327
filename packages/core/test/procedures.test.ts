import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { topHatBand } from '../src/band.js';
import { air, infraredWindow } from '../src/layer.js';
import { apparentTemperature, surfaceTemperature } from '../src/measurement.js';
import {
  emissivityByContact,
  emissivityByReference,
  reflectedTemperatureByReflector,
  reflectedTemperatureDirect,
  transmittanceByPair,
} from '../src/procedures.js';
import { type AnyKelvin, celsius } from '../src/units.js';

const band = topHatBand(8, 14);
const path = [air({ transmittance: 0.95, temperature: celsius(15) })];
const reflected = { readings: celsius(22), standardUncertainty: 1 };
/** What an instrument shows of a surface, through the path. */
const show = (temperature: number, emissivity: number, surroundings = 22): AnyKelvin =>
  apparentTemperature(celsius(temperature), {
    band,
    emissivity,
    reflectedApparentTemperature: celsius(surroundings),
    path,
  });

// Readings come from the forward model, whose outside checks are in measurement.test.ts; what is checked here is
// that each procedure undoes it, and what its uncertainty does.
describe('each procedure finds what was put in', () => {
  it('emissivity by contact, for any emissivity and temperature', () => {
    const kelvin = fc.double({ min: 40, max: 400, noNaN: true });
    fc.assert(
      fc.property(fc.double({ min: 0.2, max: 0.98, noNaN: true }), kelvin, (emissivity, temperature) => {
        const reading = { readings: show(temperature, emissivity) };
        const contact = { readings: celsius(temperature) };
        const found = emissivityByContact({
          band,
          path,
          reading,
          contact,
          reflectedApparentTemperature: { readings: celsius(22) },
        });
        expect(found.value).toBeCloseTo(emissivity, 9);
        expect(found.standardUncertainty).toBe(0);
      }),
    );
  });

  it('emissivity by a material of known emissivity', () => {
    const found = emissivityByReference({
      band,
      path,
      reading: { readings: show(80, 0.3) },
      reference: {
        reading: { readings: show(80, 0.95) },
        emissivity: { value: 0.95, standardUncertainty: 0.01 },
      },
      reflectedApparentTemperature: reflected,
      temperatureDifference: 0.5,
    });
    expect(found.value).toBeCloseTo(0.3, 9);
    expect(found.budget.map(({ name }) => name)).toContain('temperatureDifference');
  });

  it('reflected temperature by a reflector that emits a little itself', () => {
    const foil = show(25, 0.05, 40);
    const found = reflectedTemperatureByReflector({
      band,
      path,
      pathUncertainties: [{ transmittance: 0.01 }],
      reading: { readings: foil, standardUncertainty: 0.5 },
      reflector: {
        emissivity: { value: 0.05, standardUncertainty: 0.02 },
        temperature: { readings: celsius(25), standardUncertainty: 1 },
      },
    });
    expect(found.value).toBeCloseTo(313.15, 9);
    // Leaving the foil's own emission out would be off by more than what is left uncertain.
    const plain = surfaceTemperature(foil as never, {
      band,
      emissivity: 1,
      reflectedApparentTemperature: celsius(20),
      path,
    });
    expect(Math.abs(plain - 313.15)).toBeGreaterThan(0.7);
    expect(found.standardUncertainty).toBeGreaterThan(0.5);
  });

  it('reflected temperature of several directions is their mean in radiance, not in temperature', () => {
    const directions = [{ readings: celsius(-20) }, { readings: celsius(80) }];
    const found = reflectedTemperatureDirect({ band, directions });
    const mean = (band.radiance(celsius(-20)) + band.radiance(celsius(80))) / 2;
    expect(found.value).toBeCloseTo(band.temperature(mean), 9);
    expect(found.value).toBeGreaterThan(celsius(30) + 5);
  });

  it('transmittance of a window from a pair, whatever the target’s emissivity', () => {
    const window = infraredWindow({
      transmittance: 0.7,
      reflectance: 0.2,
      temperature: celsius(23),
      mirroredTemperature: celsius(30),
    });
    for (const emissivity of [0.5, 0.95]) {
      const conditions = { band, emissivity, reflectedApparentTemperature: celsius(20) };
      const found = transmittanceByPair({
        band,
        without: { readings: apparentTemperature(celsius(90), conditions) },
        through: { readings: apparentTemperature(celsius(90), { ...conditions, path: [window] }) },
        medium: { readings: celsius(23) },
        reflectance: { value: 0.2 },
        mirroredTemperature: { readings: celsius(30) },
      });
      expect(found.value).toBeCloseTo(0.7, 9);
    }
  });
});

describe('uncertainty', () => {
  const input = {
    band,
    path,
    pathUncertainties: [{ transmittance: 0.01 }],
    reading: { readings: [show(80.2, 0.62), show(80, 0.62), show(79.8, 0.62)], standardUncertainty: 0.5 },
    contact: { readings: celsius(80), standardUncertainty: 1 },
    reflectedApparentTemperature: reflected,
  };

  it('sensitivities of the emissivity by contact are those of its formula', () => {
    // ε = (L − L_r)/(L_T − L_r): ∂ε/∂T = −ε·L'(T)/(L_T − L_r), ∂ε/∂T_r = −(1 − ε)·L'(T_r)/(L_T − L_r), by hand.
    const { budget, value } = emissivityByContact(input);
    const contrast = band.radiance(celsius(80)) - band.radiance(celsius(22));
    const row = (name: string) => budget.find((one) => one.name === name)!.sensitivity;
    expect(row('contact')).toBeCloseTo((-value * band.slope(celsius(80))) / contrast, 7);
    expect(row('reflectedApparentTemperature')).toBeCloseTo(
      (-(1 - value) * band.slope(celsius(22))) / contrast,
      7,
    );
  });

  it('replicates enter as s/√n, beside what is common to them', () => {
    const { budget } = emissivityByContact(input);
    const readings = input.reading.readings;
    const mean = readings.reduce((sum, one) => sum + one, 0) / 3;
    const s = Math.sqrt(readings.reduce((sum, one) => sum + (one - mean) ** 2, 0) / 2);
    expect(budget.find(({ name }) => name === 'reading')!.standardUncertainty).toBeCloseTo(
      Math.hypot(s / Math.sqrt(3), 0.5),
      12,
    );
  });

  it('budget squares add up, shares add to 1, and the path has its row', () => {
    const { budget, standardUncertainty } = emissivityByContact(input);
    const squares = budget.reduce((sum, { contribution }) => sum + contribution ** 2, 0);
    expect(Math.sqrt(squares)).toBeCloseTo(standardUncertainty, 14);
    expect(budget.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 12);
    expect(budget.map(({ name }) => name)).toContain('path[0].transmittance');
  });
});

describe('cautions and refusals', () => {
  const reading = { readings: show(28, 0.9), standardUncertainty: 0.1 };
  const contact = { readings: celsius(28), standardUncertainty: 0.1 };
  const near = { readings: celsius(22), standardUncertainty: 0.1 };

  it('little contrast to the surroundings is said', () => {
    const { cautions } = emissivityByContact({
      band,
      path,
      reading,
      contact,
      reflectedApparentTemperature: near,
    });
    expect(cautions).toEqual([
      expect.objectContaining({ code: 'low-contrast', message: expect.stringContaining('6.0 K') }),
    ]);
  });

  it('an emissivity with U above 0.2 is refused, naming what to improve', () => {
    const coarse = { readings: celsius(28), standardUncertainty: 2 };
    expect(() =>
      emissivityByContact({ band, path, reading, contact: coarse, reflectedApparentTemperature: near }),
    ).toThrow(expect.objectContaining({ code: 'no-solution', hint: expect.stringContaining('contact') }));
  });

  it('a reading no emissivity gives is refused', () => {
    const hotter = { readings: show(60, 1) };
    expect(() =>
      emissivityByContact({ band, path, reading: hotter, contact, reflectedApparentTemperature: near }),
    ).toThrow(expect.objectContaining({ code: 'no-solution', path: 'emissivity' }));
  });

  it('a value above 1 within its uncertainty is used as 1, and said', () => {
    const contactLow = { readings: celsius(79.8), standardUncertainty: 0.5 };
    const black = { readings: show(80, 1) };
    const found = emissivityByContact({
      band,
      path,
      reading: black,
      contact: contactLow,
      reflectedApparentTemperature: near,
    });
    expect(found.value).toBe(1);
    expect(found.cautions.map(({ code }) => code)).toEqual(['above-one']);
  });

  it('replicates that scatter are said', () => {
    const shaky = { readings: [celsius(70), celsius(74), celsius(78)] };
    const { cautions } = reflectedTemperatureDirect({ band, directions: [shaky] });
    expect(cautions).toEqual([
      expect.objectContaining({ code: 'replicates-scatter', message: expect.stringContaining('4.0 K') }),
    ]);
  });

  it('a reflector whose own emission explains the reading is refused', () => {
    expect(() =>
      reflectedTemperatureByReflector({
        band,
        reading: { readings: celsius(-60) },
        reflector: { emissivity: { value: 0.5 }, temperature: { readings: celsius(60) } },
      }),
    ).toThrow(expect.objectContaining({ code: 'no-solution', path: 'reading' }));
  });

  it.each([
    ['an unknown key', { band, reading, contact, reflected: near }, 'unknown-key'],
    [
      'no readings',
      { band, reading: { readings: [] }, contact, reflectedApparentTemperature: near },
      'missing-input',
    ],
    [
      'Celsius as kelvin',
      { band, reading: { readings: 28 }, contact, reflectedApparentTemperature: near },
      'out-of-range',
    ],
    [
      'a negative uncertainty',
      { band, reading: { ...reading, standardUncertainty: -1 }, contact, reflectedApparentTemperature: near },
      'out-of-range',
    ],
    [
      'an uncertainty of a path there is not',
      {
        band,
        pathUncertainties: [{ transmittance: 0.1 }],
        reading,
        contact,
        reflectedApparentTemperature: near,
      },
      'unknown-key',
    ],
  ])('%s', (_, input, code) => {
    expect(() => emissivityByContact(input as never)).toThrow(expect.objectContaining({ code }));
  });

  it('no direction, and a reflecting medium without what it mirrors, are refused', () => {
    expect(() => reflectedTemperatureDirect({ band, directions: [] })).toThrow(
      expect.objectContaining({ code: 'missing-input' }),
    );
    const pair = { band, without: reading, through: contact, medium: near, reflectance: { value: 0.1 } };
    expect(() => transmittanceByPair(pair)).toThrow(expect.objectContaining({ path: 'mirroredTemperature' }));
  });
});
