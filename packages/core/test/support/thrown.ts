/** What a call throws, for tests of bad input. */
import { expect } from 'vitest';
import { isMeasurementError, type MeasurementError, type MeasurementErrorCode } from '../../src/errors.js';

/** The {@link MeasurementError} a call throws; fails when it throws none, or something else. */
export function thrownBy(call: () => unknown): MeasurementError {
  let result: unknown;
  try {
    result = call();
  } catch (error) {
    if (isMeasurementError(error)) return error;
    throw new Error(`expected a MeasurementError, got ${String(error)}`, { cause: error });
  }
  throw new Error(`expected a MeasurementError, got the result ${String(result)}`);
}

/** Bad input and what must come of it: title, call, code, path, and a part of the message that says what to write. */
export type BadInput = readonly [
  title: string,
  call: () => unknown,
  code: MeasurementErrorCode,
  path: string,
  says: string,
];

/** Checks one row of bad input. */
export function expectRefused([, call, code, path, says]: BadInput): void {
  const error = thrownBy(call);
  expect(error.code).toBe(code);
  expect(error.path).toBe(path);
  expect(error.message).toContain(says);
  expect(error.message).toContain('expected');
}

/** A value of a type the declaration does not allow, as a plain-JavaScript caller may pass it. */
export function untyped(value: unknown): never {
  return value as never;
}
