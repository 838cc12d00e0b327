import { calibratedBand, frameFlag, measurementModel, topHatBand, view } from '@graybody/core';
import { describe, expect, it } from 'vitest';
import { readFrames } from '../src/frames.js';
import { writeFlags, writeFrames } from '../src/write.js';
import { codeOf, errorOf, inFolder } from './support/fixtures.js';
import { npyOf } from './support/npy-of.js';

const apparent = { quantity: 'apparent temperature' } as const;

describe('calibration', () => {
  const band = calibratedBand({ form: 'k1k2', k1: 774.8853, k2: 1321.0789, radianceUnit: 'W·m⁻²·sr⁻¹·µm⁻¹' });

  it('counts through scale, offset and band are apparent temperature; what has no solution is counted', async () => {
    const frames = await readFrames(await npyOf([28581, 0, -32768], 'i2'), {
      band,
      scale: 3.342e-4,
      offset: -0.1,
      noData: -32768,
    });
    expect([frames.quantity, frames.unit, frames.dataType]).toEqual(['apparent temperature', 'K', 'float32']);
    const radiance = 28581 * 3.342e-4 - 0.1;
    expect(frames.array.data[0]).toBeCloseTo(1321.0789 / Math.log(774.8853 / radiance + 1), 3);
    expect([frames.missing, frames.unsolved]).toEqual([1, 1]);
    expect(frames.array.data[1]).toBeNaN();
  });

  it('stored counts of ours become radiance with scale and offset, and say so', async () => {
    const counts = view(Uint16Array.of(100, 200), [1, 2]);
    const bytes = await writeFrames('bytes', { array: counts, quantity: 'counts' }, { format: 'tiff' });
    const radiance = await readFrames(bytes, { scale: 0.1, offset: 1 });
    expect([radiance.quantity, Array.from(radiance.array.data)]).toEqual(['band radiance', [11, 21]]);
    const apparentFrames = await readFrames(bytes, { scale: 0.1, offset: 1, band: topHatBand(8, 14) });
    expect(apparentFrames.quantity).toBe('apparent temperature');
    const kelvin = await readFrames(bytes, { ...apparent, scale: 1, offset: 100, unit: 'K' });
    expect(Array.from(kelvin.array.data)).toEqual([200, 300]);
    expect(await codeOf(readFrames(bytes, apparent))).toBe('wrong-quantity');
    expect(await codeOf(readFrames(bytes, { quantity: 'counts', scale: 2 }))).toBe('wrong-option');
  });

  it('stored radiance of ours becomes apparent temperature with its band only', async () => {
    const flat = topHatBand(8, 14);
    const array = view(Float32Array.of(53.1), [1, 1]);
    const frames = { array, quantity: 'band radiance', unit: flat.radianceUnit } as const;
    const bytes = await writeFrames('bytes', frames, { format: 'tiff' });
    expect((await readFrames(bytes)).unit).toBe('W·m⁻²·sr⁻¹');
    const read = await readFrames(bytes, { band: flat });
    expect(read.array.data[0]).toBeCloseTo(flat.temperature(Math.fround(53.1)), 3);
    expect(await codeOf(readFrames(bytes, { band }))).toBe('wrong-unit');
    expect(await codeOf(readFrames(bytes, { ...apparent }))).toBe('wrong-quantity');
    expect(await codeOf(readFrames(bytes, { scale: 2 }))).toBe('wrong-option');
  });
});

describe('quantity', () => {
  it('must be said where the file does not', async () => {
    const error = await errorOf(readFrames(await npyOf([293]), { unit: 'K' }));
    expect(error.code).toBe('missing-option');
    expect(error.path).toBe('quantity');
    expect(
      (await readFrames(await npyOf([293]), { unit: 'K', otherwise: 'recorded temperature' })).quantity,
    ).toBe('recorded temperature');
    expect(
      await codeOf(readFrames(await npyOf([293]), { unit: 'K', otherwise: 'temperature' as never })),
    ).toBe('wrong-option');
  });

  it.each(['npy', 'tif', 'csv'])(
    'a corrected frame read from .%s is refused by a correction',
    async (ending) => {
      await inFolder(async (folder) => {
        const model = measurementModel({ band: topHatBand(8, 14), emissivity: 0.9, reflectedRadiance: 40 });
        const surface = model.surfaceFrame(view(Float32Array.of(300, 310, Number.NaN, 320), [2, 2]));
        const path = `${folder}/surface.${ending}`;
        await writeFrames(path, surface, { provenance: 'test' });
        for (const options of [{}, { otherwise: 'apparent temperature' }] as const) {
          const frames = await readFrames(path, options);
          expect([frames.quantity, frames.unit, frames.missing]).toEqual(['surface temperature', 'K', 1]);
          expect(frames.conversion.declaredBy).toBe('file');
          expect(frames.metadata.provenance).toBe('test');
          expect(() => model.surfaceFrame(frames)).toThrow(
            expect.objectContaining({ code: 'already-corrected' }),
          );
        }
        const error = await errorOf(readFrames(path, apparent));
        expect(error.code).toBe('wrong-quantity');
        expect(error.hint).toContain('corrected already');
        expect(await codeOf(readFrames(path, { unit: 'degC' }))).toBe('wrong-unit');
        expect(await codeOf(readFrames(path, { scale: 0.1 }))).toBe('wrong-quantity');
        expect((await readFrames(path, { unit: 'kelvin', quantity: 'surface temperature' })).unit).toBe('K');
      });
    },
  );

  it('reason codes are read back as counts and as nothing else', async () => {
    const flags = view(Uint8Array.of(0, frameFlag.missing, frameFlag.saturated, 6), [2, 2]);
    await inFolder(async (folder) => {
      for (const ending of ['npy', 'tif', 'csv']) {
        await writeFlags(`${folder}/flags.${ending}`, flags);
        const frames = await readFrames(`${folder}/flags.${ending}`);
        expect([frames.quantity, frames.dataType, frames.metadata.content]).toEqual([
          'counts',
          'uint8',
          'flags',
        ]);
        expect(frames.array.data).toEqual(flags.data);
        expect(frames.metadata.provenance).toEqual({ codes: frameFlag });
        const error = await errorOf(
          readFrames(`${folder}/flags.${ending}`, { ...apparent, unit: 'K', scale: 1 }),
        );
        expect(error.message).toContain('reason codes');
      }
    });
  });
});
