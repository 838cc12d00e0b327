import { describe, expect, it } from 'vitest';
import { readFrames } from '../src/frames.js';
import {
  codeOf,
  errorOf,
  expectedArrays,
  fixture,
  fixtureBytes,
  inFolder,
  seeded,
  sha256,
} from './support/fixtures.js';
import { counts, survive } from './support/survive.js';

const samples = [
  'arrays/f4.npy',
  'arrays/f4-fortran.npy',
  'arrays/f4-version-3.npy',
  'arrays/u2.tif',
  'arrays/f4-tiles.tif',
  'arrays/u2-deflate.tif',
  'arrays/f8-big-big-endian.tif',
  'arrays/tiffcp-u2-lzw-strips.tif',
  'arrays/tiffcp-f4-zip-predictor-3-tiles.tif',
  'arrays/tiffcp-f4-packbits-strips.tif',
  'arrays/header.tsv',
  'arrays/utf-16.txt',
];

describe('files cut off', () => {
  it.each(samples.filter((file) => /npy|tif/.test(file)))(
    '%s at sampled lengths is never an array',
    async (file) => {
      const whole = fixtureBytes(file);
      const step = Math.max(1, Math.floor(whole.length / 150));
      const lengths = [0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, whole.length - 1];
      for (let length = 13; length < whole.length; length += step) lengths.push(length);
      const codes = new Set<string>();
      const sound = { length: whole.length, numbers: sha256((await readFrames(whole, counts)).array.data) };
      for (const length of lengths) {
        const outcome = await survive(whole.slice(0, length), sound);
        // Values of tags that are not read, such as resolutions, may lie at the end; the numbers are all there then.
        if (outcome.endsWith('unharmed') && length > whole.length - 64) continue;
        expect(outcome, `${length} of ${whole.length} bytes`).not.toMatch(/^read/);
        codes.add(outcome);
      }
      // 8 bytes of NPY magic, 2 of length; a cut TIFF may end inside a directory that lies before its pixels.
      expect([...codes].sort().join(' ')).toMatch(/^empty (malformed )?not-recognised truncated$/);
    },
  );

  it('a grid cut in the middle of a row is ragged', async () => {
    const whole = fixtureBytes('arrays/savetxt.csv');
    expect(await codeOf(readFrames(whole.slice(0, whole.length - 10), counts))).toBe('wrong-shape');
  });
});

describe('flipped bits', () => {
  // 12 files × 400 flips; deterministic.
  it.each(samples)(
    '%s: every flip is a typed error or an array of its own size',
    async (file) => {
      const random = seeded(20260119);
      const whole = fixtureBytes(file);
      const { shape } = await readFrames(whole, counts);
      const pixels = shape[0] * shape[1] * shape[2];
      let refused = 0;
      for (let flip = 0; flip < 400; flip++) {
        const bytes = whole.slice();
        // Half of the flips into the first 400 bytes, where the headers of most files lie.
        const place = random() % (flip % 2 === 0 ? Math.min(400, bytes.length) : bytes.length);
        bytes[place] = bytes[place]! ^ (1 << (random() % 8));
        const outcome = await survive(bytes);
        if (!outcome.startsWith('read')) refused++;
        // An NPY header must still hold exactly the bytes there are.
        else if (file.endsWith('.npy')) expect(outcome).toBe(`read ${shape.join('x')}`);
        else
          expect(
            outcome
              .slice(5)
              .split('x')
              .reduce((product, extent) => product * Number(extent), 1),
          ).toBeLessThanOrEqual(pixels * 2);
      }
      expect(refused).toBeGreaterThan(0);
    },
    60_000,
  );

  it('random bytes behind a sound beginning are refused', async () => {
    const random = seeded(20260120);
    const beginnings = [
      [0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, 1, 0],
      [0x49, 0x49, 42, 0],
      [0x4d, 0x4d, 0, 43, 0, 8, 0, 0],
    ];
    for (let round = 0; round < 600; round++) {
      const bytes = Uint8Array.from({ length: 40 + (random() % 400) }, () => random() & 255);
      bytes.set(beginnings[round % 3]!);
      expect(await survive(bytes)).toMatch(
        /^(truncated|malformed|unsupported|limit-exceeded|empty|wrong-shape)$/,
      );
    }
  });
});

describe('content and name', () => {
  it.each([
    ['empty', '', 'empty'],
    ['a picture', '\x89PNG\r\n\x1a\n', 'not-recognised'],
    ['an archive', 'PK\x03\x04', 'not-recognised'],
    ['JSON', '{"a": 1}', 'not-recognised'],
    ['XML', '<?xml version="1.0"?><a>1</a>', 'not-recognised'],
    ['prose', 'measured today', 'not-recognised'],
    ['zeros', '\0\0\0\0\0\0', 'not-recognised'],
    ['comments only', '# 1\n# 2\n', 'empty'],
    ['a header only', 'a1,b1\n', 'malformed'],
  ])('%s is refused under any name', async (_, content, code) => {
    const { writeFile } = await import('node:fs/promises');
    await inFolder(async (folder) => {
      for (const name of ['a.npy', 'a.tif', 'a.csv', 'a']) {
        await writeFile(`${folder}/${name}`, content, 'latin1');
        const error = await errorOf(readFrames(`${folder}/${name}`, counts));
        expect(error.code, error.message).toBe(code);
        expect(error.message).toContain(name);
      }
    });
  });

  it('what is sound under a wrong name is read as what it is, with a warning', async () => {
    const { copyFile } = await import('node:fs/promises');
    await inFolder(async (folder) => {
      await copyFile(fixture('arrays/u2.tif'), `${folder}/frames.npy`);
      const frames = await readFrames(`${folder}/frames.npy`, counts);
      expect(frames.source.format).toBe('tiff');
      expect(frames.warnings).toEqual([
        'frames.npy is named like NPY but holds TIFF; it was read as what it holds.',
      ]);
      expect(frames.shape).toEqual(expectedArrays.expected['u2.tif']!.shape);
    });
  });
});

describe('limits', () => {
  it.each([
    [{ pixels: 100 }, 'arrays/u2.npy'],
    [{ pixels: 100 }, 'arrays/u2.tif'],
    [{ pixels: 10 }, 'arrays/savetxt.csv'],
    [{ frames: 1 }, 'arrays/u2.npy'],
    [{ frames: 1 }, 'arrays/u2.tif'],
    [{ bytes: 500 }, 'arrays/f4-fortran.npy'],
    [{ bytes: 300 }, 'arrays/f4.npy'],
    [{ bytes: 300 }, 'arrays/f4-tiles.tif'],
    [{ bytes: 100 }, 'arrays/savetxt.csv'],
    [{ bytes: 800 }, 'arrays/u2.npy'],
    [{ bytes: 800 }, 'arrays/u2.tif'],
  ])('%o refuses %s', async (limits, file) => {
    const error = await errorOf(
      readFrames(fixture(file), { ...counts, limits: limits as Record<string, number> }),
    );
    expect(error.code).toBe('limit-exceeded');
  });
});
