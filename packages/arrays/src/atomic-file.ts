/**
 * Files that appear whole or not at all: written under another name in the same folder, then renamed.
 *
 * A process killed in the middle leaves the earlier file, or none, under the final name, and a hidden *.partial file.
 */
import { ArrayError, isArrayError } from './errors.js';
import type { WrittenFile } from './format.js';
import { stopIfAborted } from './options.js';
import { nameOf } from './source.js';

/**
 * Writes a file, and the one that belongs beside it.
 *
 * The file beside comes into place first: a reader that meets it with an older array sees that they do not fit.
 * @throws {ArrayError} `write-failed`, `aborted`.
 */
export async function writeAtomically(
  path: string,
  { chunks, besides }: WrittenFile,
  keepBesides: boolean,
  signal: AbortSignal | undefined,
): Promise<void> {
  const { open, rename, rm } = await import('node:fs/promises');
  const suffix = `${process.pid}-${Math.random().toString(36).slice(2, 10)}.partial`;
  const folder = path.slice(0, path.length - nameOf(path).length);
  const partial = (name: string): string => `${folder}.${name}.${suffix}`;
  const pending: string[] = [];
  const write = async (target: string, pieces: Iterable<Uint8Array>): Promise<string> => {
    const under = partial(nameOf(target));
    const file = await open(under, 'wx');
    pending.push(under);
    try {
      for (const piece of pieces) {
        stopIfAborted(signal);
        for (let done = 0; done < piece.length; ) {
          done += (await file.write(piece, done, piece.length - done)).bytesWritten;
        }
      }
      await file.sync();
    } finally {
      await file.close();
    }
    return under;
  };
  try {
    const under = await write(path, chunks);
    if (besides !== undefined) {
      const beside = `${path}${besides.ending}`;
      if (keepBesides) await rename(await write(beside, [new TextEncoder().encode(besides.text())]), beside);
      else await rm(beside, { force: true });
    }
    await rename(under, path);
  } catch (error) {
    for (const name of pending) await rm(name, { force: true }).catch(() => {});
    if (isArrayError(error)) throw error;
    throw new ArrayError('write-failed', {
      path: nameOf(path),
      expected: 'a file that can be written',
      received: (error as Error).message,
      hint: (error as { code?: string }).code === 'ENOENT' ? 'Make the folder first.' : undefined,
      cause: error,
    });
  }
}
