import { describe, expect, it } from 'vitest';
import {
  describe as described,
  isMeasurementError,
  MeasurementError,
  measurementErrorCodes,
  within,
} from '../src/errors.js';
import { thrownBy } from './support/thrown.js';

describe('MeasurementError', () => {
  it.each(measurementErrorCodes)(
    '%s: the message says where, what was expected, what came, what to write',
    (code) => {
      const error = new MeasurementError(code, {
        path: 'path[1].transmittance',
        expected: '0 < transmittance ≤ 1',
        received: 95,
        hint: 'Write 0.95 for 95 %.',
      });
      expect(error.message).toBe(
        'path[1].transmittance: expected 0 < transmittance ≤ 1, got 95. Write 0.95 for 95 %.',
      );
      expect(error).toMatchObject({
        name: 'MeasurementError',
        code,
        path: 'path[1].transmittance',
        expected: '0 < transmittance ≤ 1',
        received: 95,
        hint: 'Write 0.95 for 95 %.',
      });
      expect(isMeasurementError(error)).toBe(true);
    },
  );

  it('leaves out of the message what it was not given', () => {
    expect(new MeasurementError('no-solution', {}).message).toBe('no-solution.');
    expect(new MeasurementError('no-solution', { path: '' }).message).toBe('no-solution.');
    expect(new MeasurementError('missing-input', { path: 'band', expected: 'a band' }).message).toBe(
      'band: expected a band.',
    );
    expect(new MeasurementError('wrong-type', { expected: 'a number', received: null }).message).toBe(
      'expected a number, got null.',
    );
  });

  it('carries its cause', () => {
    const cause = new Error('deeper');
    expect(new MeasurementError('wrong-type', { cause }).cause).toBe(cause);
    expect('cause' in new MeasurementError('wrong-type', {})).toBe(false);
  });
});

describe('isMeasurementError', () => {
  it('goes by the tag, so that an error of a second copy of the package is recognised', () => {
    const other = Object.assign(new Error('x'), { name: 'MeasurementError', code: 'no-solution' });
    expect(isMeasurementError(other)).toBe(true);
  });

  it('is false for everything else', () => {
    const wrongCode = Object.assign(new Error('x'), { name: 'MeasurementError', code: 'other' });
    for (const value of [
      new Error('x'),
      wrongCode,
      { name: 'MeasurementError', code: 'no-solution' },
      'no-solution',
      null,
      undefined,
    ]) {
      expect(isMeasurementError(value)).toBe(false);
    }
  });
});

describe('within', () => {
  it('returns what the check returns', () => {
    expect(within('recorded', () => 7)).toBe(7);
  });

  it('puts the prefix before the path and keeps code, expectation, hint and the original as cause', () => {
    const original = new MeasurementError('out-of-range', {
      path: 'emissivity',
      expected: '0 < emissivity ≤ 1',
      received: 95,
      hint: 'Write 0.95 for 95 %.',
    });
    const error = thrownBy(() =>
      within('recorded', () => {
        throw original;
      }),
    );
    expect(error.message).toBe(
      'recorded.emissivity: expected 0 < emissivity ≤ 1, got 95. Write 0.95 for 95 %.',
    );
    expect(error.cause).toBe(original);
    expect(error.received).toBe(95);
  });

  it('is the prefix alone where the check names no path, or only what is stripped', () => {
    const bare = (path?: string) => (): never => {
      throw new MeasurementError('wrong-type', path === undefined ? {} : { path });
    };
    expect(thrownBy(() => within('recorded', bare())).path).toBe('recorded');
    expect(thrownBy(() => within('path[0]', bare('air'), /^air\.?/)).path).toBe('path[0]');
    expect(thrownBy(() => within('path[0]', bare('air.temperature'), /^air\.?/)).path).toBe(
      'path[0].temperature',
    );
    expect(thrownBy(() => within('path[0]', bare('air'))).message).toBe('path[0].air: wrong-type.');
  });

  it('lets other errors through untouched', () => {
    const other = new RangeError('x');
    expect(() =>
      within('recorded', () => {
        throw other;
      }),
    ).toThrow(other);
  });
});

describe('describe', () => {
  it.each([
    ['short', '"short"'],
    ['x'.repeat(41), `"${'x'.repeat(40)}…"`],
    ['x'.repeat(40), `"${'x'.repeat(40)}"`],
    [95, '95'],
    [Number.NaN, 'NaN'],
    [true, 'true'],
    [null, 'null'],
    [undefined, 'undefined'],
    [7n, '7n'],
    [() => 1, 'a function'],
    [[1, 'a', [2]], '[1, "a", [2]]'],
    [[1, 2, 3, 4, 5, 6, 7], 'an array of 7'],
    [new Float32Array(2), 'a Float32Array'],
    [{}, 'an empty object'],
    [{ a: 1, b: 2, c: 3, d: 4, e: 5, f: 6, g: 7 }, 'an object with a, b, c, d, e, f'],
    [Symbol('s'), 'symbol'],
  ])('%o is %s', (value, text) => {
    expect(described(value)).toBe(text);
  });
});
