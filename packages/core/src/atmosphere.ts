/**
 * @graybody/core/atmosphere: humidity, and air as a layer computed from it.
 *
 * @packageDocumentation
 */
export {
  type Absorption,
  airStandardUncertainty,
  type HumidAir,
  type HumidAirInput,
  humidAir,
  isHumidAir,
} from './humid-air.js';
export {
  absoluteHumidity,
  dewPoint,
  frostPoint,
  precipitableWater,
  relativeHumidity,
  saturationVapourPressure,
  saturationVapourPressureOverIce,
  vapourPressure,
  vapourPressureFromAbsoluteHumidity,
} from './humidity.js';
