import { readFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { gzipSync } from 'node:zlib';
import { build } from 'vite';
import { describe, expect, it } from 'vitest';
import * as root from '../src/index.js';
import * as record from '../src/record.js';

const path = (name: string): string => fileURLToPath(new URL(name, import.meta.url));

/** One file with everything an entry needs, nothing left outside. */
async function bundled(
  entry: string,
): Promise<{ readonly code: string; readonly modules: readonly string[] }> {
  const result = await build({
    configFile: false,
    logLevel: 'silent',
    build: {
      write: false,
      minify: true,
      lib: { entry: path(`../src/${entry}`), formats: ['es'], fileName: 'bundle' },
    },
  });
  const outputs = (Array.isArray(result) ? result : [result]).flatMap((one) =>
    'output' in one ? one.output : [],
  );
  expect(outputs).toHaveLength(1);
  const chunk = outputs[0]!;
  if (chunk.type !== 'chunk') throw new Error('expected one chunk of code');
  expect(chunk.imports).toEqual([]);
  expect(chunk.dynamicImports).toEqual([]);
  return { code: chunk.code, modules: chunk.moduleIds };
}

describe('the public surface is this list: a name more or less is a decision', () => {
  it("'@graybody/core'", () => {
    expect(Object.keys(root).sort()).toEqual([
      'MeasurementError',
      'air',
      'apparentFrame',
      'apparentTemperature',
      'bandFraction',
      'bandFromDescriptor',
      'blackbodyExitance',
      'boltzmannConstant',
      'calibratedBand',
      'cautionCodes',
      'celsius',
      'conditionsDocument',
      'describe',
      'ellipse',
      'emissivityByContact',
      'emissivityByReference',
      'fahrenheit',
      'firstRadiationConstant',
      'firstRadiationConstantRadiance',
      'frameBuffer',
      'frameFlag',
      'infraredWindow',
      'isBand',
      'isMeasurementError',
      'isView',
      'kelvin',
      'layer',
      'mapFromRegions',
      'maskRegion',
      'measurementErrorCodes',
      'measurementModel',
      'measurementResult',
      'monochromaticBand',
      'peakWavelength',
      'planckConstant',
      'polygon',
      'quantities',
      'recorrection',
      'recorrectionResult',
      'rectangle',
      'reflectedTemperatureByReflector',
      'reflectedTemperatureDirect',
      'regionMask',
      'rowMajorStride',
      'sampledBand',
      'secondRadiationConstant',
      'softwareVersion',
      'spectralPhotonRadiance',
      'spectralRadiance',
      'spectralRadiancePerWavenumber',
      'spectralRadianceSlope',
      'spectralTemperature',
      'speedOfLight',
      'stefanBoltzmannConstant',
      'surfaceFrameByArea',
      'surfaceTemperature',
      'toCelsius',
      'toFahrenheit',
      'topHatBand',
      'transmittanceByPair',
      'view',
      'wavelengthFromWavenumber',
      'wavenumberFromWavelength',
      'wienDisplacementConstant',
      'zeroCelsius',
    ]);
  });

  it("'@graybody/core/record'", () => {
    expect(Object.keys(record).sort()).toEqual([
      'conditionsJsonSchema',
      'conditionsSchema',
      'describedModels',
      'readConditionsDocument',
      'recompute',
      'resultJsonSchema',
      'resultSchema',
    ]);
  });

  it('nothing is a default export, and every subpath of package.json has its source', () => {
    expect(root).not.toHaveProperty('default');
    expect(record).not.toHaveProperty('default');
    const { exports: map } = JSON.parse(readFileSync(path('../package.json'), 'utf8')) as {
      exports: Record<string, string | { types: string; default: string }>;
    };
    for (const [subpath, target] of Object.entries(map)) {
      if (typeof target === 'string') continue;
      expect(target.types, subpath).toBe(target.default.replace(/\.js$/, '.d.ts'));
      const source = target.default.replace('./dist/', '../src/').replace(/\.js$/, '.ts');
      expect(readFileSync(path(source), 'utf8').length, subpath).toBeGreaterThan(0);
    }
  });
});

describe('bundled', () => {
  it('the root import has no dependency, no node: module, no zod and no table of air data', async () => {
    const { code, modules } = await bundled('index.ts');
    // As booleans: a failure should not print the whole bundle.
    expect(/^\s*import\b|\bimport\s*\(|\brequire\s*\(/m.test(code)).toBe(false);
    expect(/["'`]node:/.test(code)).toBe(false);
    expect(/zod/i.test(code)).toBe(false);
    expect(modules.filter((id) => id.includes('node_modules'))).toEqual([]);
    expect(modules.some((id) => id.endsWith('/humid-air-data.ts'))).toBe(false);
    expect(modules.some((id) => id.endsWith('/measurement.ts'))).toBe(true); // so that the bundle is the library
    const size = gzipSync(code).length;
    console.info(`@graybody/core, minified and gzipped: ${(size / 1024).toFixed(1)} kB`);
    expect(size).toBeLessThan(30 * 1024);
    expect(/\bnew Function\b|\beval\(/.test(code)).toBe(false); // a strict content security policy forbids both
  });

  it('a user of one function gets little more than that function', async () => {
    const whole = gzipSync((await bundled('index.ts')).code).length;
    const units = gzipSync((await bundled('units.ts')).code).length;
    expect(units).toBeLessThan(whole / 5);
  });

  it('the record subpath is the one that brings zod', async () => {
    const { modules } = await bundled('record.ts');
    expect(modules.some((id) => id.includes('node_modules/zod'))).toBe(true);
    expect(modules.filter((id) => id.includes('node_modules') && !id.includes('node_modules/zod'))).toEqual(
      [],
    );
  });
});
