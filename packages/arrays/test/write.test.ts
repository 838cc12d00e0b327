import { execFileSync, spawn } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, writeFileSync } from 'node:fs';
import { mkdir, stat } from 'node:fs/promises';
import { pathToFileURL } from 'node:url';
import { frameFlag, quantities, type View, view } from '@graybody/core';
import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { readFrames } from '../src/frames.js';
import { crc32 } from '../src/stored-description.js';
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

describe('the file beside an NPY', () => {
  const written = async (folder: string): Promise<string> => {
    await writeFrames(`${folder}/a.npy`, frames);
    return `${folder}/a.npy`;
  };

  it('names what the array holds; the check value of CRC-32 is the published one (ISO 3309 annex, 0xcbf43926)', async () => {
    expect(crc32(new TextEncoder().encode('123456789'))).toBe(0xcbf43926);
    await inFolder(async (folder) => {
      const path = await written(folder);
      const beside = JSON.parse(readFileSync(`${path}.json`, 'utf8'));
      expect(beside).toMatchObject({
        format: 'graybody-frames',
        version: 1,
        quantity: 'apparent temperature',
        unit: 'K',
        shape: [1, 2, 3],
      });
    });
  });

  it.each([
    ['is no JSON', () => '{"format": "graybody-fra', 'malformed'],
    ['is cut off', (text: string) => text.slice(0, 60), 'malformed'],
    ['is of something else', () => '{"a": 1}', 'malformed'],
    ['is of a newer version', (text: string) => text.replace('"version": 1', '"version": 2'), 'unsupported'],
    ['has an unknown quantity', (text: string) => text.replace('apparent', 'surfeit'), 'malformed'],
    ['has another unit', (text: string) => text.replace('"unit": "K"', '"unit": "C"'), 'malformed'],
    ['has no unit', (text: string) => text.replace('"unit": "K"', '"unit": 3'), 'malformed'],
    [
      'has another shape',
      (text: string) => text.replace(/"shape": \[[^\]]*\]/, '"shape": [1, 3, 2]'),
      'malformed',
    ],
    ['has no shape', (text: string) => text.replace(/"shape": \[[^\]]*\]/, '"shape": 6'), 'malformed'],
    ['has another type', (text: string) => text.replace('float32', 'int32'), 'malformed'],
    ['has no type', (text: string) => text.replace('"float32"', '3'), 'malformed'],
    [
      'has another checksum',
      (text: string) => text.replace(/"firstFrameCrc32": \d+/, '"firstFrameCrc32": 1'),
      'malformed',
    ],
    [
      'has no number for a checksum',
      (text: string) => text.replace(/"firstFrameCrc32": \d+/, '"firstFrameCrc32": "x"'),
      'malformed',
    ],
    ['has other content', (text: string) => text.replace('"frames"', '"pictures"'), 'malformed'],
    ['has strange times', (text: string) => text.replace('"unit"', '"times": [1], "unit"'), 'malformed'],
    [
      'has another format',
      (text: string) => text.replace('"graybody-frames"', '"x graybody-frames"'),
      'malformed',
    ],
    ['is null', () => 'null // graybody-frames', 'malformed'],
    ['is a number', () => '"graybody-frames"', 'malformed'],
  ])('is refused when it %s', async (_, change, code) => {
    await inFolder(async (folder) => {
      const path = await written(folder);
      writeFileSync(`${path}.json`, change(readFileSync(`${path}.json`, 'utf8')));
      expect(await codeOf(readFrames(path, {}))).toBe(code);
    });
  });

  it('is refused when the array was written anew by another program', async () => {
    await inFolder(async (folder) => {
      const path = await written(folder);
      const bytes = readFileSync(path);
      bytes[bytes.length - 1]! ^= 1;
      writeFileSync(path, bytes);
      const error = await errorOf(readFrames(path));
      expect(error.code).toBe('malformed');
      expect(error.hint).toContain('remove the description');
    });
  });

  it("goes away with metadata 'drop'", async () => {
    await inFolder(async (folder) => {
      const path = await written(folder);
      await writeFrames(path, frames, { metadata: 'drop' });
      expect(existsSync(`${path}.json`)).toBe(false);
      expect(await codeOf(readFrames(path))).toBe('missing-option');
    });
  });

  it('is not read when it is absurdly large', async () => {
    await inFolder(async (folder) => {
      const path = await written(folder);
      writeFileSync(`${path}.json`, ' '.repeat((1 << 24) + 1));
      expect(await codeOf(readFrames(path))).toBe('limit-exceeded');
    });
  });
});

describe('descriptions inside files', () => {
  it('damaged in a TIFF or a text, they are refused rather than ignored', async () => {
    const tiff = Buffer.from(await writeFrames('bytes', frames, { format: 'tiff' }));
    const at = tiff.indexOf('apparent temperature');
    tiff.write('apparent temperament', at);
    expect(await codeOf(readFrames(new Uint8Array(tiff)))).toBe('malformed');
    const text = new TextDecoder().decode(await writeFrames('bytes', frames, { format: 'csv' }));
    const changes: [RegExp, string][] = [
      [/apparent/, 'apparant'],
      [/# shape: .*/, '# shape: [1, 2'],
      [/# shape: .*/, '# shape: [1,3,2]'],
      [/# dataType: .*/, '# dataType: float12'],
      [/# quantity: .*\n/, ''],
    ];
    for (const [from, to] of changes) {
      expect(await codeOf(readFrames(new TextEncoder().encode(text.replace(from, to)))), String(from)).toBe(
        'malformed',
      );
    }
  });
});

describe('files appear whole or not at all', () => {
  it('a folder that is not there, one that may not be written, a name that is a folder', async () => {
    await inFolder(async (folder) => {
      const missing = await errorOf(writeFrames(`${folder}/none/a.npy`, frames));
      expect([missing.code, missing.hint]).toEqual(['write-failed', 'Make the folder first.']);
      await mkdir(`${folder}/a.tif`);
      expect(await codeOf(writeFrames(`${folder}/a.tif`, frames))).toBe('write-failed');
      expect(readdirSync(folder)).toEqual(['a.tif']);
    });
  });

  it('an abort in the middle leaves what was there', async () => {
    await inFolder(async (folder) => {
      const path = `${folder}/a.tif`;
      await writeFrames(path, frames);
      const before = readFileSync(path);
      const stop = new AbortController();
      const many = view(new Float32Array(200 * 100), [200, 10, 10]);
      const writing = writeFrames(path, many, { quantity: 'counts', signal: stop.signal });
      setTimeout(() => stop.abort(), 2);
      const code = await codeOf(writing).catch(() => 'finished');
      if (code !== 'finished') {
        expect(code).toBe('aborted');
        expect(readFileSync(path)).toEqual(before);
      }
      expect(readdirSync(folder)).toEqual(['a.tif']);
      expect(await codeOf(writeFrames('bytes', frames, { format: 'tiff', signal: stop.signal }))).toBe(
        'aborted',
      );
    });
  });

  it('a process killed while writing never leaves half a file under the name', async () => {
    const built = new URL('../dist/index.js', import.meta.url);
    if (!existsSync(built)) {
      process.stderr.write('\nSKIPPED: the kill test needs the built package; run npm run build.\n');
      return;
    }
    await inFolder(async (folder) => {
      const path = `${folder}/a.tif`;
      const script = `
        import { writeFrames } from ${JSON.stringify(built.href)};
        const shape = [40, 200, 200];
        for (let round = 1; ; round++) {
          const data = new Float32Array(40 * 200 * 200).fill(round);
          await writeFrames(${JSON.stringify(path)}, { array: { data, shape, stride: [40000, 200, 1], offset: 0 }, quantity: 'counts' });
          if (round === 1) process.stdout.write('first');
        }`;
      for (const wait of [3, 17, 41, 77, 123]) {
        const child = spawn(process.execPath, ['--input-type=module', '-e', script], {
          stdio: ['ignore', 'pipe', 'inherit'],
        });
        await new Promise((resolve) => child.stdout.once('data', resolve));
        await new Promise((resolve) => setTimeout(resolve, wait));
        child.kill('SIGKILL');
        await new Promise((resolve) => child.once('exit', resolve));
        const { array, shape } = await readFrames(path);
        expect(shape).toEqual([40, 200, 200]);
        const [first] = array.data;
        expect(array.data.every((value) => value === first)).toBe(true);
      }
      // What a killed writer leaves is hidden and named for what it is.
      for (const name of readdirSync(folder)) expect(name).toMatch(/^a\.tif$|^\.a\.tif\..+\.partial$/);
    });
  }, 60_000);
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
        const data = type.from({ length: 3 * 7 * 5 }, (_, i) => (i * 7919) % 251);
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
