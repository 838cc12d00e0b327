/**
 * What this library writes into a file about its content, so that quantity and unit survive: in TIFF as JSON in
 * ImageDescription, in CSV as comment lines, for NPY as a JSON file beside it (NAME.npy.json).
 *
 * A damaged description is an error, never ignored: it is what keeps a corrected frame from being corrected again.
 */
import { type Quantity, quantities, softwareVersion } from '@graybody/core';
import { ArrayError } from './errors.js';
import type { FrameShape } from './limits.js';

/** The word every description carries. */
export const descriptionFormat = 'graybody-frames';

/** Description of the content of a file, version 1. */
export interface StoredDescription {
  readonly format: typeof descriptionFormat;
  readonly version: 1;
  /** Frames of a quantity, or the reason codes that lie beside a frame. */
  readonly content: 'frames' | 'flags';
  readonly quantity: Quantity;
  readonly unit: string;
  /** Frames, rows, columns. */
  readonly shape: FrameShape;
  readonly dataType: string;
  /** Date and time of each frame, ISO 8601. */
  readonly times?: readonly string[];
  /** Where the numbers come from: any JSON. */
  readonly provenance?: unknown;
  readonly software?: string;
  /** NPY only: CRC-32 of the bytes of the first frame, which ties the description to the array beside it. */
  readonly firstFrameCrc32?: number;
}

/** A description to be written. */
export function describeFrames(
  parts: Omit<StoredDescription, 'format' | 'version' | 'software'>,
): StoredDescription {
  return { format: descriptionFormat, version: 1, ...parts, software: `@graybody/arrays ${softwareVersion}` };
}

/** Whether a text claims to hold a description of ours, sound or damaged. */
export function claimsDescription(text: string): boolean {
  return text.includes(descriptionFormat);
}

/**
 * The description in a JSON text.
 *
 * @throws {ArrayError} `malformed`, `unsupported` for a newer version.
 */
export function parseDescription(text: string, path: string): StoredDescription {
  let value: unknown;
  try {
    value = JSON.parse(text);
  } catch (cause) {
    throw new ArrayError('malformed', { path, expected: 'a description in JSON', received: text, cause });
  }
  return checkedDescription(value, path);
}

/** Checks a parsed description. */
export function checkedDescription(value: unknown, path: string): StoredDescription {
  const wrong = (key: string, expected: string, received: unknown): ArrayError =>
    new ArrayError('malformed', {
      path: `${path}: ${key}`,
      expected,
      received: received === undefined ? 'nothing' : received,
      hint: 'The description of the frames is damaged; write the file again from its source.',
    });
  if (typeof value !== 'object' || value === null) throw wrong('description', 'an object', value);
  const given = value as Partial<Record<keyof StoredDescription, unknown>>;
  if (given.format !== descriptionFormat) throw wrong('format', descriptionFormat, given.format);
  if (given.version !== 1) {
    throw new ArrayError('unsupported', {
      path: `${path}: version`,
      expected: `${descriptionFormat} of version 1`,
      received: given.version,
      hint: 'It was written by a newer release: update @graybody/arrays.',
    });
  }
  const { content, quantity, unit, shape, dataType, times, firstFrameCrc32 } = given;
  if (content !== 'frames' && content !== 'flags') throw wrong('content', "'frames' or 'flags'", content);
  if (!(quantities as readonly unknown[]).includes(quantity))
    throw wrong('quantity', quantities.join(', '), quantity);
  if (typeof unit !== 'string') throw wrong('unit', 'a text', unit);
  if (quantity !== 'counts' && quantity !== 'band radiance' && unit !== 'K') throw wrong('unit', "'K'", unit);
  if (!Array.isArray(shape) || shape.length !== 3 || !shape.every(Number.isSafeInteger)) {
    throw wrong('shape', 'frames, rows, columns', shape);
  }
  if (typeof dataType !== 'string') throw wrong('dataType', 'a text', dataType);
  const timesFit =
    Array.isArray(times) && times.length === shape[0] && times.every((time) => typeof time === 'string');
  if (times !== undefined && !timesFit) throw wrong('times', `${shape[0]} texts`, times);
  if (firstFrameCrc32 !== undefined && typeof firstFrameCrc32 !== 'number') {
    throw wrong('firstFrameCrc32', 'a number', firstFrameCrc32);
  }
  return value as StoredDescription;
}

/** Refuses a description that does not fit the array it lies with. */
export function refuseOtherArray(
  description: StoredDescription,
  shape: FrameShape,
  dataType: string,
  path: string,
): void {
  const fits =
    description.dataType === dataType && shape.every((extent, i) => extent === description.shape[i]);
  if (fits) return;
  throw new ArrayError('malformed', {
    path,
    expected: `an array of ${description.dataType}, [${description.shape.join(', ')}], as its description says`,
    received: `${dataType}, [${shape.join(', ')}]`,
    hint: 'The description belongs to another array: write both again, or remove the description.',
  });
}

const crcTable: Uint32Array = Uint32Array.from({ length: 256 }, (_, n) => {
  let c = n;
  for (let bit = 0; bit < 8; bit++) c = c & 1 ? 0xedb88320 ^ (c >>> 1) : c >>> 1;
  return c >>> 0;
});

/** CRC-32 of bytes. [ISO 3309; check value of "123456789": 0xcbf43926] */
export function crc32(bytes: Uint8Array): number {
  let crc = 0xffffffff;
  for (let i = 0; i < bytes.length; i++) crc = crcTable[(crc ^ bytes[i]!) & 0xff]! ^ (crc >>> 8);
  return (crc ^ 0xffffffff) >>> 0;
}
