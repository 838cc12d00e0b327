import { describe, expect, it } from 'vitest';
import * as constants from '../src/constants.js';
import { relativeError } from './support/reference.js';

describe('constants', () => {
  it('h, c and k are the exact values of the SI (published: SI Brochure, 9th edition, 2019)', () => {
    expect(constants.planckConstant).toBe(6.62607015e-34);
    expect(constants.speedOfLight).toBe(299792458);
    expect(constants.boltzmannConstant).toBe(1.380649e-23);
  });

  // Published: CODATA 2018 and 2022, 15 digits in fixtures/reference/README.md; astropy and mathjs agree.
  // 5e-15 is half a unit of the last of 15 printed digits of a figure beginning with 1, plus a few roundings.
  it.each([
    ['c₁', constants.firstRadiationConstant, 3.74177185219276e-16],
    ['c₂', constants.secondRadiationConstant * 1e-6, 1.43877687750393e-2],
    ['σ', constants.stefanBoltzmannConstant, 5.67037441918443e-8],
    ['b', constants.wienDisplacementConstant * 1e-6, 2.89777195518517e-3],
    ['c₁L = c₁/π', constants.firstRadiationConstantRadiance * 1e-24, 3.74177185219276e-16 / Math.PI],
  ])('%s agrees with CODATA in all 15 printed digits (5e-15 relative)', (_, value, printed) => {
    expect(relativeError(value, printed)).toBeLessThanOrEqual(5e-15);
  });

  it('the root behind b solves x = 5(1 − e⁻ˣ) (the equation is the check); to one rounding', () => {
    const x = constants.secondRadiationConstant / constants.wienDisplacementConstant;
    expect(Math.abs(x - 5 * -Math.expm1(-x))).toBeLessThanOrEqual(4e-15);
  });

  it('the exports are these eight and no others', () => {
    expect(Object.keys(constants).sort()).toEqual([
      'boltzmannConstant',
      'firstRadiationConstant',
      'firstRadiationConstantRadiance',
      'planckConstant',
      'secondRadiationConstant',
      'speedOfLight',
      'stefanBoltzmannConstant',
      'wienDisplacementConstant',
    ]);
  });
});
