import { describe, expect, it } from 'vitest';
import { readFrames } from '../src/frames.js';
import { codeOf } from './support/fixtures.js';
import { counts } from './support/survive.js';

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
