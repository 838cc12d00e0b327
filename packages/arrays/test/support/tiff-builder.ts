/**
 * Builds TIFF files field by field, sound or not, little-endian or big-endian.
 */

/** A field: tag, type (2 text, 3 short, 4 long), values. */
export type Field = readonly [tag: number, type: number, values: readonly number[] | string];

/** One page: fields, and the bytes of its strips or tiles, whose places are filled in. */
export interface PageParts {
  readonly fields: readonly Field[];
  readonly blocks?: readonly Uint8Array[];
  readonly tiled?: boolean;
  /** Overrides of the places written down. */
  readonly offsets?: readonly number[];
  readonly byteCounts?: readonly number[];
}

/** A TIFF file; `nextOf` overrides where a page says the next one is. */
export function tiffOf(
  pages: readonly PageParts[],
  { littleEndian = true, nextOf = {} as Record<number, number> } = {},
): Uint8Array {
  const bytes = new Uint8Array(1 << 20);
  const view = new DataView(bytes.buffer);
  view.setUint16(0, littleEndian ? 0x4949 : 0x4d4d);
  view.setUint16(2, 42, littleEndian);
  let at = 8;
  let pointer = 4;
  pages.forEach(({ fields, blocks = [], tiled = false, offsets, byteCounts }, index) => {
    const places = blocks.map((block) => {
      const place = at;
      bytes.set(block, at);
      at += block.length + (block.length % 2);
      return place;
    });
    const all: Field[] = [...fields];
    const [offsetTag, countTag] = tiled ? [324, 325] : [273, 279];
    if (blocks.length > 0 || offsets !== undefined) {
      all.push([offsetTag, 4, offsets ?? places]);
      all.push([countTag, 4, byteCounts ?? blocks.map(({ length }) => length)]);
    }
    all.sort((a, b) => a[0] - b[0]);
    const stored = all.map(([tag, type, values]) => {
      const list = typeof values === 'string' ? [...new TextEncoder().encode(`${values}\0`)] : values;
      const size = type === 2 || type === 1 ? 1 : type === 3 ? 2 : 4;
      const inline = list.length * size <= 4;
      const place = at;
      if (!inline) at += list.length * size + ((list.length * size) % 2);
      return { tag, type, list, size, inline, place };
    });
    view.setUint32(pointer, at, littleEndian);
    view.setUint16(at, stored.length, littleEndian);
    stored.forEach(({ tag, type, list, size, inline, place }, i) => {
      const entry = at + 2 + i * 12;
      view.setUint16(entry, tag, littleEndian);
      view.setUint16(entry + 2, type, littleEndian);
      view.setUint32(entry + 4, list.length, littleEndian);
      const where = inline ? entry + 8 : place;
      if (!inline) view.setUint32(entry + 8, place, littleEndian);
      list.forEach((value, k) => {
        if (size === 1) view.setUint8(where + k, value);
        else if (size === 2) view.setUint16(where + k * 2, value, littleEndian);
        else view.setUint32(where + k * 4, value, littleEndian);
      });
    });
    pointer = at + 2 + stored.length * 12;
    const next = nextOf[index];
    if (next !== undefined) view.setUint32(pointer, next, littleEndian);
    at = pointer + 4;
  });
  return bytes.slice(0, at);
}

/** Fields of a page of measured values. */
export function fieldsOf(
  columns: number,
  rows: number,
  { bits = 16, format = 1, compression = 1, rowsPerStrip = rows, more = [] as readonly Field[] } = {},
): Field[] {
  const replaced = new Set(more.map(([tag]) => tag));
  const fields: Field[] = [
    [256, 4, [columns]],
    [257, 4, [rows]],
    [258, 3, [bits]],
    [259, 3, [compression]],
    [262, 3, [1]],
    [277, 3, [1]],
    [278, 4, [rowsPerStrip]],
    [339, 3, [format]],
  ];
  return [...fields.filter(([tag]) => !replaced.has(tag)), ...more];
}
