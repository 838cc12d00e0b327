import { pathToFileURL } from 'node:url';
import { calibratedBand, frameFlag, measurementModel, topHatBand, view } from '@graybody/core';
import { describe, expect, it } from 'vitest';
import { openFrames, type ReadOptions, readFrames } from '../src/frames.js';
import { writeFlags, writeFrames } from '../src/write.js';
import { codeOf, errorOf, fixture, fixtureBytes, inFolder } from './support/fixtures.js';

/** NPY bytes of a frame of plain numbers, without a description. */
async function npyOf(
  numbers: readonly number[],
  type: 'f4' | 'f8' | 'i2' | 'u2' = 'f8',
): Promise<Uint8Array> {
  const arrays = { f4: Float32Array, f8: Float64Array, i2: Int16Array, u2: Uint16Array };
  const array = view(arrays[type].from(numbers), [1, numbers.length]);
  return writeFrames('bytes', array, { format: 'npy', quantity: 'counts', metadata: 'drop' });
}

const apparent = { quantity: 'apparent temperature' } as const;

async function read(
  numbers: readonly number[],
  options: ReadOptions,
  type?: 'f4' | 'f8' | 'i2' | 'u2',
): Promise<number[]> {
  const frames = await readFrames(await npyOf(numbers, type), options);
  return Array.from(frames.array.data);
}

describe('unit', () => {
  it.each([
    ['K', [293.15], [293.15]],
    ['kelvin', [293.15], [293.15]],
    ['degC', [20], [293.15]],
    ['°C', [20], [293.15]],
    ['Celsius', [-40], [233.15]],
    ['degrees_celsius', [100], [373.15]],
    ['degF', [68], [293.15]],
    ['°F', [-40], [233.15]],
    ['fahrenheit', [212], [373.15]],
  ])('%s becomes kelvin', async (unit, numbers, kelvin) => {
    const values = await read(numbers, { ...apparent, unit });
    values.forEach((value, i) => {
      expect(value).toBeCloseTo(kelvin[i]!, 10);
    });
  });

  it('a temperature without a unit is refused with the question and what the numbers look like', async () => {
    const error = await errorOf(read([18, 63.25], apparent));
    expect(error.code).toBe('missing-option');
    expect(error.message).toBe(
      "unit: expected to be told the unit of apparent temperature, as the file does not say. The first frame holds 18…63.25: write { unit: 'K' }, { unit: 'degC' } or { unit: 'degF' }.",
    );
    expect((await errorOf(read([280, 310], apparent))).hint).toContain('could be kelvin');
    expect((await errorOf(read([28000, 31000], apparent))).hint).toContain('looks scaled');
    expect((await errorOf(read([Number.NaN], apparent))).hint).toContain('no number');
    expect((await errorOf(read([-9999, 20], { ...apparent, noData: -9999 }))).hint).toContain('20…20');
  });

  it.each([
    ['kelvins?', 'wrong-unit'],
    ['centikelvin', 'wrong-unit'],
    ['W', 'wrong-unit'],
    ['', 'wrong-unit'],
  ])("unit '%s' is refused", async (unit, code) => {
    expect(await codeOf(read([293], { ...apparent, unit }))).toBe(code);
  });

  it('a radiance has the unit of its band, or the one given', async () => {
    const band = topHatBand(8, 14);
    const radiance = { quantity: 'band radiance' } as const;
    const bytes = await npyOf([40, 50]);
    expect((await readFrames(bytes, radiance)).unit).toBeUndefined();
    expect((await readFrames(bytes, { ...radiance, band })).unit).toBe('W·m⁻²·sr⁻¹');
    expect((await readFrames(bytes, { ...radiance, unit: 'signal' })).unit).toBe('signal');
    expect(await codeOf(readFrames(bytes, { ...radiance, unit: 'signal', band }))).toBe('wrong-unit');
    expect(await codeOf(readFrames(bytes, { ...radiance, unit: 'K' }))).toBe('wrong-unit');
    expect(await codeOf(readFrames(bytes, { band, unit: 'degC' }))).toBe('wrong-unit');
  });
});

describe('plausibility', () => {
  it.each([
    ['degC', [240, 300], /look like kelvin: write \{ unit: 'K' \}/],
    ['degF', [240, 300], /look like kelvin/],
    ['K', [18, 63], /look like degrees Celsius or Fahrenheit/],
    ['K', [-12, 63], /look like degrees Celsius: write \{ unit: 'degC' \}/],
    ['K', [29315, 30000], /look like scaled numbers: write \{ scale, offset \}/],
    ['degC', [29315, 30000], /look like scaled numbers/],
    ['degF', [29315, 30000], /look like scaled numbers/],
    ['degC', [-9999, 20], /write \{ noData: -9999 \}/],
    ['K', [-9999, 293], /write \{ noData: -9999 \}/],
    ['degF', [-9999, 68], /write \{ noData: -9999 \}/],
  ])('%s of %j is refused with the option that settles it', async (unit, numbers, hint) => {
    const error = await errorOf(read(numbers, { ...apparent, unit }));
    expect(error.code).toBe('implausible');
    expect(error.message).toMatch(hint);
    expect(error.path).toBe('bytes: frame 0');
  });

  it.each([
    ['degC', [-20, 311]],
    ['degC', [150, 320]],
    ['degF', [-4, 100]],
    ['K', [150, 3500]],
    ['K', [100, 293]],
  ])('%s of %j is taken', async (unit, numbers) => {
    expect(await read(numbers, { ...apparent, unit })).toHaveLength(2);
  });

  it("plausibility 'accept' takes a hot scene in degrees Celsius, but nothing below absolute zero", async () => {
    const accept = { ...apparent, plausibility: 'accept' } as const;
    expect(await read([240, 300], { ...accept, unit: 'degC' })).toEqual([513.15, 573.15]);
    expect(await read([18, 63], { ...accept, unit: 'K' })).toEqual([18, 63]);
    expect(await codeOf(read([-300], { ...accept, unit: 'degC' }))).toBe('implausible');
    expect(await codeOf(read([20], { ...apparent, unit: 'degC', plausibility: 'maybe' as never }))).toBe(
      'wrong-option',
    );
  });

  it('a later frame may pass through the doubtful range; below absolute zero it may not', async () => {
    const stack = view(Float64Array.of(100, 250, -300), [3, 1, 1]);
    const bytes = await writeFrames('bytes', stack, { format: 'npy', quantity: 'counts', metadata: 'drop' });
    const source = await openFrames(bytes, { ...apparent, unit: 'degC' });
    await source.read(0);
    expect((await source.read(1)).array.data[0]).toBeCloseTo(523.15, 10);
    expect(await codeOf(source.read(2))).toBe('implausible');
    expect(await codeOf((await openFrames(bytes, { ...apparent, unit: 'degC' })).read(1))).toBe(
      'implausible',
    );
  });

  it('a first frame without a number settles nothing', async () => {
    const stack = view(Float64Array.of(Number.NaN, 250), [2, 1, 1]);
    const bytes = await writeFrames('bytes', stack, { format: 'npy', quantity: 'counts', metadata: 'drop' });
    expect(await codeOf(readFrames(bytes, { ...apparent, unit: 'degC' }))).toBe('implausible');
  });
});

describe('scale, offset, no-data', () => {
  it('are applied once, in that order, and reported', async () => {
    const options = { ...apparent, unit: 'degC', scale: 0.01, offset: -40, noData: [-32768, 32767] } as const;
    const frames = await readFrames(await npyOf([-32768, 6240, 32767, 0], 'i2'), options);
    expect(frames.dataType).toBe('float32');
    expect(Array.from(frames.array.data).map((value) => Number(value.toFixed(3)))).toEqual([
      Number.NaN,
      295.55,
      Number.NaN,
      233.15,
    ]);
    expect(frames.missing).toBe(2);
    expect(frames.missingMask).toBeUndefined();
    expect(frames.conversion).toEqual({
      storedDataType: 'int16',
      scale: 0.01,
      offset: -40,
      noData: [-32768, 32767],
      noDataFrom: 'caller',
      unit: 'degC',
      declaredBy: 'caller',
      band: undefined,
    });
  });

  it('a no-data number of float32 is met as it was rounded', async () => {
    const frames = await readFrames(await npyOf([293, -3.4e38, 1e20], 'f4'), {
      ...apparent,
      unit: 'K',
      noData: [-3.4e38, 1e20],
    });
    expect(frames.missing).toBe(2);
    const one = await readFrames(await npyOf([293, 0.1], 'f4'), { ...apparent, unit: 'K', noData: 0.1 });
    expect(one.missing).toBe(1);
  });

  it('counts keep their type, with a mask of what is missing', async () => {
    const frames = await readFrames(await npyOf([5, 65535, 7], 'u2'), { quantity: 'counts', noData: 65535 });
    expect(frames.array.data).toEqual(Uint16Array.of(5, 65535, 7));
    expect([frames.unit, frames.dataType, frames.missing]).toEqual(['1', 'uint16', 1]);
    expect(frames.missingMask?.data).toEqual(Uint8Array.of(0, 1, 0));
    expect(frames.missingMask?.shape).toEqual([1, 1, 3]);
    expect((await readFrames(await npyOf([5], 'u2'), { quantity: 'counts' })).missingMask).toBeUndefined();
  });

  it('float64 and 32-bit integers come out as float64, the rest as float32', async () => {
    const types = {
      'f8.npy': 'float64',
      'i4.npy': 'float64',
      'i8.npy': 'float64',
      'u2.npy': 'float32',
      'f2.npy': 'float32',
    };
    for (const [file, type] of Object.entries(types)) {
      const source = await openFrames(fixture(`arrays/${file}`), { quantity: 'band radiance' });
      expect(source.dataType, file).toBe(type);
      await source.close();
    }
  });

  it.each([
    [{ quantity: 'counts', scale: 2 }, 'scale'],
    [{ quantity: 'counts', band: topHatBand(8, 14) }, 'band'],
    [{ quantity: 'counts', unit: 'K' }, 'unit'],
    [{ quantity: 'surface temperature', unit: 'K', band: topHatBand(8, 14) }, 'band'],
    [{ ...apparent, unit: 'K', scale: 0 }, 'scale'],
    [{ ...apparent, unit: 'K', scale: Number.NaN }, 'scale'],
    [{ ...apparent, unit: 'K', offset: '3' }, 'offset'],
    [{ ...apparent, unit: 'K', noData: '-9999' }, 'noData'],
    [{ ...apparent, unit: 'K', band: { kind: 'top-hat', from: 8, to: 14 } }, 'band'],
    [{ quantity: 'temperature', unit: 'K' }, 'quantity'],
    [{ ...apparent, unit: 'K', dataset: 'frames' }, 'dataset'],
    [{ ...apparent, unit: 'K', table: { decimal: '·' } }, 'table.decimal'],
    [{ ...apparent, unit: 'K', limits: { bytes: -1 } }, 'limits.bytes'],
  ])('%j is a wrong option', async (options, path) => {
    const error = await errorOf(readFrames(await npyOf([293]), options as ReadOptions));
    expect(error.code).toBe('wrong-option');
    expect(error.path).toBe(path);
  });

  it.each([
    [{ quantities: 'counts' }, "Did you mean 'quantity'?"],
    [{ no_data: 3 }, "Did you mean 'noData'?"],
    [{ limits: { byte: 3 } }, "Did you mean 'bytes'?"],
    [{ zzzzzzzzzzz: 3 }, undefined],
  ])('%j is an unknown option', async (options, hint) => {
    const error = await errorOf(readFrames(await npyOf([293]), options as ReadOptions));
    expect(error.code).toBe('unknown-option');
    expect(error.hint).toBe(hint);
  });

  it('options that are no object', async () => {
    expect(await codeOf(readFrames(await npyOf([293]), 'K' as never))).toBe('wrong-option');
  });
});

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

describe('sources', () => {
  const file = 'arrays/u2.npy';
  it.each([
    ['a path', () => fixture(file)],
    ['a file URL', () => pathToFileURL(fixture(file))],
    ['a file URL as text', () => pathToFileURL(fixture(file)).href],
    ['bytes', () => fixtureBytes(file)],
    [
      'a part of other bytes',
      () => {
        const bytes = fixtureBytes(file);
        const larger = new Uint8Array(bytes.length + 20);
        larger.set(bytes, 7);
        return larger.subarray(7, 7 + bytes.length);
      },
    ],
    ['an ArrayBuffer', () => fixtureBytes(file).slice().buffer],
    ['a Blob', () => new Blob([fixtureBytes(file).slice()])],
    ['a File', () => new File([fixtureBytes(file).slice()], 'u2.npy')],
  ])('%s', async (_, source) => {
    const frames = await readFrames(source() as never, { quantity: 'counts' });
    expect(frames.shape).toEqual([2, 13, 17]);
    expect(frames.array.get(0, 0, 1)).toBe(65535);
  });

  it('reading does not write into the bytes given', async () => {
    const bytes = fixtureBytes('arrays/i2-big-endian.npy');
    const before = bytes.slice();
    await readFrames(bytes, { quantity: 'counts' });
    expect(bytes).toEqual(before);
  });

  it.each([
    ['http://localhost/frame.npy', 'unsupported'],
    [new URL('https://localhost/frame.npy'), 'unsupported'],
    ['s3://bucket/frame.npy', 'unsupported'],
    ['/nowhere/frame.npy', 'not-found'],
    [fixture('arrays'), 'not-readable'],
    ['/dev/null', 'not-readable'],
    ['a\0b', 'not-readable'],
    [new Uint8Array(0), 'empty'],
    [new Blob([]), 'empty'],
    [42, 'wrong-option'],
    [undefined, 'wrong-option'],
  ])('%s is refused', async (source, code) => {
    expect(await codeOf(readFrames(source as never))).toBe(code);
  });

  it('a device, which would make a reader wait, is refused before it is opened', async () => {
    const { execFileSync } = await import('node:child_process');
    await inFolder(async (folder) => {
      execFileSync('mkfifo', [`${folder}/pipe.npy`]);
      expect(await codeOf(readFrames(`${folder}/pipe.npy`))).toBe('not-readable');
    });
  });

  it('an empty file', async () => {
    const { writeFile } = await import('node:fs/promises');
    await inFolder(async (folder) => {
      await writeFile(`${folder}/a.npy`, '');
      expect(await codeOf(readFrames(`${folder}/a.npy`))).toBe('empty');
    });
  });

  it('a file that shrinks under the reader', async () => {
    const { copyFile, truncate } = await import('node:fs/promises');
    await inFolder(async (folder) => {
      await copyFile(fixture('arrays/f4.npy'), `${folder}/a.npy`);
      const source = await openFrames(`${folder}/a.npy`, { quantity: 'counts' });
      await truncate(`${folder}/a.npy`, 200);
      expect(await codeOf(source.read(1))).toBe('truncated');
      await source.close();
    });
  });
});

describe('reading one by one', () => {
  it('iterates, reuses an output, and closes', async () => {
    const source = await openFrames(fixture('arrays/u2.npy'), { quantity: 'band radiance', scale: 2 });
    const whole = await readFrames(fixture('arrays/u2.npy'), { quantity: 'band radiance', scale: 2 });
    const pixels = 13 * 17;
    const seen: number[] = [];
    for await (const frame of source) {
      expect(frame.array.data).toEqual(
        whole.array.data.slice(frame.index * pixels, (frame.index + 1) * pixels),
      );
      seen.push(frame.index);
    }
    expect(seen).toEqual([0, 1]);

    const out = view(new Float32Array(pixels), [13, 17]);
    expect((await source.read(1, out)).array).toBe(out);
    expect(out.data).toEqual(whole.array.data.slice(pixels));
    const turned = { data: new Float32Array(pixels), shape: [13, 17], stride: [-1, 13], offset: 12 };
    await source.read(1, turned);
    expect(turned.data[12 - 3 + 13 * 5]).toBe(whole.array.get(1, 3, 5));

    await source.close();
    await source.close();
    expect(await codeOf(source.read(0))).toBe('closed');
  });

  it.each([
    [{ data: new Float32Array(220), shape: [13, 17], stride: [17, 1], offset: 0 }],
    [{ data: new Float32Array(221), shape: [17, 13], stride: [13, 1], offset: 0 }],
    [{ data: new Float64Array(221), shape: [13, 17], stride: [17, 1], offset: 0 }],
    [{ data: new Float32Array(221), shape: [13, 17], stride: [17, 1], offset: -1 }],
    [{ data: new Array(221).fill(0), shape: [13, 17], stride: [17, 1], offset: 0 }],
    [{ data: new Float32Array(221) }],
  ])('an output that does not fit is refused', async (out) => {
    const source = await openFrames(fixture('arrays/u2.npy'), { quantity: 'band radiance' });
    expect(await codeOf(source.read(0, out as never))).toBe('wrong-shape');
    await source.close();
  });

  it('an index outside, and an aborted signal', async () => {
    const stop = new AbortController();
    const source = await openFrames(fixture('arrays/u2.npy'), { quantity: 'counts', signal: stop.signal });
    for (const index of [-1, 2, 0.5, Number.NaN])
      expect(await codeOf(source.read(index))).toBe('wrong-index');
    stop.abort(new Error('enough'));
    const error = await errorOf(source.read(0));
    expect([error.code, (error.cause as Error).message]).toEqual(['aborted', 'enough']);
    await source.close();
    expect(
      await codeOf(readFrames(fixture('arrays/u2.npy'), { quantity: 'counts', signal: stop.signal })),
    ).toBe('aborted');
  });

  it('frames of ndarray slice and transpose', async () => {
    const { array } = await readFrames(fixture('arrays/u2.npy'), { quantity: 'counts' });
    expect(array.pick(1, null, null).transpose(1, 0).get(16, 12)).toBe(array.get(1, 12, 16));
  });
});
