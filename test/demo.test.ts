import { execFileSync } from 'node:child_process';
import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import { readFrames } from '@graybody/arrays';
import { measurementModel, topHatBand } from '@graybody/core';
import { recompute } from '@graybody/core/record';
import { beforeAll, describe, expect, it } from 'vitest';
import { correctScene, type Omission, scenes } from '../docs/demo/src/inspection.js';
import { satelliteScene } from '../docs/demo/src/satellite.js';
import { root } from './support/examples.js';

/** Regions whose mean error is beyond three standard errors of that mean. */
async function regionsOff(
  scene: (typeof scenes)[number],
  source: 'apparent' | 'recorded',
  omission: Omission = 'nothing',
) {
  const { regions } = await correctScene(scene, source, omission);
  return regions
    .filter(({ error, standardError }) => Math.abs(error) > 3 * standardError)
    .map(({ name }) => name);
}

// Truth, noise and blur by fixtures/generate/ice_works.py, which shares no code with the library.
describe.each(scenes)('ice works, %s: synthetic frames whose truth is known', (scene) => {
  it('every region is recovered within 3 standard errors', async () => {
    expect(await regionsOff(scene, 'apparent')).toEqual([]);
  });

  it('every region is recovered from frames recorded with wrong settings', async () => {
    expect(await regionsOff(scene, 'recorded')).toEqual([]);
  });

  it.each(['emissivity', 'reflected temperature'] as const)(
    'leaving out the %s is seen in every region',
    async (omission) => {
      const { regions } = await correctScene(scene);
      expect(await regionsOff(scene, 'apparent', omission)).toHaveLength(regions.length);
    },
  );

  it('no region is off by more than its expanded uncertainty', async () => {
    for (const { error, result } of (await correctScene(scene)).regions) {
      expect(Math.abs(error)).toBeLessThan(result!.expandedUncertainty!);
    }
  });
});

it('leaving out the window is seen in every region behind it, and in no other', async () => {
  const off = await regionsOff('switch-cabinet', 'apparent', 'window');
  const { regions } = await correctScene('switch-cabinet');
  expect(off).toEqual(regions.map(({ name }) => name).filter((name) => !name.startsWith('door')));
});

it('saturated pixels keep their value and are flagged, in apparent and in recorded frames', async () => {
  const { saturated_pixels_per_frame: expected } = JSON.parse(
    readFileSync(join(root, 'fixtures/ice-works/compressor/scene.json'), 'utf8'),
  ) as { saturated_pixels_per_frame: number[] };
  const total = expected.reduce((sum, count) => sum + count, 0);
  expect((await correctScene('compressor')).surface.counts.saturated).toBe(total);
  expect((await correctScene('compressor', 'recorded')).surface.counts.saturated).toBe(total);
});

describe('the real two-band scene', () => {
  const expected = JSON.parse(readFileSync(join(root, 'fixtures/satellite/expected.json'), 'utf8')) as {
    bands: { brightness_temperature_K: Figures; surface_temperature_K: Figures }[];
  };
  interface Figures {
    readonly least: number;
    readonly greatest: number;
    readonly mean: number;
    readonly at_20_20: number;
  }

  // NumPy from the counts (fixtures/satellite/README.md). Half a float32 step at 300 K is 1.5e-5 K.
  it('brightness and surface temperatures agree with NumPy to 5e-5 K', async () => {
    const bands = await satelliteScene();
    expect(bands.length).toBe(2);
    bands.forEach(({ brightness, meanBrightness, surface, meanSurface }, i) => {
      const figures = expected.bands[i]!;
      const centre = 20 * 41 + 20;
      expect(meanBrightness).toBeCloseTo(figures.brightness_temperature_K.mean, 4);
      expect(brightness.data[centre]!).toBeCloseTo(figures.brightness_temperature_K.at_20_20, 4);
      expect(Math.min(...brightness.data)).toBeCloseTo(figures.brightness_temperature_K.least, 4);
      expect(Math.max(...brightness.data)).toBeCloseTo(figures.brightness_temperature_K.greatest, 4);
      expect(meanSurface).toBeCloseTo(figures.surface_temperature_K.mean, 4);
      expect(surface.temperature.data[centre]!).toBeCloseTo(figures.surface_temperature_K.at_20_20, 4);
    });
  });

  it('the atmosphere is marked as assumed in the record, and the record re-computes', async () => {
    for (const { result } of await satelliteScene()) {
      const { origins } = result.record.conditions;
      expect(Object.values(origins ?? {}).every((text) => text.startsWith('assumed:'))).toBe(true);
      expect(recompute(JSON.parse(JSON.stringify(result))).temperature).toBeCloseTo(result.temperature, 9);
      expect(result.expandedUncertainty).toBeGreaterThan(5);
    }
  });
});

describe('npm run demo', () => {
  let printed = '';
  beforeAll(() => {
    printed = execFileSync(process.execPath, [join(root, 'docs/demo/dist/main.js')], { encoding: 'utf8' });
  }, 60_000);

  it('prints the difference of the bands, and true, apparent and recovered temperatures', () => {
    expect(printed).toMatch(/difference of the bands -?\d+\.\d\d K/);
    expect(printed).toMatch(/joint L3 bare +81\.40 +47\.1\d +81\.40/);
    expect(printed).toContain('qualified people');
  });

  it('writes arrays that say what they hold: correcting them again is refused', async () => {
    const model = measurementModel({ band: topHatBand(8, 14), emissivity: 0.9, reflectedRadiance: 0 });
    for (const name of ['compressor-surface.tif', 'compressor-surface.npy']) {
      const frames = await readFrames(join(root, 'demo-output', name));
      expect(frames.quantity).toBe('surface temperature');
      expect(() => model.surfaceFrame(frames)).toThrow(
        expect.objectContaining({ code: 'already-corrected' }),
      );
    }
  });

  it('writes pictures that are complete in themselves', () => {
    for (const name of ['satellite', ...scenes]) {
      const svg = readFileSync(join(root, 'demo-output', `${name}.svg`), 'utf8');
      expect(svg).toMatch(/^<svg /);
      expect(svg).toContain('<title id="title">');
      expect(svg).not.toMatch(/(?:href|src)="(?!data:)/);
      expect(svg.match(/°C/g)!.length).toBeGreaterThan(1);
    }
    expect(existsSync(join(root, 'demo-output/compressor-records.json'))).toBe(true);
  });
});
