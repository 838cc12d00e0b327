import { describe, expect, it } from 'vitest';
import * as check from '../src/check.js';
import { type BadInput, expectRefused } from './support/thrown.js';

describe('checks return what they accept', () => {
  it('numbers at the ends of their ranges', () => {
    expect(check.finiteNumber(-3, 'x')).toBe(-3);
    expect(check.positive(Number.MIN_VALUE, 'x')).toBe(Number.MIN_VALUE);
    expect(check.notNegative(0, 'x')).toBe(0);
    expect(check.ratio(0, 'x')).toBe(0);
    expect(check.ratio(1, 'x', 'above 0')).toBe(1);
    expect(check.temperature(150, 'x')).toBe(150);
    expect(check.temperature(3500, 'x')).toBe(3500);
  });

  it('words, objects and lists', () => {
    expect(check.oneOf('b', 'x', ['a', 'b'])).toBe('b');
    const given = { a: 1 };
    expect(check.plainObject(given, 'x', ['a', 'b'])).toBe(given);
    expect(check.numberList([1, 2], 'x')).toEqual([1, 2]);
    expect(check.numberList(Float32Array.of(1, 2), 'x')).toEqual([1, 2]);
  });
});

const path = 'path[0].transmittance';
const refused: readonly BadInput[] = [
  [
    'a text for a number',
    () => check.finiteNumber('1', path),
    'wrong-type',
    path,
    'expected a number, got "1"',
  ],
  [
    'another expectation',
    () => check.finiteNumber('1', path, 'a gain'),
    'wrong-type',
    path,
    'expected a gain',
  ],
  ['NaN', () => check.finiteNumber(Number.NaN, path), 'not-finite', path, 'a finite number, got NaN'],
  ['0 where > 0', () => check.positive(0, path), 'out-of-range', path, 'a number > 0, got 0'],
  ['−1 where ≥ 0', () => check.notNegative(-1, path), 'out-of-range', path, 'a number ≥ 0, got -1'],
  ['a percentage', () => check.ratio(95, path), 'out-of-range', path, 'Write 0.95 for 95 %.'],
  ['100 %', () => check.ratio(100, path), 'out-of-range', path, 'Write 1 for 100 %.'],
  [
    'a ratio of 0',
    () => check.ratio(0, path, 'above 0'),
    'out-of-range',
    path,
    '0 < transmittance ≤ 1, got 0.',
  ],
  ['a ratio of −0.1', () => check.ratio(-0.1, path), 'out-of-range', path, '0 ≤ transmittance ≤ 1'],
  [
    'a ratio as text',
    () => check.ratio('0.9', 'emissivity'),
    'wrong-type',
    'emissivity',
    '0 ≤ emissivity ≤ 1',
  ],
  ['a ratio of 250', () => check.ratio(250, path), 'out-of-range', path, 'got 250.'],
  ['Celsius as kelvin', () => check.temperature(20, 'T'), 'out-of-range', 'T', 'Did you mean celsius(20)?'],
  ['−40 as kelvin', () => check.temperature(-40, 'T'), 'out-of-range', 'T', 'Did you mean celsius(-40)?'],
  ['149.9 K', () => check.temperature(149.9, 'T'), 'out-of-range', 'T', '150…3500 K'],
  ['3500.1 K', () => check.temperature(3500.1, 'T'), 'out-of-range', 'T', '150…3500 K, got 3500.1.'],
  ['−200 K', () => check.temperature(-200, 'T'), 'out-of-range', 'T', '150…3500 K, got -200.'],
  ['a temperature as text', () => check.temperature('20', 'T'), 'wrong-type', 'T', 'a temperature in kelvin'],
  ['a temperature of NaN', () => check.temperature(Number.NaN, 'T'), 'not-finite', 'T', 'a finite number'],
  [
    'a misspelt word',
    () => check.oneOf('photons', 'd', ['energy', 'photon']),
    'out-of-range',
    'd',
    "Did you mean 'photon'?",
  ],
  [
    'a far word',
    () => check.oneOf('qqqqqqqqqqq', 'd', ['energy', 'photon']),
    'out-of-range',
    'd',
    "one of 'energy', 'photon'",
  ],
  [
    'a number for a word',
    () => check.oneOf(1, 'd', ['energy', 'photon']),
    'wrong-type',
    'd',
    "one of 'energy', 'photon'",
  ],
  [
    'null for an object',
    () => check.plainObject(null, 'air', ['a', 'b']),
    'wrong-type',
    'air',
    'an object with a, b',
  ],
  [
    'a list for an object',
    () => check.plainObject([], 'air', ['a']),
    'wrong-type',
    'air',
    'an object with a',
  ],
  [
    'a typed array for an object',
    () => check.plainObject(new Uint8Array(1), 'air', ['a']),
    'wrong-type',
    'air',
    'a Uint8Array',
  ],
  ['a text for an object', () => check.plainObject('a', 'air', ['a']), 'wrong-type', 'air', 'an object'],
  [
    'an unknown key',
    () => check.plainObject({ transmitance: 1 }, 'air', ['transmittance', 'temperature']),
    'unknown-key',
    'air.transmitance',
    "Did you mean 'transmittance'?",
  ],
  [
    'swapped letters',
    () => check.plainObject({ form: 1, knid: 1 }, '', ['form', 'kind']),
    'unknown-key',
    'knid',
    "Did you mean 'kind'?",
  ],
  [
    'an unknown key in capitals',
    () => check.plainObject({ Band: 1 }, '', ['band']),
    'unknown-key',
    'Band',
    "Did you mean 'band'?",
  ],
  [
    'a number for a list',
    () => check.numberList(8, 'wavelength'),
    'wrong-type',
    'wavelength',
    'a list of numbers',
  ],
  [
    'a DataView for a list',
    () => check.numberList(new DataView(new ArrayBuffer(8)), 'w'),
    'wrong-type',
    'w',
    'a DataView',
  ],
  [
    'a text in a list',
    () => check.numberList([8, '9'], 'wavelength'),
    'wrong-type',
    'wavelength[1]',
    'a number',
  ],
  ['a hole in a list', () => check.numberList([8, undefined], 'w'), 'wrong-type', 'w[1]', 'a number'],
  ['NaN in a list', () => check.numberList([8, Number.NaN], 'w'), 'not-finite', 'w[1]', 'a finite number'],
];

describe('checks refuse, and say what to write', () => {
  it.each(refused)('%s', (...row) => expectRefused(row));

  it('gives no hint where none fits', () => {
    expect(check.nearest(3, ['a'])).toEqual({});
    expect(check.nearest('same', ['same'])).toEqual({});
    expect(check.nearest('qqqqqqqq', ['energy'])).toEqual({});
  });
});
