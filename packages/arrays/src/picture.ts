/**
 * A frame of temperatures as an SVG picture: fixed scale, legend in degrees, missing and doubtful pixels drawn
 * differently from cold ones, marks with labels, and a text for readers who do not see it.
 *
 * The colours are those of d3-scale-chromatic whose lightness rises steadily, so that a grey print keeps the order.
 */
import type { AnyKelvin, View } from '@graybody/core';
import { toCelsius, toFahrenheit } from '@graybody/core';
import {
  interpolateCividis,
  interpolateGreys,
  interpolateInferno,
  interpolateViridis,
} from 'd3-scale-chromatic';
import { encode } from 'fast-png';

/** Colours, dark for low and light for high. */
export type ColourMap = 'inferno' | 'viridis' | 'cividis' | 'grey';

/** Unit of the legend. */
export type LegendUnit = 'celsius' | 'fahrenheit' | 'kelvin';

/** One frame of a picture. */
export interface Panel {
  readonly title: string;
  /** Temperatures (row, column). [K], NaN where there is none */
  readonly frame: View;
  /** Reason codes of the same shape: from 128 on a pixel has a doubtful value. */
  readonly flags?: View | undefined;
  /** Places pointed at: a letter in the picture, its label in a key below it. */
  readonly marks?: readonly { readonly row: number; readonly column: number; readonly label: string }[];
}

/** How a picture is drawn. */
export interface PictureOptions {
  /** Ends of the scale; the lowest and highest value of all panels when left out. [K] */
  readonly range?: { readonly from: AnyKelvin; readonly to: AnyKelvin };
  readonly colours?: ColourMap;
  readonly unit?: LegendUnit;
  /** Size of a pixel of the frame in the picture. [CSS px] */
  readonly pixelSize?: number;
  readonly title?: string;
}

/** Height of a line of the key. [CSS px] */
const keyLine = 17;

const interpolators: Readonly<Record<ColourMap, (share: number) => string>> = {
  inferno: interpolateInferno,
  viridis: interpolateViridis,
  cividis: interpolateCividis,
  grey: (share) => interpolateGreys(1 - share),
};
const unitTexts: Readonly<Record<LegendUnit, string>> = { celsius: '°C', fahrenheit: '°F', kelvin: 'K' };

/**
 * Draws one or more frames on one scale.
 *
 * @param panels - Frames of any sizes, drawn from left to right.
 * @returns A complete SVG document; the raster is embedded as PNG, no outside reference.
 * @throws {RangeError} when there is no panel, or a panel is not (row, column).
 */
export function pictureSvg(panels: readonly Panel[], options: PictureOptions = {}): string {
  if (panels.length === 0) throw new RangeError('picture: expected at least one panel, got none.');
  for (const { frame, title } of panels) {
    if (frame.shape.length === 2 && !frame.shape.includes(0)) continue;
    throw new RangeError(
      `picture "${title}": expected a frame (row, column), got shape [${frame.shape.join(', ')}].`,
    );
  }
  const { colours = 'inferno', unit = 'celsius', pixelSize = 3, title = 'Temperatures' } = options;
  const range = options.range ?? spread(panels);
  const table = colourTable(colours);
  const margin = 16;
  const top = 56;
  const height = Math.max(...panels.map(({ frame }) => frame.shape[0]! * pixelSize));
  let x = margin;
  const drawn = panels.map((panel) => {
    const text = panelSvg(panel, range, table, x, top, pixelSize);
    x += panel.frame.shape[1]! * pixelSize + margin;
    return text;
  });
  const legend = legendSvg(range, table, unit, x, top, height);
  const width = x + 90;
  const below = top + height + keyLine * Math.max(0, ...panels.map(({ marks = [] }) => marks.length));
  const note = `Hatched: no value. Dotted: doubtful value (saturated).`;
  return [
    `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${below + 40}" viewBox="0 0 ${width} ${below + 40}" role="img" aria-labelledby="title description" font-family="system-ui, sans-serif">`,
    `<title id="title">${escaped(title)}</title>`,
    `<desc id="description">${escaped(description(panels, range, unit))}</desc>`,
    patterns,
    `<rect width="100%" height="100%" fill="#ffffff"/>`,
    `<text x="${margin}" y="24" font-size="16" font-weight="600" fill="#1a1a1a">${escaped(title)}</text>`,
    ...drawn,
    legend,
    `<text x="${margin}" y="${below + 26}" font-size="11" fill="#444444">${note}</text>`,
    '</svg>',
    '',
  ].join('\n');
}

const patterns = [
  '<defs>',
  '<pattern id="none" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)">',
  '<rect width="6" height="6" fill="#ffffff"/><rect width="2" height="6" fill="#8a8a8a"/></pattern>',
  '<pattern id="doubtful" width="4" height="4" patternUnits="userSpaceOnUse"><circle cx="2" cy="2" r="1" fill="#00a0c8"/></pattern>',
  '</defs>',
].join('');

function panelSvg(
  { title, frame, flags, marks = [] }: Panel,
  range: { readonly from: number; readonly to: number },
  table: Uint8Array,
  x: number,
  y: number,
  size: number,
): string {
  const [rows, columns] = frame.shape as [number, number];
  const pixels = new Uint8Array(rows * columns * 4);
  const doubtful: string[] = [];
  for (let row = 0; row < rows; row++) {
    let run = 0;
    for (let column = 0; column < columns; column++) {
      const value = at(frame, row, column);
      if (!Number.isNaN(value)) {
        const share = Math.min(1, Math.max(0, (value - range.from) / (range.to - range.from || 1)));
        const colour = Math.round(share * 255) * 3;
        pixels.set(table.subarray(colour, colour + 3), (row * columns + column) * 4);
        pixels[(row * columns + column) * 4 + 3] = 255;
      }
      run = flags && at(flags, row, column) >= 128 ? run + 1 : 0;
      const ends = run > 0 && (column === columns - 1 || !flags || at(flags, row, column + 1) < 128);
      if (!ends) continue;
      const left = x + (column + 1 - run) * size;
      doubtful.push(
        `<rect x="${left}" y="${y + row * size}" width="${run * size}" height="${size}" fill="url(#doubtful)"/>`,
      );
    }
  }
  const png = encode({ width: columns, height: rows, data: pixels, channels: 4, depth: 8 });
  const box = `x="${x}" y="${y}" width="${columns * size}" height="${rows * size}"`;
  const labels = marks.map(({ row, column, label }, i) => {
    const [cx, cy] = [x + (column + 0.5) * size, y + (row + 0.5) * size];
    const letter = String.fromCharCode(65 + (i % 26));
    return (
      `<circle cx="${cx}" cy="${cy}" r="9" fill="#ffffff" stroke="#000000" stroke-width="1.5"/>` +
      `<text x="${cx}" y="${cy + 4}" font-size="12" font-weight="600" text-anchor="middle" fill="#000000">${letter}</text>` +
      `<text x="${x}" y="${y + rows * size + keyLine * (i + 1)}" font-size="12" fill="#1a1a1a">${letter}  ${escaped(label)}</text>`
    );
  });
  return [
    `<text x="${x}" y="${y - 8}" font-size="13" fill="#1a1a1a">${escaped(title)}</text>`,
    `<rect ${box} fill="url(#none)"/>`,
    `<image ${box} preserveAspectRatio="none" style="image-rendering:pixelated" href="data:image/png;base64,${base64(png)}"/>`,
    ...doubtful,
    ...labels,
  ].join('\n');
}

function legendSvg(
  range: { readonly from: number; readonly to: number },
  table: Uint8Array,
  unit: LegendUnit,
  x: number,
  y: number,
  height: number,
): string {
  const pixels = new Uint8Array(256 * 3);
  for (let row = 0; row < 256; row++) pixels.set(table.subarray((255 - row) * 3, (256 - row) * 3), row * 3);
  const png = encode({ width: 1, height: 256, data: pixels, channels: 3, depth: 8 });
  const [low, high] = [converted(range.from, unit), converted(range.to, unit)];
  const marks = ticks(low, high).map((tick) => {
    const at = y + height - ((tick - low) / (high - low || 1)) * height;
    return (
      `<line x1="${x + 16}" x2="${x + 21}" y1="${at}" y2="${at}" stroke="#1a1a1a"/>` +
      `<text x="${x + 25}" y="${at + 4}" font-size="12" fill="#1a1a1a">${Number(tick.toPrecision(6))}</text>`
    );
  });
  return [
    `<text x="${x}" y="${y - 8}" font-size="13" fill="#1a1a1a">${unitTexts[unit]}</text>`,
    `<image x="${x}" y="${y}" width="16" height="${height}" preserveAspectRatio="none" href="data:image/png;base64,${base64(png)}"/>`,
    `<rect x="${x}" y="${y}" width="16" height="${height}" fill="none" stroke="#1a1a1a"/>`,
    ...marks,
  ].join('\n');
}

/** Round values within the ends, about six of them, in steps of 1, 2 or 5. */
function ticks(low: number, high: number): number[] {
  const rough = (high - low) / 6;
  if (!(rough > 0)) return [low];
  const power = 10 ** Math.floor(Math.log10(rough));
  const step = [1, 2, 5, 10].map((factor) => factor * power).find((candidate) => candidate >= rough)!;
  const list: number[] = [];
  for (let i = Math.ceil(low / step); i * step <= high + 1e-9 * step; i++) list.push(i * step);
  return list;
}

function spread(panels: readonly Panel[]): { readonly from: number; readonly to: number } {
  let from = Number.POSITIVE_INFINITY;
  let to = Number.NEGATIVE_INFINITY;
  for (const { frame } of panels) {
    for (let row = 0; row < frame.shape[0]!; row++) {
      for (let column = 0; column < frame.shape[1]!; column++) {
        const value = at(frame, row, column);
        if (value < from) from = value;
        if (value > to) to = value;
      }
    }
  }
  return from <= to ? { from, to } : { from: 273.15, to: 293.15 };
}

function description(
  panels: readonly Panel[],
  range: { from: number; to: number },
  unit: LegendUnit,
): string {
  const ends = [range.from, range.to].map((end) => converted(end, unit).toFixed(1));
  const texts = panels.map(({ title, marks = [] }) => {
    const places = marks.map(({ label }) => label).join('; ');
    return `${title}${places === '' ? '' : `: ${places}`}`;
  });
  return `Scale from ${ends[0]} to ${ends[1]} ${unitTexts[unit]}. ${texts.join('. ')}.`;
}

function converted(value: number, unit: LegendUnit): number {
  if (unit === 'celsius') return toCelsius(value as AnyKelvin);
  return unit === 'fahrenheit' ? toFahrenheit(value as AnyKelvin) : value;
}

function at({ data, stride, offset }: View, row: number, column: number): number {
  return data[offset + row * stride[0]! + column * stride[1]!]!;
}

/** 256 colours as RGB bytes. */
function colourTable(name: ColourMap): Uint8Array {
  const table = new Uint8Array(256 * 3);
  for (let i = 0; i < 256; i++) table.set(rgbOf(interpolators[name](i / 255)), i * 3);
  return table;
}

function rgbOf(colour: string): number[] {
  if (colour.startsWith('#'))
    return [1, 3, 5].map((from) => Number.parseInt(colour.slice(from, from + 2), 16));
  return colour.match(/\d+/g)!.slice(0, 3).map(Number);
}

function base64(bytes: Uint8Array): string {
  let text = '';
  for (let from = 0; from < bytes.length; from += 8192)
    text += String.fromCharCode(...bytes.subarray(from, from + 8192));
  return btoa(text);
}

function escaped(text: string): string {
  const entities: Record<string, string> = { '&': '&amp;', '<': '&lt;', '>': '&gt;', '"': '&quot;' };
  return text.replace(/[&<>"]/g, (character) => entities[character]!);
}
