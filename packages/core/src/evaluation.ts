/**
 * Filling the input vector of a measurement equation, for one place: from numbers, or from the cells of maps.
 */
import { notNegative, ratio, temperature } from './check.js';
import { MeasurementError } from './errors.js';
import {
  type Affine,
  compose,
  type EquationInput,
  type MeasurementEquation,
} from './measurement-equation.js';
import { type Pixel, type Scalar, scalarAt } from './scalar.js';
import { isView } from './view.js';

/** An equation at one place: its inputs as numbers, x, gain and offset. */
export interface EquationAt extends Affine {
  readonly equation: MeasurementEquation;
  /** Input vector: ratios, and radiances of the temperatures. */
  readonly x: Float64Array;
  /** The inputs themselves by slot: ratios, kelvin, radiances. */
  readonly value: Float64Array;
}

/** Whether any input is a map. */
export function hasMaps(equation: MeasurementEquation): boolean {
  return equation.inputs.some((input) => isView(input.value));
}

/** The input vector before any input: slot 0 holds 0, slot 1 holds 1. */
export function startingVector({ slots }: MeasurementEquation): Float64Array {
  const x = new Float64Array(slots);
  x[1] = 1;
  return x;
}

/** What x holds of an input: the radiance of a temperature, anything else as it is. */
export function inputValue({ kind, band }: EquationInput, value: number): number {
  return kind === 'temperature' ? band.exact.radiance(value) : value;
}

/**
 * Evaluates the inputs at a pixel, or without one where no input is a map.
 *
 * @throws {MeasurementError} `needs-pixel` for a map without a pixel; `not-finite`, `out-of-range` for a bad cell.
 */
export function equationAt(equation: MeasurementEquation, pixel: Pixel | undefined): EquationAt {
  const x = startingVector(equation);
  const value = new Float64Array(equation.slots);
  for (const input of equation.inputs) {
    if (input.kind === 'curve') continue;
    const number = checkedCell(input, scalarAt(input.value as Scalar, pixel, input.name));
    value[input.slot] = number;
    x[input.slot] = inputValue(input, number);
  }
  const affine: Affine = { gain: 0, offset: 0 };
  compose(equation, x, affine);
  if (Number.isNaN(affine.gain)) {
    throw new MeasurementError('out-of-range', {
      path: pixel ? `[${pixel.row}][${pixel.column}]` : 'conditions',
      expected: 'emissivity + transmittance of the target ≤ 1, transmittance + reflectance of a layer ≤ 1',
      received: 'a sum above 1',
    });
  }
  return { equation, x, value, ...affine };
}

function checkedCell(input: EquationInput, value: number): number {
  switch (input.kind) {
    case 'positive ratio':
      return ratio(value, input.name, 'above 0');
    case 'ratio':
      return ratio(value, input.name);
    case 'temperature':
      return temperature(value, input.name);
    default:
      return notNegative(value, input.name);
  }
}
