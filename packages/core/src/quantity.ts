/**
 * What a temperature or a frame of numbers stands for.
 *
 * A correction takes apparent temperature only. The quantity travels with what the library returns and is
 * stored by writers, so that a corrected value is never corrected a second time.
 */

/** The quantities a frame may hold. Terms of ISO 18434-1, ASTM E1862 and ISO 80000-7. */
export const quantities = [
  'apparent temperature',
  'recorded temperature',
  'surface temperature',
  'band radiance',
  'counts',
] as const;

/**
 * - `apparent temperature`: of the blackbody that gives the same band radiance at the instrument. [K]
 * - `recorded temperature`: what an instrument stored after a correction of its own with recorded parameters. [K]
 * - `surface temperature`: the true temperature of the surface. [K]
 * - `band radiance`: in the unit of the band, {@link Band.radianceUnit}.
 * - `counts`: the detector's own numbers, not calibrated.
 */
export type Quantity = (typeof quantities)[number];

/** Unit of a quantity inside the library: kelvin, or for radiance the band's own unit; counts have none. */
export type QuantityUnit = 'K' | 'W·m⁻²·sr⁻¹' | 'W·m⁻²·sr⁻¹·µm⁻¹' | 'signal' | '1';
