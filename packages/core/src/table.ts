/**
 * A table of a monotone band radiance and its slope, read both ways by cubic Hermite interpolation.
 *
 * Nodes lie 512 to an octave of temperature, so a temperature finds its cell by its leading bits and needs no
 * logarithm. Error of either direction ≤ 2 µK for any band inside 2–15 µm, 213…3273 K; asserted in
 * test/table.test.ts. Where a correction magnifies that beyond its bound, the frame kernel goes the exact way.
 */

/** Temperature ↔ radiance on bare numbers, without checks. `temperature` is NaN for what has no answer. */
export interface RadianceKernel {
  /** Band radiance of a blackbody. [K] → [unit of the band] */
  radiance(temperature: number): number;
  /** Slope of the band radiance. [K] → [unit of the band / K] */
  slope(temperature: number): number;
  /** Temperature of the blackbody with this band radiance; NaN outside the range. [unit of the band] → [K] */
  temperature(radiance: number): number;
}

/** Bound of the table's own error, in either direction. [K] */
export const tableError = 2e-6;

const cellsPerOctave = 512;
const firstOctave = 7; // 2⁷ = 128 K
const octaves = 5; // up to 4096 K
const cells = octaves * cellsPerOctave;

/** Lower edge of a cell. [K] */
function edge(cell: number): number {
  const octave = Math.floor(cell / cellsPerOctave);
  return 2 ** (firstOctave + octave) * (1 + (cell % cellsPerOctave) / cellsPerOctave);
}

/**
 * Tabulates a kernel between two temperatures.
 *
 * @param exact - The kernel to tabulate; its radiance must rise with temperature.
 * @param from - Lowest temperature. [K], ≥ 128
 * @param to - Highest temperature. [K], < 4096
 */
export function tabulated(exact: RadianceKernel, from: number, to: number): RadianceKernel {
  const radianceAt = new Float64Array(cells + 1);
  const slopeAt = new Float64Array(cells + 1);
  const edgeAt = new Float64Array(cells + 1);
  for (let node = 0; node <= cells; node++) {
    edgeAt[node] = edge(node);
    radianceAt[node] = exact.radiance(edge(node));
    slopeAt[node] = exact.slope(edge(node));
  }
  const lowest = exact.radiance(from);
  const highest = exact.radiance(to);
  const firstCell = cellOf(from);
  const lastCell = cellOf(to);

  return {
    radiance(temperature) {
      const cell = cellOf(temperature);
      const width = edgeAt[cell + 1]! - edgeAt[cell]!;
      const u = (temperature - edgeAt[cell]!) / width;
      return hermite(
        u,
        radianceAt[cell]!,
        radianceAt[cell + 1]!,
        slopeAt[cell]! * width,
        slopeAt[cell + 1]! * width,
      );
    },
    slope(temperature) {
      const cell = cellOf(temperature);
      const width = edgeAt[cell + 1]! - edgeAt[cell]!;
      const u = (temperature - edgeAt[cell]!) / width;
      return slopeAt[cell]! + u * (slopeAt[cell + 1]! - slopeAt[cell]!);
    },
    temperature(radiance) {
      if (!(radiance >= lowest && radiance <= highest)) return Number.NaN;
      let low = firstCell;
      let high = lastCell + 1;
      while (high - low > 1) {
        const middle = (low + high) >> 1;
        if (radianceAt[middle]! <= radiance) low = middle;
        else high = middle;
      }
      const rise = radianceAt[low + 1]! - radianceAt[low]!;
      const u = (radiance - radianceAt[low]!) / rise;
      return hermite(u, edgeAt[low]!, edgeAt[low + 1]!, rise / slopeAt[low]!, rise / slopeAt[low + 1]!);
    },
  };
}

/** The cell of a temperature in 128…4095 K, by its leading bits. */
function cellOf(temperature: number): number {
  const octave = 31 - Math.clz32(temperature);
  return (
    (octave - firstOctave) * cellsPerOctave + Math.floor((temperature / (1 << octave) - 1) * cellsPerOctave)
  );
}

/** Cubic through two values with two slopes, on the unit interval. */
function hermite(u: number, a: number, b: number, slopeA: number, slopeB: number): number {
  const v = 1 - u;
  return a * v * v * (1 + 2 * u) + b * u * u * (1 + 2 * v) + u * v * (v * slopeA - u * slopeB);
}
