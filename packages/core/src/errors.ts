/**
 * The one error class of this package, its closed list of codes, and its guard.
 *
 * Every message says what was expected, what came, and what to write instead:
 * `emissivity: expected 0 < emissivity ≤ 1, got 95. Write 0.95 for 95 %.`
 */

/** Every code a {@link MeasurementError} can carry. docs/ERRORS.md has a line on each. */
export const measurementErrorCodes = [
  'wrong-type',
  'not-finite',
  'out-of-range',
  'missing-input',
  'conflicting-inputs',
  'unknown-key',
  'wrong-shape',
  'wrong-band',
  'wrong-quantity',
  'already-corrected',
  'no-solution',
  'needs-pixel',
  'unsupported',
  'wrong-version',
] as const;

/** A code of {@link measurementErrorCodes}. */
export type MeasurementErrorCode = (typeof measurementErrorCodes)[number];

/** What a {@link MeasurementError} is built from. */
export interface ErrorDetails {
  /** Name of the input at fault, by its path: `path[1].transmittance`. */
  readonly path?: string;
  /** What was expected, as a phrase that follows the word "expected". */
  readonly expected?: string;
  /** The value that came. */
  readonly received?: unknown;
  /** What to write instead: a full sentence. */
  readonly hint?: string;
  readonly cause?: unknown;
}

/**
 * The error every public function of this package throws.
 *
 * Recognise it with {@link isMeasurementError}, which also works when two copies of the package are loaded.
 */
export class MeasurementError extends Error {
  override readonly name: string = 'MeasurementError';
  readonly code: MeasurementErrorCode;
  /** Name of the input at fault, by its path. */
  readonly path: string | undefined;
  /** What was expected. */
  readonly expected: string | undefined;
  /** What came. */
  readonly received: unknown;
  /** What to write instead. */
  readonly hint: string | undefined;

  /** Builds the message from the details. */
  constructor(code: MeasurementErrorCode, details: ErrorDetails) {
    super(messageOf(code, details), details.cause === undefined ? undefined : { cause: details.cause });
    this.code = code;
    this.path = details.path;
    this.expected = details.expected;
    this.received = details.received;
    this.hint = details.hint;
  }
}

/** Runs a check and puts a prefix before the path of what it throws, in place of `strip` where that leads it. */
export function within<Result>(prefix: string, check: () => Result, strip: RegExp = /^$/): Result {
  try {
    return check();
  } catch (error) {
    if (!isMeasurementError(error)) throw error;
    const own = error.path?.replace(strip, '') ?? '';
    const path = own === '' ? prefix : `${prefix}.${own}`;
    const { code, expected, received, hint } = error;
    throw new MeasurementError(code, {
      path,
      received,
      cause: error,
      ...(expected === undefined ? {} : { expected }),
      ...(hint === undefined ? {} : { hint }),
    });
  }
}

/** Whether a caught value is a {@link MeasurementError}, whichever copy of the package threw it. */
export function isMeasurementError(value: unknown): value is MeasurementError {
  return (
    value instanceof Error &&
    value.name === 'MeasurementError' &&
    (measurementErrorCodes as readonly unknown[]).includes((value as { code?: unknown }).code)
  );
}

function messageOf(code: MeasurementErrorCode, { path, expected, received, hint }: ErrorDetails): string {
  const subject = path === undefined || path === '' ? '' : `${path}: `;
  const body =
    expected === undefined
      ? code
      : received === undefined
        ? `expected ${expected}`
        : `expected ${expected}, got ${describe(received)}`;
  return `${subject}${body}.${hint === undefined ? '' : ` ${hint}`}`;
}

/** A short, safe text of any value for an error message. */
export function describe(value: unknown): string {
  if (typeof value === 'string') return value.length > 40 ? `"${value.slice(0, 40)}…"` : `"${value}"`;
  if (typeof value === 'number' || typeof value === 'boolean' || value == null) return String(value);
  if (typeof value === 'bigint') return `${value}n`;
  if (typeof value === 'function') return 'a function';
  if (Array.isArray(value))
    return value.length <= 6 ? `[${value.map(describe).join(', ')}]` : `an array of ${value.length}`;
  if (ArrayBuffer.isView(value)) return `a ${value.constructor.name}`;
  if (typeof value === 'object') {
    const keys = Object.keys(value);
    return keys.length === 0 ? 'an empty object' : `an object with ${keys.slice(0, 6).join(', ')}`;
  }
  return typeof value;
}
