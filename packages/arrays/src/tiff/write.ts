/**
 * Writes TIFF: classic, little-endian, one uncompressed strip a page.   [TIFF 6.0, sections 2 and 8]
 *
 * Uncompressed single strips are what every reader agrees on. A file of more than 4 GiB does not fit the format.
 */
import { bytesPerElement, encodeElements } from '../element-type.js';
import { ArrayError } from '../errors.js';
import type { FramesToWrite } from '../format.js';

const short = 3;
const long = 4;
const ascii = 2;

/** The bytes of a file, page by page: header, then for each page its directory, its texts and its pixels. */
export function* tiffChunks(frames: FramesToWrite): Generator<Uint8Array> {
  const { shape, dataType } = frames;
  const [count, rows, columns] = shape;
  const size = bytesPerElement(dataType);
  const pixelBytes = rows * columns * size;
  const padding = pixelBytes % 2;
  const description = asciiBytes(JSON.stringify(frames.description));
  const format = dataType.startsWith('float') ? 3 : dataType.startsWith('int') ? 2 : 1;
  const directoryBytes = (entries: number): number => 2 + entries * 12 + 4;
  const total =
    8 +
    count * (directoryBytes(11) + pixelBytes + padding) +
    12 +
    description.length +
    (description.length % 2);
  if (total > 0xffffffff) {
    throw new ArrayError('limit-exceeded', {
      path: 'frames',
      expected: 'at most 4 GiB in a TIFF file',
      received: `${total} bytes`,
      hint: 'Write NPY, or several files.',
    });
  }
  const header = new DataView(new ArrayBuffer(8));
  header.setUint16(0, 0x4949);
  header.setUint16(2, 42, true);
  header.setUint32(4, 8, true);
  yield new Uint8Array(header.buffer);
  let at = 8;
  for (let page = 0; page < count; page++) {
    const text = page === 0 ? description : new Uint8Array(0);
    const entries = page === 0 ? 12 : 11;
    const textAt = at + directoryBytes(entries);
    const pixelsAt = textAt + text.length + (text.length % 2);
    const end = pixelsAt + pixelBytes + padding;
    const fields: [tag: number, type: number, count: number, value: number][] = [
      [254, long, 1, 0],
      [256, long, 1, columns],
      [257, long, 1, rows],
      [258, short, 1, size * 8],
      [259, short, 1, 1],
      [262, short, 1, 1],
      [270, ascii, text.length, textAt],
      [273, long, 1, pixelsAt],
      [277, short, 1, 1],
      [278, long, 1, rows],
      [279, long, 1, pixelBytes],
      [339, short, 1, format],
    ];
    const view = new DataView(new ArrayBuffer(pixelsAt - at));
    view.setUint16(0, entries, true);
    const kept = fields.filter(([tag]) => page === 0 || tag !== 270);
    kept.forEach(([tag, type, number, value], i) => {
      const start = 2 + i * 12;
      view.setUint16(start, tag, true);
      view.setUint16(start + 2, type, true);
      view.setUint32(start + 4, number, true);
      if (type === short) view.setUint16(start + 8, value, true);
      else view.setUint32(start + 8, value, true);
    });
    view.setUint32(2 + entries * 12, page + 1 < count ? end : 0, true);
    const bytes = new Uint8Array(view.buffer);
    bytes.set(text, textAt - at);
    yield bytes;
    yield encodeElements(frames.frame(page));
    if (padding > 0) yield new Uint8Array(padding);
    at = end;
  }
}

/** Text with a closing zero; what is not ASCII becomes an escape of JSON. */
function asciiBytes(json: string): Uint8Array {
  const text = json.replace(
    /[^\x20-\x7e]/g,
    (unit) => `\\u${unit.charCodeAt(0).toString(16).padStart(4, '0')}`,
  );
  return new TextEncoder().encode(`${text}\0`);
}
