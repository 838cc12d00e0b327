/**
 * Bytes in: a path, a file URL, bytes in memory or a Blob, read piece by piece.
 *
 * Node's file system is imported only when a path is opened, so the module loads in a browser. No connection is
 * opened from here, whatever the caller passes.
 */
import { ArrayError } from './errors.js';

/** Where frames are read from. A path and a file URL need Node. */
export type FrameInputSource = string | URL | Uint8Array | ArrayBuffer | Blob;

/** Bytes that can be read piece by piece. */
export interface ByteSource {
  /** File name for messages; `bytes` for memory. */
  readonly name: string;
  /** Path where the source is a file. */
  readonly path: string | undefined;
  readonly size: number;
  /**
   * Reads a piece into new memory that the caller owns, starting at byte offset 0 of its buffer.
   * @throws {ArrayError} `truncated` when the piece reaches past the end; nothing is allocated then.
   */
  read(offset: number, length: number): Promise<Uint8Array>;
  /** The whole of a file that lies beside this one under its name and an ending; undefined where there is none. */
  beside(ending: string, limit: number): Promise<Uint8Array | undefined>;
  close(): Promise<void>;
}

/**
 * Opens a source.
 *
 * @throws {ArrayError} `not-found`, `not-readable`, `empty`, `wrong-option`; `unsupported` for a web address.
 */
export async function openSource(source: FrameInputSource): Promise<ByteSource> {
  if (typeof source === 'string' || source instanceof URL) return fileSource(pathOf(source));
  if (source instanceof Uint8Array) return checkedSize(memorySource(source));
  if (source instanceof ArrayBuffer) return checkedSize(memorySource(new Uint8Array(source)));
  if (typeof Blob !== 'undefined' && source instanceof Blob) return checkedSize(blobSource(source));
  throw new ArrayError('wrong-option', {
    path: 'source',
    expected: 'a path, a file URL, a Uint8Array, an ArrayBuffer or a Blob',
    received: source,
  });
}

function checkedSize(source: ByteSource): ByteSource {
  if (source.size > 0) return source;
  throw new ArrayError('empty', { path: source.name, expected: 'at least one byte', received: 'none' });
}

/** Path of a string or a file URL; a web address is refused. */
export function pathOf(source: string | URL): string | URL {
  const protocol = /^([a-z][a-z0-9+.-]+):\/\//i.exec(String(source))?.[1]?.toLowerCase();
  if (protocol === undefined || protocol === 'file') {
    return protocol === 'file' && typeof source === 'string' ? new URL(source) : source;
  }
  throw new ArrayError('unsupported', {
    path: 'source',
    expected: 'a path, a file URL or bytes',
    received: String(source),
    hint: 'This library opens no connection: fetch the address yourself and pass the bytes.',
  });
}

async function fileSource(path: string | URL): Promise<ByteSource> {
  const { open, stat } = await import('node:fs/promises');
  const text = path instanceof URL ? decodeURIComponent(path.pathname) : path;
  const name = nameOf(text);
  try {
    // Asked before opening: opening a pipe would wait for a writer.
    const status = await stat(path);
    if (!status.isFile()) {
      throw new ArrayError('not-readable', {
        path: name,
        expected: 'a file',
        received: status.isDirectory() ? 'a folder' : 'a device or pipe',
      });
    }
    const file = await open(path, 'r');
    const { size } = await file.stat();
    const source: ByteSource = {
      name,
      path: text,
      size,
      async read(offset, length) {
        checkPiece(this, offset, length);
        const bytes = new Uint8Array(length);
        for (let done = 0; done < length; ) {
          const { bytesRead } = await file.read(bytes, done, length - done, offset + done);
          if (bytesRead === 0) throw pastEnd(this, offset, length);
          done += bytesRead;
        }
        return bytes;
      },
      async beside(ending, limit) {
        const other = path instanceof URL ? new URL(`${path.href}${ending}`) : `${path}${ending}`;
        const there = await stat(other).catch(() => undefined);
        if (!there?.isFile()) return undefined;
        const neighbour = await fileSource(other);
        try {
          if (neighbour.size <= limit) return await neighbour.read(0, neighbour.size);
          throw new ArrayError('limit-exceeded', {
            path: neighbour.name,
            expected: `at most ${limit} bytes`,
            received: neighbour.size,
          });
        } finally {
          await neighbour.close();
        }
      },
      close: () => file.close(),
    };
    if (size === 0) await file.close();
    return checkedSize(source);
  } catch (error) {
    if (error instanceof ArrayError) throw error;
    const missing = ['ENOENT', 'ENOTDIR'].includes((error as { code?: string }).code ?? '');
    throw new ArrayError(missing ? 'not-found' : 'not-readable', {
      path: name,
      expected: missing ? 'a file that exists' : 'a file that can be read',
      received: text,
      cause: error,
    });
  }
}

/** The last part of a path. */
export function nameOf(path: string): string {
  return path.slice(Math.max(path.lastIndexOf('/'), path.lastIndexOf('\\')) + 1);
}

function memorySource(bytes: Uint8Array): ByteSource {
  return {
    name: 'bytes',
    path: undefined,
    size: bytes.length,
    async read(offset, length) {
      checkPiece(this, offset, length);
      return new Uint8Array(bytes.subarray(offset, offset + length));
    },
    async beside() {
      return undefined;
    },
    async close() {},
  };
}

function blobSource(blob: Blob): ByteSource {
  const { name } = blob as { name?: unknown };
  return {
    name: typeof name === 'string' && name !== '' ? name : 'blob',
    path: undefined,
    size: blob.size,
    async read(offset, length) {
      checkPiece(this, offset, length);
      const bytes = new Uint8Array(await blob.slice(offset, offset + length).arrayBuffer());
      if (bytes.length !== length) throw pastEnd(this, offset, length);
      return bytes;
    },
    async beside() {
      return undefined;
    },
    async close() {},
  };
}

function checkPiece(source: ByteSource, offset: number, length: number): void {
  const sound = Number.isSafeInteger(offset) && Number.isSafeInteger(length) && offset >= 0 && length >= 0;
  if (!sound || offset + length > source.size) throw pastEnd(source, offset, length);
}

function pastEnd(source: ByteSource, offset: number, length: number): ArrayError {
  return new ArrayError('truncated', {
    path: source.name,
    expected: `${length} bytes from byte ${offset} on`,
    received: `a file of ${source.size} bytes`,
    hint: 'The file is cut off or its header is damaged: copy it again from where it was made.',
  });
}
