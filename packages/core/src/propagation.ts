/**
 * First-order propagation of uncertainty through any function of named inputs, after JCGM 100:2008, 5.1.
 *
 * Sensitivities are central differences, good to about 1e-7 relative for a smooth function. Inputs are independent.
 */
import { type BudgetRow, combined } from './uncertainty.js';

/** An estimate with its standard uncertainty, both in the unit of the quantity. */
export interface Estimate {
  readonly value: number;
  readonly standardUncertainty: number;
}

/** A value found by propagation. */
export interface Propagated extends Estimate {
  /** One row an input with an uncertainty, largest part first. */
  readonly budget: readonly BudgetRow[];
}

/**
 * Value of `measure` at the estimates, its standard uncertainty and its budget.
 *
 * @param inputs - Estimates by name.
 * @param measure - A smooth function of the inputs' values; what it throws at the estimates is thrown on.
 * @param scale - Typical size of a change of each input; the step of the difference is a thousandth of it.
 */
export function propagate<Name extends string>(
  inputs: Readonly<Record<Name, Estimate>>,
  measure: (values: Readonly<Record<Name, number>>) => number,
  scale: (name: string) => number,
): Propagated {
  const names = Object.keys(inputs) as Name[];
  const values = Object.fromEntries(names.map((name) => [name, inputs[name].value])) as Record<Name, number>;
  const value = measure(values);
  const parts = names
    .filter((name) => inputs[name].standardUncertainty > 0)
    .map((name) => {
      const step = 1e-3 * scale(name);
      const shifted = (by: number): number => measure({ ...values, [name]: values[name] + by });
      const sensitivity =
        (8 * (shifted(step) - shifted(-step)) - (shifted(2 * step) - shifted(-2 * step))) / (12 * step);
      return { name, standardUncertainty: inputs[name].standardUncertainty, sensitivity };
    });
  const { rows, standardUncertainty } = combined(parts);
  return { value, standardUncertainty, budget: rows };
}

/** Mean and standard uncertainty of repeated readings (type A, JCGM 100:2008, 4.2): s/√n. */
export function meanOf(readings: readonly number[]): Estimate & { readonly deviation: number } {
  const value = readings.reduce((sum, reading) => sum + reading, 0) / readings.length;
  const squares = readings.reduce((sum, reading) => sum + (reading - value) ** 2, 0);
  const deviation = readings.length > 1 ? Math.sqrt(squares / (readings.length - 1)) : 0;
  return { value, deviation, standardUncertainty: deviation / Math.sqrt(readings.length) };
}
