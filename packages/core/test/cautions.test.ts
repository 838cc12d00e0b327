import { describe, expect, it } from 'vitest';
import {
  air,
  type Caution,
  type Conditions,
  calibratedBand,
  celsius,
  infraredWindow,
  layer,
  measurementModel,
  measurementResult,
  recorrection,
  recorrectionResult,
  topHatBand,
  view,
} from '../src/index.js';
import { K } from './support/measurement.js';

const base: Conditions = {
  band: topHatBand(8, 14),
  emissivity: 0.9,
  reflectedApparentTemperature: celsius(20),
};
const of = (changes: Partial<Conditions>, apparent = 62.4): readonly Caution[] =>
  measurementResult(celsius(apparent), { ...base, ...changes }).cautions;
const only = (cautions: readonly Caution[]): Caution => {
  expect(cautions).toHaveLength(1);
  return cautions[0]!;
};
const window = infraredWindow({
  transmittance: 0.7,
  reflectance: 0.2,
  temperature: celsius(22),
  mirroredTemperature: celsius(22),
});

describe('every caution, with its message and what to do', () => {
  it('none for an ordinary reading', () => {
    expect(of({})).toEqual([]);
    expect(measurementModel(base).surfaceFrame(view([335], [1, 1])).cautions).toEqual([]);
  });

  it('low-emissivity, below 0.5 (common practice, no source)', () => {
    const caution = only(of({ emissivity: 0.49 }, 100));
    expect(caution.code).toBe('low-emissivity');
    expect(caution.message).toContain('Emissivity 0.49 is below 0.5');
    expect(caution.remedy).toContain('coated or taped spot');
    expect(of({ emissivity: 0.5 }, 100)).toEqual([]);
  });

  it('reflected-dominates, beyond half of the radiance', () => {
    const caution = only(of({ emissivity: 0.5, reflectedApparentTemperature: celsius(80) }, 70));
    expect(caution.code).toBe('reflected-dominates');
    expect(caution.message).toMatch(/^\d\d % of the radiance is reflected from the surroundings\.$/);
    expect(caution.remedy).toContain('shield the surroundings');
    // The percentage is the share of the term: 0.5·L(80 °C)/L(70 °C).
    const share = (0.5 * base.band.radiance(celsius(80))) / base.band.radiance(celsius(70));
    expect(caution.message).toContain(`${Math.round(100 * share)} %`);
    expect(of({ emissivity: 0.5, reflectedApparentTemperature: celsius(60) }, 70)).toEqual([]);
  });

  it('steep-view-angle, beyond 60° (common practice, no source)', () => {
    const caution = only(of({ viewAngle: 61 }));
    expect(caution.code).toBe('steep-view-angle');
    expect(caution.message).toContain('61° from the normal');
    expect(caution.remedy).toContain('more squarely');
    expect(of({ viewAngle: 60 })).toEqual([]);
  });

  it('window-reflected-place, when nothing says where, and when it was at the instrument', () => {
    const silent = only(of({ path: [window], emissivity: 0.98 }, 50));
    expect(silent.code).toBe('window-reflected-place');
    expect(silent.message).toContain('nothing says where');
    expect(silent.remedy).toContain('reflectedMeasuredAt: "target"');
    const wrong = only(of({ path: [window], emissivity: 0.98, reflectedMeasuredAt: 'instrument' }, 50));
    expect(wrong.message).toContain('on the instrument side of a window');
    expect(of({ path: [window], emissivity: 0.98, reflectedMeasuredAt: 'target' }, 50)).toEqual([]);
    expect(of({ path: [air({ transmittance: 0.9, temperature: celsius(20) })] }, 50)).toEqual([]);
  });

  it('inter-reflection, above 0.2 K: (1 − ε)·ρ·(L_leaving − L_reflected)/(ε·dL/dT)', () => {
    const conditions: Partial<Conditions> = {
      emissivity: 0.6,
      path: [window],
      reflectedMeasuredAt: 'target',
    };
    const result = measurementResult(celsius(60), { ...base, ...conditions });
    const caution = only(result.cautions);
    expect(caution.code).toBe('inter-reflection');
    const { band } = base;
    const [target, reflected] = [band.radiance(result.temperature), band.radiance(celsius(20))];
    const leaving = 0.6 * target + 0.4 * reflected;
    const size = (0.4 * 0.2 * (leaving - reflected)) / (0.6 * band.slope(result.temperature));
    expect(caution.message).toContain(`up to ${size.toFixed(1)} K`);
    expect(caution.remedy).toContain('Tilt the window');
    expect(of({ ...conditions, emissivity: 0.98 }, 60)).toEqual([]); // 0.02·0.2: a few hundredths of a kelvin
    // A window that does not mirror, and a curve of emissivity, say nothing of it.
    const clear = infraredWindow({ transmittance: 0.7, temperature: celsius(22) });
    expect(of({ ...conditions, path: [clear] }, 60)).toEqual([]);
    expect(of({ ...conditions, emissivity: { wavelength: [8, 14], value: [0.6, 0.6] } }, 60)).toEqual([]);
  });

  it('saturated, at either end of the measuring range', () => {
    const instrument = { measuringRange: { from: celsius(-20), to: celsius(120) } };
    for (const apparent of [-20, 120, 121]) {
      const caution = only(of({ instrument }, apparent));
      expect(caution.code).toBe('saturated');
      expect(caution.message).toContain('The reading is at an end of the measuring range');
      expect(caution.remedy).toContain('another measuring range');
    }
    expect(of({ instrument }, 119.9)).toEqual([]);
    const frame = measurementModel({ ...base, instrument }).surfaceFrame(view([393.15, 394, 330], [3]));
    expect(only(frame.cautions).message).toContain('2 pixels are at an end');
  });

  it('outside-proven-range: of the band, and of the result', () => {
    const wide = only(of({ band: topHatBand(1.6, 5) }));
    expect(wide.code).toBe('outside-proven-range');
    expect(wide.message).toContain('1.6…5 µm is outside 2…15 µm');
    expect(wide.remedy).toContain('independent calculation');
    expect(only(of({ band: topHatBand(8, 16) })).message).toContain('8…16 µm');
    expect(of({ band: topHatBand(2, 15) })).toEqual([]);
    expect(of({ band: calibratedBand({ form: 'k1k2', k1: 774.8853, k2: 1321.0789 }) })).toEqual([]);
    const black = { emissivity: 1 };
    expect(only(of(black, 2001)).message).toContain('2001.0 °C is outside −40…2000 °C');
    expect(only(of(black, -40.5)).message).toContain('-40.5 °C');
    expect(of(black, 1999)).toEqual([]);
  });

  it('recorded-rounded, for a result and for a frame', () => {
    const recorded = { emissivity: 0.95, reflectedApparentTemperature: celsius(20), resolution: 0.1 };
    const caution = only(recorrectionResult(celsius(62.4), recorded, base).cautions);
    expect(caution.code).toBe('recorded-rounded');
    expect(caution.message).toContain('steps of 0.1 K');
    expect(caution.remedy).toContain('Half a step is in the budget');
    expect(only(recorrection(recorded, base).surfaceFrame(view([335], [1])).cautions)).toEqual(caution);
  });
});

describe('cautions together', () => {
  it('are all told, conditions first, and are frozen plain data', () => {
    const cautions = of(
      {
        emissivity: 0.3,
        reflectedApparentTemperature: celsius(70),
        viewAngle: 70,
        path: [window],
        instrument: { measuringRange: { from: celsius(-20), to: celsius(50) } },
      },
      60,
    );
    expect(cautions.map(({ code }) => code)).toEqual([
      'low-emissivity',
      'steep-view-angle',
      'window-reflected-place',
      'reflected-dominates',
      'saturated',
      'inter-reflection',
    ]);
    expect(Object.isFrozen(cautions)).toBe(true);
    expect(JSON.parse(JSON.stringify(cautions))).toEqual(cautions);
    for (const { message, remedy } of cautions) {
      expect(message).toMatch(/\.$/);
      expect(remedy).toMatch(/\.$/);
    }
  });

  it('of a frame are those of the conditions: an emissivity that is a map is not judged as one number', () => {
    const model = measurementModel({ ...base, emissivity: view([0.3], [1, 1]), viewAngle: 70 });
    expect(model.surfaceFrame(view([K(350)], [1, 1])).cautions.map(({ code }) => code)).toEqual([
      'steep-view-angle',
    ]);
    const plain = layer({ transmittance: 0.9, temperature: celsius(20) });
    expect(of({ path: [plain] }, 50)).toEqual([]);
  });
});
