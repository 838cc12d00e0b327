import { deflateSync } from 'node:zlib';
import { afterEach, describe, expect, it } from 'vitest';
import { readFrames } from '../src/frames.js';
import { codeOf, errorOf, fixtureBytes } from './support/fixtures.js';
import { counts, patience } from './support/survive.js';
import { fieldsOf, tiffOf } from './support/tiff-builder.js';

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
