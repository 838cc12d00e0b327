import { execFileSync } from 'node:child_process';
import { stat } from 'node:fs/promises';
import { pathToFileURL } from 'node:url';
import { frameFlag, quantities, type View, view } from '@graybody/core';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readFrames } from '../src/frames.js';
import { writeFlags, writeFrames } from '../src/write.js';
import { codeOf, errorOf, inFolder, pythonOrSkip, sha256 } from './support/fixtures.js';

const kelvin = view(Float32Array.of(293.15, Number.NaN, 300, 310.5, 1e-40, 273), [1, 2, 3]);
const frames = { array: kelvin, quantity: 'apparent temperature', unit: 'K' } as const;

describe('what is written is read back the same', () => {
  const types = [
    Float32Array,
    Float64Array,
    Int8Array,
    Uint8Array,
    Int16Array,
    Uint16Array,
    Int32Array,
    Uint32Array,
  ];
  const extents = fc.tuple(
    fc.integer({ min: 1, max: 4 }),
    fc.integer({ min: 1, max: 9 }),
    fc.integer({ min: 1, max: 9 }),
  );
  const stack = fc.tuple(extents, fc.constantFrom(...types), fc.boolean()).chain(([shape, type, single]) => {
    const size = shape.reduce((product, extent) => product * extent, 1);
    const bytes = fc.uint8Array({
      minLength: size * type.BYTES_PER_ELEMENT,
      maxLength: size * type.BYTES_PER_ELEMENT,
    });
    return bytes.map((content): View => {
      const data = new type(content.slice().buffer);
      // One payload of NaN: JavaScript may change others when it copies a number.
      if (data instanceof Float32Array || data instanceof Float64Array)
        data.forEach((value, i) => {
          if (Number.isNaN(value)) data[i] = Number.NaN;
        });
      return view(data, single ? [shape[0] * shape[1], shape[2]] : shape);
    });
  });

  it.each(['npy', 'tiff', 'csv'] as const)(
    '%s: any numbers of any type, NaN and infinities among them',
    async (format) => {
      await fc.assert(
        fc.asyncProperty(stack, fc.constantFrom(...quantities), async (array, quantity) => {
          const counts =
            quantity === 'counts' ||
            !(array.data instanceof Float32Array || array.data instanceof Float64Array);
          const held = counts ? 'counts' : quantity === 'band radiance' ? quantity : 'band radiance';
          const options = {
            format,
            quantity: held,
            unit: held === 'counts' ? undefined : 'signal',
            metadata: 'drop',
          } as const;
          const bytes = await writeFrames('bytes', array, options);
          const read = await readFrames(bytes, format === 'npy' ? { quantity: held } : {});
          expect(read.quantity).toBe(held);
          expect(read.array.shape).toEqual(array.shape.length === 2 ? [1, ...array.shape] : array.shape);
          expect(read.array.data.constructor).toBe(array.data.constructor);
          const zeros = (data: ArrayLike<number>): number[] => Array.from(data, (value) => value + 0);
          // −0 + 0 is 0: a sign of zero does not survive scale and offset, nor does it matter.
          expect(zeros(read.array.data)).toEqual(zeros(array.data as ArrayLike<number>));
        }),
        { numRuns: 150, seed: 20260121 },
      );
    },
  );

  it.each(['npy', 'tif', 'csv'])(
    '.%s through a file: quantity, unit, times, provenance, NaN',
    async (ending) => {
      await inFolder(async (folder) => {
        const times = ['2026-01-17T10:15:00+01:00'];
        const provenance = { site: 'Kühlhaus 3 „Nord“', steps: [1, 2], note: 'a, b: c; µm²' };
        await writeFrames(pathToFileURL(`${folder}/a frame.${ending}`), frames, { times, provenance });
        const read = await readFrames(`${folder}/a frame.${ending}`);
        expect(read).toMatchObject({
          quantity: 'apparent temperature',
          unit: 'K',
          times,
          missing: 1,
          shape: [1, 2, 3],
          dataType: 'float32',
        });
        expect(read.metadata).toMatchObject({ provenance, content: 'frames' });
        expect(sha256(read.array.data)).toBe(sha256(kelvin.data as Float32Array));
        await writeFrames(`${folder}/again.${ending}`, read);
        expect((await readFrames(`${folder}/again.${ending}`)).times).toEqual(times);
      });
    },
  );

  it('strided, turned and plain views are written as they look', async () => {
    const turned = { data: Float32Array.of(1, 2, 3, 4, 5, 6), shape: [3, 2], stride: [-1, 3], offset: 2 };
    const plain = { data: [3, 6, 2, 5, 1, 4], shape: [3, 2], stride: [2, 1], offset: 0 };
    for (const array of [turned, plain]) {
      const bytes = await writeFrames('bytes', array, {
        format: 'tiff',
        quantity: 'band radiance',
        unit: 'signal',
      });
      expect(Array.from((await readFrames(bytes)).array.data)).toEqual([3, 6, 2, 5, 1, 4]);
    }
    const clamped = view(new Uint8ClampedArray([1, 2]), [1, 2]);
    const bytes = await writeFrames('bytes', clamped, { format: 'tiff', quantity: 'counts' });
    expect((await readFrames(bytes)).array.data).toEqual(Uint8Array.of(1, 2));
  });

  it('text keeps the fewest digits that give the same number again', async () => {
    const array = view(
      Float32Array.of(293.15, 0.1, 1 / 3, 16777217, -0, Number.POSITIVE_INFINITY, -1e-45),
      [1, 7],
    );
    const bytes = await writeFrames('bytes', array, {
      format: 'csv',
      quantity: 'band radiance',
      unit: 'signal',
    });
    const lines = new TextDecoder().decode(bytes).trimEnd().split('\n');
    expect(lines.at(-1)).toBe('293.15,0.1,0.33333334,16777216,-0,inf,-1.4013e-45');
    expect(lines[0]).toBe('# format: graybody-frames');
    expect(lines).toContain('# quantity: band radiance');
  });
});

describe('refusals', () => {
  it.each([
    ['a bare view without a quantity', kelvin, { format: 'tiff' }, 'missing-option'],
    ['bytes without a format', frames, {}, 'missing-option'],
    ['NPY as bytes with a quantity', frames, { format: 'npy' }, 'missing-option'],
    [
      'radiance without a unit',
      { array: kelvin, quantity: 'band radiance' },
      { format: 'tiff' },
      'missing-option',
    ],
    ['an unknown format', frames, { format: 'png' }, 'wrong-option'],
    ['a near miss of a format', frames, { format: 'tif' }, 'wrong-option'],
    ['an unknown option', frames, { format: 'tiff', provenence: 'x' }, 'unknown-option'],
    ['degrees Celsius', { ...frames, unit: 'degC' }, { format: 'tiff' }, 'wrong-unit'],
    [
      'two units',
      { array: kelvin, quantity: 'band radiance', unit: 'a' },
      { format: 'tiff', unit: 'b' },
      'wrong-unit',
    ],
    ['two quantities', frames, { format: 'tiff', quantity: 'surface temperature' }, 'wrong-quantity'],
    ['an unknown quantity', { ...frames, quantity: 'heat' }, { format: 'tiff' }, 'wrong-option'],
    ['no array', { quantity: 'counts' }, { format: 'tiff' }, 'wrong-option'],
    ['nothing', undefined, { format: 'tiff' }, 'wrong-option'],
    ['a list', view(Float32Array.of(1), [1]), { format: 'tiff', quantity: 'counts' }, 'wrong-shape'],
    ['no rows', view(new Float32Array(0), [0, 3]), { format: 'tiff', quantity: 'counts' }, 'empty'],
    [
      'a view beyond its data',
      { data: new Float32Array(2), shape: [2, 2], stride: [2, 1], offset: 0 },
      { format: 'tiff', quantity: 'counts' },
      'wrong-shape',
    ],
    [
      'half an extent',
      { data: new Float32Array(9), shape: [0.5, 2], stride: [2, 1], offset: 0 },
      { format: 'tiff', quantity: 'counts' },
      'wrong-shape',
    ],
    ['too few times', frames, { format: 'tiff', times: [] }, 'wrong-shape'],
    ['a strange wish', frames, { format: 'tiff', metadata: 'no' }, 'wrong-option'],
  ])('%s', async (_, given, options, code) => {
    const error = await errorOf(writeFrames('bytes', given as never, options as never));
    expect(error.code, error.message).toBe(code);
  });

  it.each([
    ['frames.png', 'missing-option'],
    ['http://localhost/a.npy', 'unsupported'],
    [3, 'wrong-option'],
  ])('target %s', async (target, code) => {
    expect(await codeOf(writeFrames(target as string, frames))).toBe(code);
  });

  it('flags must be uint8, and take no quantity', async () => {
    expect(await codeOf(writeFlags('bytes', kelvin, { format: 'tiff' }))).toBe('wrong-option');
    const flags = view(Uint8Array.of(1), [1, 1]);
    expect(await codeOf(writeFlags('bytes', flags, { format: 'tiff', quantity: 'counts' } as never))).toBe(
      'unknown-option',
    );
  });

  it('a TIFF beyond 4 GiB', async () => {
    const flags = { data: new Uint8Array(1), shape: [70_000, 70_000], stride: [0, 0], offset: 0 };
    expect(await codeOf(writeFlags('bytes', flags, { format: 'tiff' }))).toBe('limit-exceeded');
  });
});

const python = pythonOrSkip('reading back what is written');

describe.skipIf(python === undefined)('NumPy and tifffile read what is written', () => {
  const script = `
import hashlib, json, sys
import numpy, tifffile
report = {}
for path in sys.argv[1:]:
    if path.endswith('.npy'):
        array = numpy.load(path, allow_pickle=False)
    elif path.endswith('.tif'):
        with tifffile.TiffFile(path) as file:
            array = numpy.stack([page.asarray() for page in file.pages])
            report[path + ':description'] = file.pages[0].description
    else:
        blocks = [block for block in open(path).read().split('\\n\\n')]
        array = numpy.stack([numpy.loadtxt(block.splitlines(), delimiter=',', ndmin=2, dtype='f4') for block in blocks])
    report[path] = [list(array.shape), array.dtype.str, hashlib.sha256(array.tobytes()).hexdigest()]
print(json.dumps(report))
`;
  it('with the same numbers, NaN among them, and the description in its place', async () => {
    await inFolder(async (folder) => {
      const arrays: [string, View, string][] = [];
      const types = {
        '<f4': Float32Array,
        '<f8': Float64Array,
        '<i2': Int16Array,
        '<u2': Uint16Array,
        '|u1': Uint8Array,
        '|i1': Int8Array,
        '<i4': Int32Array,
        '<u4': Uint32Array,
      };
      for (const [code, type] of Object.entries(types)) {
        const data = new type(Array.from({ length: 3 * 7 * 5 }, (_, i) => (i * 7919) % 251));
        if (data instanceof Float32Array || data instanceof Float64Array) data[4] = Number.NaN;
        for (const ending of ['npy', 'tif'])
          arrays.push([`${folder}/${code.slice(1)}.${ending}`, view(data, [3, 7, 5]), code]);
      }
      const floats = view(
        Float32Array.from({ length: 3 * 7 * 5 }, (_, i) => Math.sqrt(80_000 + i)),
        [3, 7, 5],
      );
      arrays.push([`${folder}/text.csv`, floats, '<f4']);
      for (const [path, array] of arrays) await writeFrames(path, { array, quantity: 'counts' });
      const flags = view(Uint8Array.of(0, frameFlag.saturated, 1, 6, 2, 3), [2, 3]);
      for (const ending of ['npy', 'tif']) {
        await writeFlags(`${folder}/flags.${ending}`, flags);
        arrays.push([
          `${folder}/flags.${ending}`,
          ending === 'tif' ? view(flags.data, [1, 2, 3]) : flags,
          '|u1',
        ]);
      }
      const report = JSON.parse(
        execFileSync(python!, ['-c', script, ...arrays.map(([path]) => path)], { encoding: 'utf8' }),
      );
      for (const [path, array, code] of arrays) {
        expect(report[path], path).toEqual([array.shape, code, sha256(array.data as Float32Array)]);
      }
      expect(JSON.parse(report[`${folder}/flags.tif:description`])).toMatchObject({
        content: 'flags',
        quantity: 'counts',
      });
      expect((await stat(`${folder}/f4.npy.json`)).size).toBeGreaterThan(100);
    });
  });
});
