/**
 * Bands as plain data, for JSON and records. {@link bandFromDescriptor} makes the band of a descriptor.
 */
import type { Curve } from './curve.js';
import type { AnyKelvin } from './units.js';

/** What a detector answers to: the energy or the number of photons it receives. */
export type Detector = 'energy' | 'photon';

/** Unit of a band's radiance: in-band, spectral (a single wavelength), or a calibrated signal. */
export type RadianceUnit = 'W·m⁻²·sr⁻¹' | 'W·m⁻²·sr⁻¹·µm⁻¹' | 'signal';

/** A top-hat band as plain data. */
export interface TopHatDescriptor {
  readonly kind: 'top-hat';
  /** Lower limit. [µm] */
  readonly from: number;
  /** Upper limit. [µm] */
  readonly to: number;
  readonly detector?: Detector;
}
/** A sampled band as plain data: responsivity over wavelength [µm] or wavenumber [cm⁻¹]. */
export type SampledDescriptor = {
  readonly kind: 'sampled';
  readonly responsivity: readonly number[];
  readonly detector?: Detector;
} & ({ readonly wavelength: readonly number[] } | { readonly wavenumber: readonly number[] });
/** A single wavelength as plain data. */
export interface MonochromaticDescriptor {
  readonly kind: 'monochromatic';
  /** Wavelength. [µm] */
  readonly wavelength: number;
}
/** A calibrated band as plain data; see {@link calibratedBand}. */
export type CalibratedDescriptor = { readonly kind: 'calibrated' } & Calibration;
/** A band weighted by a curve, as plain data. */
export interface WeightedDescriptor {
  readonly kind: 'weighted';
  readonly band: BandDescriptor;
  readonly curve: Curve;
}
/** A band as plain data, for JSON. {@link bandFromDescriptor} makes the band. */
export type BandDescriptor =
  | TopHatDescriptor
  | SampledDescriptor
  | MonochromaticDescriptor
  | CalibratedDescriptor
  | WeightedDescriptor;

/** Constants of a calibrated band: temperature ↔ signal by a formula. */
export type Calibration = (
  | {
      /** signal = k1 / (exp(k2/T) − 1): one effective wavelength, as space radiometers publish it. */
      readonly form: 'k1k2';
      /** In the unit of the signal. */
      readonly k1: number;
      /** [K] */
      readonly k2: number;
    }
  | {
      /** signal = c / (exp(c₂/(a·T + b)) − 1): the Planckian form of Sakuma and Hattori (CCT-WG5, 2008). */
      readonly form: 'sakuma-hattori';
      /** [µm] */
      readonly a: number;
      /** [µm·K] */
      readonly b: number;
      /** In the unit of the signal. */
      readonly c: number;
    }
) & {
  /** Unit of the signal; `signal` when not said. */
  readonly radianceUnit?: RadianceUnit;
  /** Temperatures the calibration holds for; 150…3500 K when not said. [K] */
  readonly range?: { readonly from: AnyKelvin; readonly to: AnyKelvin };
};
