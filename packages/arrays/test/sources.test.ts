import { pathToFileURL } from 'node:url';
import { view } from '@graybody/core';
import { describe, expect, it } from 'vitest';
import { openFrames, readFrames } from '../src/frames.js';
import { codeOf, errorOf, fixture, fixtureBytes, inFolder } from './support/fixtures.js';

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
