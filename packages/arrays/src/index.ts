/**
 * @graybody/arrays: open arrays and documents in and out. Frames from NPY, TIFF and delimited grids, with quantity
 * and unit; conditions from XML; pictures. Opens no connection.
 *
 * @packageDocumentation
 */
export type { Conversion, ConversionOptions } from './conversion.js';
export { type ArrayType, type DataType, dataTypes, type ElementArray } from './element-type.js';
export {
  ArrayError,
  type ArrayErrorCode,
  type ArrayErrorDetails,
  arrayErrorCodes,
  isArrayError,
} from './errors.js';
export type { FormatId, TableOptions } from './format.js';
export {
  type Frame,
  type FrameOrigin,
  type FrameSource,
  type Frames,
  type FramesDescription,
  openFrames,
  type ReadOptions,
  readFrames,
} from './frames.js';
export { defaultLimits, type FrameShape, type Limits } from './limits.js';
export type { FrameArray } from './ndarray.js';
export { type ColourMap, type LegendUnit, type Panel, type PictureOptions, pictureSvg } from './picture.js';
export type { FrameInputSource } from './source.js';
export { type FramesWithQuantity, type WriteOptions, writeFlags, writeFrames } from './write.js';
export { conditionsNamespace, conditionsObjectFromXml, readConditionsXml } from './xml.js';
