import { topHatBand, view } from '@graybody/core';
import { describe, expect, it } from 'vitest';
import { openFrames, type ReadOptions, readFrames } from '../src/frames.js';
import { writeFrames } from '../src/write.js';
import { codeOf, errorOf, fixture } from './support/fixtures.js';
import { npyOf } from './support/npy-of.js';

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
