/**
 * Fixtures, tools of other makers, and small helpers of the tests.
 */
import { spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import { type ArrayError, type ArrayErrorCode, isArrayError } from '../../src/errors.js';

const fixtures = new URL('../../../../fixtures/', import.meta.url);

/** Path of a fixture. */
export function fixture(name: string): string {
  return fileURLToPath(new URL(name, fixtures));
}

/** Bytes of a fixture. */
export function fixtureBytes(name: string): Uint8Array {
  return new Uint8Array(readFileSync(fixture(name)));
}

/** What fixtures/arrays/expected.json says. */
export interface Expected {
  readonly expected: Readonly<
    Record<
      string,
      {
        readonly shape: readonly number[];
        readonly dataType: string;
        readonly sha256: string;
        readonly delimiter?: string;
        readonly decimal?: string;
        readonly header?: readonly string[];
      }
    >
  >;
  readonly refused: Readonly<Record<string, { readonly code: ArrayErrorCode; readonly why: string }>>;
}

export const expectedArrays: Expected = JSON.parse(readFileSync(fixture('arrays/expected.json'), 'utf8'));

/** SHA-256 of the bytes of a typed array. */
export function sha256(data: ArrayBufferView): string {
  return createHash('sha256')
    .update(new Uint8Array(data.buffer, data.byteOffset, data.byteLength))
    .digest('hex');
}

/** A folder that is gone after the callback. */
export async function inFolder<Result>(use: (folder: string) => Promise<Result>): Promise<Result> {
  const folder = mkdtempSync(join(tmpdir(), 'graybody-arrays-'));
  try {
    return await use(folder);
  } finally {
    rmSync(folder, { recursive: true, force: true });
  }
}

/** The ArrayError a promise ends with; anything else fails. */
export async function errorOf(promise: Promise<unknown>): Promise<ArrayError> {
  try {
    await promise;
  } catch (error) {
    if (isArrayError(error)) return error;
    throw error;
  }
  throw new Error('expected an ArrayError, but nothing was thrown');
}

/** The code of the ArrayError a promise ends with. */
export async function codeOf(promise: Promise<unknown>): Promise<ArrayErrorCode> {
  return (await errorOf(promise)).code;
}

/** Python with NumPy and tifffile, or undefined with a loud line. */
export function pythonOrSkip(check: string): string | undefined {
  for (const command of ['python3', '/usr/bin/python3']) {
    if (spawnSync(command, ['-c', 'import numpy, tifffile'], { stdio: 'ignore' }).status === 0)
      return command;
  }
  process.stderr.write(
    `\nSKIPPED: ${check} needs python3 with numpy and tifffile, which is not on this machine.\n`,
  );
  return undefined;
}

/** A seeded generator of whole numbers 0…2³²−1 (mulberry32). */
export function seeded(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state + 0x6d2b79f5) | 0;
    let t = Math.imul(state ^ (state >>> 15), 1 | state);
    t = (t + Math.imul(t ^ (t >>> 7), 61 | t)) ^ t;
    return (t ^ (t >>> 14)) >>> 0;
  };
}
