/**
 * What a format is: the row of the table, the reader and the writer behind it. No format imports another.
 */
import type { ArrayType, DataType, ElementArray } from './element-type.js';
import type { FrameShape, Limits } from './limits.js';
import type { ByteSource } from './source.js';
import type { StoredDescription } from './stored-description.js';

/** A row of the table of formats. */
export interface Format {
  readonly id: FormatId;
  readonly name: string;
  /** Endings of file names, used to choose a writer and to say when a name misleads; never to choose a reader. */
  readonly extensions: readonly string[];
  /** Whether frames are read one at a time, in bounded memory. */
  readonly streams: boolean;
  /** Whether the first bytes (up to 4096) are those of this format. */
  recognise(head: Uint8Array): boolean;
  reader(): Promise<FormatReader>;
  writer?(): Promise<FormatWriter>;
}

/** Names of the formats. */
export type FormatId = 'npy' | 'tiff' | 'csv';

/** How delimited numbers are written; found from the text where not given. */
export interface TableOptions {
  readonly delimiter?: ',' | ';' | '\t' | ' ' | undefined;
  readonly decimal?: '.' | ',' | undefined;
}

/** What a reader is told beside the bytes. */
export interface ReadingOptions {
  readonly limits: Limits;
  readonly table: TableOptions;
  readonly signal: AbortSignal | undefined;
}

/** Opens one format. */
export interface FormatReader {
  open(source: ByteSource, options: ReadingOptions): Promise<StoredArray>;
}

/** The numbers of a file as they are stored, before scale, offset and unit. */
export interface StoredArray {
  readonly shape: FrameShape;
  readonly dataType: DataType;
  /** What this library wrote into the file about its content; undefined in a file of others. */
  readonly description: StoredDescription | undefined;
  /** Numbers the file itself declares to stand for a missing cell. */
  readonly noData: readonly number[];
  /** What else the file says, by the names of its format. */
  readonly metadata: Readonly<Record<string, unknown>>;
  /** Reads the numbers of one frame, row by row, into memory the caller owns. */
  read(index: number): Promise<ElementArray>;
}

/** Frames to be written. */
export interface FramesToWrite {
  readonly shape: FrameShape;
  /** Whether the frames came as one (row, column) view. */
  readonly single: boolean;
  readonly dataType: ArrayType;
  readonly description: StoredDescription;
  /** The numbers of one frame, row by row. */
  frame(index: number): ElementArray;
}

/** What a writer makes: the file in pieces, and the text of a file beside it where the format has no place for it. */
export interface WrittenFile {
  readonly chunks: Iterable<Uint8Array>;
  readonly besides?: { readonly ending: string; text(): string };
}

/** Writes one format. */
export interface FormatWriter {
  write(frames: FramesToWrite): WrittenFile;
}
