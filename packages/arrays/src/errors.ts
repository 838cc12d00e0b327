/**
 * The one error class of this package, its closed list of codes, and its guard.
 *
 * Messages have the form of core's: `unit: expected a unit of temperature, got "hot". Write 'K', 'degC' or 'degF'.`
 */
import { describe } from '@graybody/core';

/** Every code an {@link ArrayError} can carry. docs/ERRORS.md has a line on each. */
export const arrayErrorCodes = [
  'not-found',
  'not-readable',
  'empty',
  'truncated',
  'not-recognised',
  'unsupported',
  'malformed',
  'limit-exceeded',
  'missing-option',
  'wrong-option',
  'unknown-option',
  'wrong-quantity',
  'wrong-unit',
  'implausible',
  'wrong-shape',
  'wrong-index',
  'closed',
  'aborted',
  'write-failed',
] as const;

/** A code of {@link arrayErrorCodes}. */
export type ArrayErrorCode = (typeof arrayErrorCodes)[number];

/** What an {@link ArrayError} is built from. */
export interface ArrayErrorDetails {
  /** Name of the option or file at fault, with the place in it: `scan.tif: page 3`. */
  readonly path?: string | undefined;
  /** What was expected, as a phrase that follows the word "expected". */
  readonly expected: string;
  /** The value that came. */
  readonly received?: unknown;
  /** What to write instead: a full sentence. */
  readonly hint?: string | undefined;
  readonly cause?: unknown;
}

/** The error every public function of this package throws, beside the `MeasurementError` of what it calls in core. */
export class ArrayError extends Error {
  override readonly name: string = 'ArrayError';
  readonly code: ArrayErrorCode;
  readonly path: string | undefined;
  readonly expected: string;
  readonly received: unknown;
  readonly hint: string | undefined;

  constructor(code: ArrayErrorCode, details: ArrayErrorDetails) {
    super(messageOf(details), details.cause === undefined ? undefined : { cause: details.cause });
    this.code = code;
    this.path = details.path;
    this.expected = details.expected;
    this.received = details.received;
    this.hint = details.hint;
  }
}

/** Whether a caught value is an {@link ArrayError}, whichever copy of the package threw it. */
export function isArrayError(value: unknown): value is ArrayError {
  return (
    value instanceof Error &&
    value.name === 'ArrayError' &&
    (arrayErrorCodes as readonly unknown[]).includes((value as { code?: unknown }).code)
  );
}

function messageOf({ path, expected, received, hint }: ArrayErrorDetails): string {
  const subject = path === undefined || path === '' ? '' : `${path}: `;
  const got = received === undefined ? '' : `, got ${describe(received)}`;
  return `${subject}expected ${expected}${got}.${hint === undefined ? '' : ` ${hint}`}`;
}
