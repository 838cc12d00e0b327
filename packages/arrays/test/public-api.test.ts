import { describe, expect, it } from 'vitest';
import { ArrayError, arrayErrorCodes, isArrayError } from '../src/errors.js';
import { formats } from '../src/formats.js';
import * as arrays from '../src/index.js';

describe('the public names', () => {
  it('are these and no others', () => {
    expect(Object.keys(arrays).sort()).toEqual([
      'ArrayError',
      'arrayErrorCodes',
      'conditionsNamespace',
      'conditionsObjectFromXml',
      'dataTypes',
      'defaultLimits',
      'isArrayError',
      'openFrames',
      'pictureSvg',
      'readConditionsXml',
      'readFrames',
      'writeFlags',
      'writeFrames',
    ]);
  });

  it('every format has a reader, endings of its own, and only the last takes any text', async () => {
    const endings = formats.flatMap(({ extensions }) => extensions);
    expect(new Set(endings).size).toBe(endings.length);
    for (const format of formats) expect(typeof (await format.reader()).open).toBe('function');
    const text = new TextEncoder().encode('1,2\n3,4\n');
    expect(formats.filter((format) => format.recognise(text)).map(({ id }) => id)).toEqual(['csv']);
    expect(formats.at(-1)?.id).toBe('csv');
  });
});

describe('ArrayError', () => {
  it('says where, what was expected, what came, what to write', () => {
    const cause = new Error('below');
    const error = new ArrayError('wrong-unit', {
      path: 'unit',
      expected: 'a unit',
      received: 'hot',
      hint: "Write 'K'.",
      cause,
    });
    expect(error.message).toBe('unit: expected a unit, got "hot". Write \'K\'.');
    expect(error).toMatchObject({
      name: 'ArrayError',
      code: 'wrong-unit',
      path: 'unit',
      received: 'hot',
      hint: "Write 'K'.",
      cause,
    });
    expect(new ArrayError('empty', { expected: 'bytes' }).message).toBe('expected bytes.');
  });

  it('is recognised by its tag, so another copy of the package counts too', () => {
    const other = Object.assign(new Error('x'), { name: 'ArrayError', code: arrayErrorCodes[0] });
    expect(isArrayError(other)).toBe(true);
    expect(isArrayError(Object.assign(new Error('x'), { name: 'ArrayError', code: 'ENOENT' }))).toBe(false);
    expect(isArrayError(new Error('x'))).toBe(false);
    expect(isArrayError('ArrayError')).toBe(false);
  });
});
