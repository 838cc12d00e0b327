/**
 * @graybody/core: from what an infrared instrument shows (apparent temperature) to what the surface is (true
 * temperature), with an uncertainty. Temperatures in kelvin, wavelengths in micrometres, ratios 0…1.
 *
 * @packageDocumentation
 */
export { type Area, surfaceFrameByArea } from './areas.js';
export {
  type Band,
  bandFromDescriptor,
  calibratedBand,
  isBand,
  monochromaticBand,
  sampledBand,
  topHatBand,
} from './band.js';
export { type Caution, type CautionCode, cautionCodes } from './cautions.js';
export type {
  Conditions,
  Instrument,
  InstrumentAccuracy,
  RecordedConditions,
  RecordedSettings,
  SurfaceTransmission,
} from './conditions.js';
export * from './constants.js';
export type { Curve, SpectralFunction } from './curve.js';
export type {
  BandDescriptor,
  CalibratedDescriptor,
  Calibration,
  Detector,
  MonochromaticDescriptor,
  RadianceUnit,
  SampledDescriptor,
  TopHatDescriptor,
  WeightedDescriptor,
} from './descriptor.js';
export {
  type AreaConditionsDocument,
  type ConditionsDocument,
  conditionsDocument,
  type GivenLayerDocument,
  type HumidAirDocument,
  type InstrumentDocument,
  type LayerDocument,
  type RecordedDocument,
  type TemperatureDocument,
} from './document.js';
export {
  describe,
  type ErrorDetails,
  isMeasurementError,
  MeasurementError,
  type MeasurementErrorCode,
  measurementErrorCodes,
} from './errors.js';
export {
  type ApparentFrame,
  apparentFrame,
  type FrameFlag,
  type FrameInput,
  type FrameOutput,
  frameBuffer,
  frameFlag,
  type SurfaceFrame,
} from './frame.js';
export {
  type AirInput,
  air,
  type Interval,
  infraredWindow,
  type Layer,
  type LayerInBand,
  type LayerInput,
  layer,
  type WindowInput,
} from './layer.js';
export {
  type ApparentKelvin,
  apparentTemperature,
  type MeasurementModel,
  type ModelAtPoint,
  measurementModel,
  surfaceTemperature,
} from './measurement.js';
export type { RadianceTerm } from './measurement-equation.js';
export type { ReadingQuantity } from './model.js';
export {
  bandFraction,
  blackbodyExitance,
  peakWavelength,
  spectralPhotonRadiance,
  spectralRadiance,
  spectralRadiancePerWavenumber,
  spectralRadianceSlope,
  spectralTemperature,
} from './planck.js';
export type { Finding, RatioEstimate, Readings, Setup } from './procedure-support.js';
export {
  emissivityByContact,
  emissivityByReference,
  reflectedTemperatureByReflector,
  reflectedTemperatureDirect,
  transmittanceByPair,
} from './procedures.js';
export type { Estimate, Propagated } from './propagation.js';
export { type Quantity, type QuantityUnit, quantities } from './quantity.js';
export { type RecordedKelvin, type Recorrection, recorrection } from './recorrection.js';
export {
  ellipse,
  mapFromRegions,
  maskRegion,
  type Place,
  polygon,
  type Region,
  rectangle,
  regionMask,
} from './regions.js';
export {
  type MeasurementResult,
  measurementResult,
  type ResultRecord,
  recorrectionResult,
} from './result.js';
export type { Pixel, Scalar, TemperatureScalar } from './scalar.js';
export type { Sensitivities } from './sensitivity.js';
export type { RadianceKernel } from './table.js';
export type { BudgetRow, Distribution, PathKey, Uncertainties, UncertaintyEntry } from './uncertainty.js';
export {
  type AnyKelvin,
  celsius,
  fahrenheit,
  type Kelvin,
  kelvin,
  toCelsius,
  toFahrenheit,
  wavelengthFromWavenumber,
  wavenumberFromWavelength,
  zeroCelsius,
} from './units.js';
export { softwareVersion } from './version.js';
export { isView, type NumericArray, rowMajorStride, type View, view } from './view.js';
