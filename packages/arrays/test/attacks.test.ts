import { deflateSync } from 'node:zlib';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { isArrayError } from '../src/errors.js';
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
import { fieldsOf, tiffOf } from './support/tiff-builder.js';

const counts = { quantity: 'counts' } as const;

/** Longest time one damaged file may take. [ms] */
const patience = 2000;

/** Reads a damaged file: a typed error in time, or an array of a size that its bytes can hold. */
async function survive(bytes: Uint8Array, whole?: { length: number; numbers: string }): Promise<string> {
  const start = performance.now();
  let timer: NodeJS.Timeout | undefined;
  const hang = new Promise<never>((_, reject) => {
    timer = setTimeout(() => reject(new Error('hang')), patience * 2);
  });
  try {
    const { array } = await Promise.race([readFrames(bytes, counts), hang]);
    expect(array.data.length).toBe(array.shape.reduce((product, extent) => product * extent, 1));
    return `read ${array.shape.join('x')}${bytes.length < (whole?.length ?? 0) && whole?.numbers === sha256(array.data) ? ' unharmed' : ''}`;
  } catch (error) {
    if (!isArrayError(error)) throw error;
    return error.code;
  } finally {
    clearTimeout(timer);
    expect(performance.now() - start).toBeLessThan(patience);
  }
}

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

/** NPY with any header text. */
function npy(header: string, data = new Uint8Array(0), version = 1): Uint8Array {
  const text = new TextEncoder().encode(header);
  const start = version === 1 ? 10 : 12;
  const bytes = new Uint8Array(start + text.length + data.length);
  bytes.set([0x93, 0x4e, 0x55, 0x4d, 0x50, 0x59, version, 0]);
  if (version === 1) new DataView(bytes.buffer).setUint16(8, text.length, true);
  else new DataView(bytes.buffer).setUint32(8, text.length, true);
  bytes.set(text, start);
  bytes.set(data, start + text.length);
  return bytes;
}
const npyHeader = (descr: string, shape: string, order = 'False'): string =>
  `{'descr': ${descr}, 'fortran_order': ${order}, 'shape': ${shape}, }\n`;

describe('NPY headers', () => {
  it.each([
    ['more numbers than bytes', npyHeader("'<f4'", '(2, 3)'), 20, 'truncated'],
    ['fewer numbers than bytes', npyHeader("'<f4'", '(2, 3)'), 28, 'malformed'],
    ['absurd extents', npyHeader("'<f4'", '(99999999, 99999999)'), 24, 'limit-exceeded'],
    ['extents beyond a double', npyHeader("'<f4'", `(1, ${'9'.repeat(400)})`), 24, 'malformed'],
    ['many frames', npyHeader("'<u1'", '(2000000, 1, 1)'), 24, 'limit-exceeded'],
    ['a negative extent', npyHeader("'<f4'", '(-2, 3)'), 24, 'malformed'],
    ['an extent that is no number', npyHeader("'<f4'", '(nan, 3)'), 24, 'malformed'],
    ['an extent in words', npyHeader("'<f4'", "'(2, 3)'"), 24, 'malformed'],
    ['no byte order', npyHeader("'f4'", '(2, 3)'), 24, 'unsupported'],
    ['native byte order', npyHeader("'=f4'", '(2, 3)'), 24, 'unsupported'],
    ['objects', npyHeader("'|O'", '(2, 3)'), 48, 'unsupported'],
    ['long double', npyHeader("'<f16'", '(2, 3)'), 96, 'unsupported'],
    ['a missing key', "{'descr': '<f4', 'shape': (2, 3), }\n", 24, 'malformed'],
    [
      'a strange key',
      "{'descr': '<f4', 'fortran_order': False, 'shape': (2, 3), 'x': True}\n",
      24,
      'malformed',
    ],
    ['a strange order', npyHeader("'<f4'", '(2, 3)', "'C'"), 24, 'malformed'],
    ['no dictionary', 'hello\n', 24, 'malformed'],
    ['a call in place of a literal', "{'descr': __import__('os'), }\n", 24, 'malformed'],
    ['text behind the dictionary', `${npyHeader("'<f4'", '(2, 3)').trim()} x\n`, 24, 'malformed'],
    ['no commas', "{'descr': '<f4' 'fortran_order': False}\n", 24, 'malformed'],
  ] as const)('%s', async (_, header, length, code) => {
    expect(await codeOf(readFrames(npy(header, new Uint8Array(length)), counts))).toBe(code);
  });

  it('old longs and a trailing comma are taken', async () => {
    const { shape } = await readFrames(npy(npyHeader("'>i2'", '(2L, 3L,)'), new Uint8Array(12)), counts);
    expect(shape).toEqual([1, 2, 3]);
  });

  it('a header longer than the file, or of absurd length', async () => {
    const bytes = npy(npyHeader("'<f4'", '(2, 3)'), new Uint8Array(24), 2);
    new DataView(bytes.buffer).setUint32(8, 0xffffffff, true);
    expect(await codeOf(readFrames(bytes, counts))).toBe('truncated');
    expect(await codeOf(readFrames(npy(' '.repeat(70_000), undefined, 2), counts))).toBe('malformed');
    expect(await codeOf(readFrames(npy('', undefined, 9), counts))).toBe('unsupported');
  });

  it('a header made to exhaust a pattern is refused at once', async () => {
    const start = performance.now();
    expect(await codeOf(readFrames(npy(`{${"'a':[],".repeat(8000)}x`), counts))).toBe('malformed');
    expect(await codeOf(readFrames(npy(`{'shape': (${' '.repeat(60_000)}x)}`), counts))).toBe('malformed');
    expect(performance.now() - start).toBeLessThan(1000);
  });
});

const strip = new Uint8Array(24); // 4 × 3 of uint16

describe('TIFF directories', () => {
  it.each([
    ['no page', tiffOf([]), 'empty'],
    [
      'a chain that returns to its start',
      (() => {
        const bytes = tiffOf([{ fields: fieldsOf(4, 3), blocks: [strip] }]);
        new DataView(bytes.buffer).setUint32(
          bytes.length - 4,
          new DataView(bytes.buffer).getUint32(4, true),
          true,
        );
        return bytes;
      })(),
      'malformed',
    ],
    [
      'a next page beyond the file',
      tiffOf([{ fields: fieldsOf(4, 3), blocks: [strip] }], { nextOf: { 0: 1e9 } }),
      'truncated',
    ],
    [
      'a strip beyond the file',
      tiffOf([{ fields: fieldsOf(4, 3), blocks: [strip], offsets: [1e9] }]),
      'truncated',
    ],
    [
      'a strip longer than the file',
      tiffOf([{ fields: fieldsOf(4, 3), blocks: [strip], byteCounts: [1e9] }]),
      'truncated',
    ],
    ['a strip too short', tiffOf([{ fields: fieldsOf(4, 3), blocks: [strip.slice(0, 22)] }]), 'malformed'],
    [
      'a missing block of a sparse file',
      tiffOf([{ fields: fieldsOf(4, 3), blocks: [strip], offsets: [0], byteCounts: [0] }]),
      'malformed',
    ],
    [
      'too few strips',
      tiffOf([{ fields: fieldsOf(4, 3, { rowsPerStrip: 1 }), blocks: [strip] }]),
      'malformed',
    ],
    ['no strips', tiffOf([{ fields: fieldsOf(4, 3) }]), 'malformed'],
    ['absurd extents', tiffOf([{ fields: fieldsOf(4e9, 4e9), blocks: [strip] }]), 'limit-exceeded'],
    [
      'large extents over few bytes',
      tiffOf([{ fields: fieldsOf(8000, 8000, { compression: 8 }), blocks: [strip] }]),
      'malformed',
    ],
    [
      'large extents over few bytes of LZW',
      tiffOf([{ fields: fieldsOf(8000, 8000, { compression: 5 }), blocks: [strip] }]),
      'malformed',
    ],
    ['no rows', tiffOf([{ fields: fieldsOf(4, 0, { rowsPerStrip: 1 }), blocks: [strip] }]), 'empty'],
    [
      'no rows in a strip',
      tiffOf([{ fields: fieldsOf(4, 3, { rowsPerStrip: 0 }), blocks: [strip] }]),
      'malformed',
    ],
    [
      'no width',
      tiffOf([{ fields: fieldsOf(4, 3).filter(([tag]) => tag !== 256), blocks: [strip] }]),
      'malformed',
    ],
    [
      'fractional width',
      tiffOf([
        { fields: [...fieldsOf(4, 3).filter(([tag]) => tag !== 256), [256, 11, [4]]], blocks: [strip] },
      ]),
      'malformed',
    ],
    [
      'text for a width',
      tiffOf([
        { fields: [...fieldsOf(4, 3).filter(([tag]) => tag !== 256), [256, 2, '4']], blocks: [strip] },
      ]),
      'malformed',
    ],
    ['a tag twice', tiffOf([{ fields: [...fieldsOf(4, 3), [256, 4, [4]]], blocks: [strip] }]), 'malformed'],
    [
      'numbers for a description',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[270, 4, [1, 2]]] }), blocks: [strip] }]),
      'malformed',
    ],
    [
      'bits turned round',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[266, 3, [2]]] }), blocks: [strip] }]),
      'unsupported',
    ],
    [
      'a volume',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[32997, 4, [2]]] }), blocks: [strip] }]),
      'unsupported',
    ],
    [
      'a palette',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[262, 3, [3]]] }), blocks: [strip] }]),
      'unsupported',
    ],
    [
      'samples of different widths',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[258, 3, [16, 8]]] }), blocks: [strip] }]),
      'unsupported',
    ],
    ['24 bits', tiffOf([{ fields: fieldsOf(4, 3, { bits: 24 }), blocks: [strip] }]), 'unsupported'],
    ['complex numbers', tiffOf([{ fields: fieldsOf(4, 3, { format: 6 }), blocks: [strip] }]), 'unsupported'],
    [
      'an unknown compression',
      tiffOf([{ fields: fieldsOf(4, 3, { compression: 7 }), blocks: [strip] }]),
      'unsupported',
    ],
    [
      'an unknown predictor',
      tiffOf([{ fields: fieldsOf(4, 3, { compression: 8, more: [[317, 3, [9]]] }), blocks: [strip] }]),
      'unsupported',
    ],
    [
      'predictor 3 with integers',
      tiffOf([{ fields: fieldsOf(4, 3, { compression: 8, more: [[317, 3, [3]]] }), blocks: [strip] }]),
      'malformed',
    ],
    [
      'a predictor without compression',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[317, 3, [2]]] }), blocks: [strip] }]),
      'malformed',
    ],
    [
      'a no-data tag in words',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[42113, 2, 'black']] }), blocks: [strip] }]),
      'malformed',
    ],
    [
      'nothing but a reduced copy',
      tiffOf([{ fields: fieldsOf(4, 3, { more: [[254, 4, [1]]] }), blocks: [strip] }]),
      'empty',
    ],
  ] as const)('%s', async (_, bytes, code) => {
    const error = await errorOf(readFrames(bytes, counts));
    expect(error.code, error.message).toBe(code);
  });

  it('a long chain stops at the limit of frames', async () => {
    const pages = Array.from({ length: 20 }, () => ({ fields: fieldsOf(4, 3), blocks: [strip] }));
    expect(await codeOf(readFrames(tiffOf(pages), { ...counts, limits: { frames: 10 } }))).toBe(
      'limit-exceeded',
    );
  });

  it('lists shared by many pages do not pile up in memory', async () => {
    // 8 million one-row strips a page declared over one list; refused before the lists are held twice.
    const page = { fields: fieldsOf(1, 5_000_000, { rowsPerStrip: 1 }), offsets: [8, 8], byteCounts: [2, 2] };
    expect(await codeOf(readFrames(tiffOf([page, page]), counts))).toBe('malformed');
    const declared = {
      fields: fieldsOf(1, 50_000_000, { rowsPerStrip: 1 }),
      offsets: [8, 8],
      byteCounts: [2, 2],
    };
    expect(await codeOf(readFrames(tiffOf([declared]), counts))).toBe('limit-exceeded');
  });

  it('a BigTIFF with offsets of another width', async () => {
    const bytes = fixtureBytes('arrays/f4-big.tif');
    bytes[4] = 16;
    expect(await codeOf(readFrames(bytes, counts))).toBe('malformed');
  });

  it('big-endian pages, tiles and white-is-zero are read as stored', async () => {
    const values = Uint8Array.from({ length: 256 }, (_, i) => i);
    const fields = fieldsOf(10, 7, {
      bits: 8,
      more: [
        [262, 3, [0]],
        [322, 4, [16]],
        [323, 4, [16]],
      ],
    });
    const { array } = await readFrames(
      tiffOf([{ fields, blocks: [values], tiled: true }], { littleEndian: false }),
      counts,
    );
    expect(array.get(0, 6, 9)).toBe(6 * 16 + 9);
  });
});

describe('compressed floods and damage', () => {
  beforeEach(() => {
    (globalThis as { gc?: () => void }).gc?.();
  });
  afterEach(() => expect(process.memoryUsage().rss).toBeLessThan(3e9));

  const page = (
    compression: number,
    block: Uint8Array,
    more: Parameters<typeof fieldsOf>[2] = {},
  ): Uint8Array => tiffOf([{ fields: fieldsOf(4, 3, { compression, ...more }), blocks: [block] }]);
  const damaged = (compression: number, block: Uint8Array): Promise<string> =>
    codeOf(readFrames(page(compression, block), counts));

  it('deflate: a bomb of 200 MB stops at the bound', async () => {
    const bomb = new Uint8Array(deflateSync(new Uint8Array(2e8)));
    const start = performance.now();
    expect(await damaged(8, bomb)).toBe('malformed');
    expect(performance.now() - start).toBeLessThan(patience);
  });

  it('deflate: cut, damaged, with a wrong checksum, too short, not zlib', async () => {
    const values = Uint8Array.from({ length: 24 }, (_, i) => i * 9);
    const sound = new Uint8Array(deflateSync(values));
    const { array } = await readFrames(page(8, sound), counts);
    expect(new Uint8Array(array.data.buffer)).toEqual(values);
    for (let length = 1; length < sound.length; length++)
      expect(await damaged(8, sound.slice(0, length))).toBe('malformed');
    const wrongSum = sound.slice();
    wrongSum[wrongSum.length - 1]! ^= 1;
    expect(await damaged(8, wrongSum)).toBe('malformed');
    expect(await damaged(8, new Uint8Array(deflateSync(values.slice(0, 20))))).toBe('malformed');
    expect(await damaged(8, new Uint8Array(30).fill(7))).toBe('malformed');
  });

  it('LZW: cut, unknown codes, the older bit order, too long', async () => {
    // Codes of nine bits, highest first.
    const lzw = (...codes: number[]): Uint8Array => {
      const bits = codes.map((code) => code.toString(2).padStart(9, '0')).join('');
      return Uint8Array.from(bits.match(/.{1,8}/g)!, (octet) => Number.parseInt(octet.padEnd(8, '0'), 2));
    };
    const literal = Array.from({ length: 24 }, (_, i) => i);
    const { array } = await readFrames(page(5, lzw(256, ...literal, 257)), counts);
    expect([...new Uint8Array(array.data.buffer)]).toEqual(literal);
    // 258 is the string of its own making: 7, 7 7, 7 7 7 …
    const run = await readFrames(page(5, lzw(256, 7, 258, 259, 260, 261, 262, 259, 257)), counts);
    expect([...new Uint8Array(run.array.data.buffer)]).toEqual(new Array(24).fill(7));
    expect(await damaged(5, lzw(256, 1, 2, 257))).toBe('malformed');
    expect(await damaged(5, lzw(256, 1, 300, 257))).toBe('malformed');
    expect(await damaged(5, lzw(256, 258, 257))).toBe('malformed');
    expect(await damaged(5, lzw(258, 1))).toBe('malformed');
    expect(await damaged(5, Uint8Array.of(0, 1, 2, 3))).toBe('unsupported');
    expect(await damaged(5, lzw(256, 1, 2))).toBe('malformed');
  });

  it('PackBits: runs, a cut run, nothing more to read', async () => {
    const { array } = await readFrames(page(32773, Uint8Array.of(128, 1, 1, 2, 235, 7)), counts);
    expect([...new Uint8Array(array.data.buffer)]).toEqual([1, 2, ...new Array(22).fill(7)]);
    expect(await damaged(32773, Uint8Array.of(5, 1, 2))).toBe('malformed');
    expect(await damaged(32773, Uint8Array.of(0x81, 7))).toBe('malformed');
    expect(await damaged(32773, Uint8Array.of(200))).toBe('malformed');
    expect(await damaged(32773, Uint8Array.of(1, 1, 2))).toBe('malformed');
  });

  it('strips filled up to their full height are taken', async () => {
    // Two strips of two rows over three rows; the second holds a row more than the picture.
    const rows = Uint8Array.from({ length: 16 }, (_, i) => i);
    for (const compression of [1, 8]) {
      const block = compression === 8 ? new Uint8Array(deflateSync(rows)) : rows;
      const fields = fieldsOf(4, 3, { compression, rowsPerStrip: 2 });
      const { array } = await readFrames(tiffOf([{ fields, blocks: [block, block] }]), counts);
      expect(array.get(0, 2, 3)).toBe(array.get(0, 0, 3));
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
