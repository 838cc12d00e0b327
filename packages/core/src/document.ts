/**
 * Conditions as plain data: what a JSON file holds, and how conditions are written down in a record.
 *
 * Temperatures say their unit: `{ "celsius": 21 }`. Reading and checking a document is the work of the `/record`
 * subpath; writing one needs no schema and is here.
 */

import {
  type Conditions,
  checkedConditions,
  type InstrumentAccuracy,
  type RecordedSettings,
} from './conditions.js';
import { type Curve, isCurve } from './curve.js';
import type { BandDescriptor } from './descriptor.js';
import type { Interval, Layer } from './layer.js';
import type { Region } from './regions.js';
import { type Pixel, type Scalar, scalarAt } from './scalar.js';
import type { Uncertainties } from './uncertainty.js';

/** A temperature that says its unit. */
export type TemperatureDocument =
  | { readonly celsius: number }
  | { readonly kelvin: number }
  | { readonly fahrenheit: number };

/** Computed air as plain data; see `humidAir` of the `/atmosphere` subpath. */
export interface HumidAirDocument {
  readonly kind: 'humid-air';
  readonly temperature: TemperatureDocument;
  readonly relativeHumidity: number;
  /** [m] */
  readonly distance: number;
  /** [Pa] */
  readonly pressure?: number;
  readonly carbonDioxide?: number;
  /** [km] */
  readonly visibility?: number;
}

/** A layer as plain data. */
export type LayerDocument = GivenLayerDocument | HumidAirDocument;

/** A layer whose transmittance is given, as plain data. */
export interface GivenLayerDocument {
  readonly kind: Layer['kind'];
  readonly transmittance: number | Curve | Interval;
  readonly reflectance?: number | Curve | Interval;
  readonly temperature?: TemperatureDocument;
  readonly mirroredTemperature?: TemperatureDocument;
  /** [unit of the band] */
  readonly pathRadiance?: number;
}

/** An instrument as plain data. */
export interface InstrumentDocument {
  readonly measuringRange?: { readonly from: TemperatureDocument; readonly to: TemperatureDocument };
  readonly netd?: { readonly value: number; readonly sceneTemperature: TemperatureDocument };
  readonly accuracy?: InstrumentAccuracy;
  /** [mrad] */
  readonly ifov?: number;
  readonly lens?: string;
  readonly calibrationDate?: string;
  /** [s] */
  readonly warmUp?: number;
}

/** What an area may set differently from the rest of the frame. */
export interface AreaConditionsDocument {
  readonly emissivity?: number | Curve;
  readonly reflectedApparentTemperature?: TemperatureDocument;
  readonly reflectedRadiance?: number;
  readonly path?: readonly LayerDocument[];
  readonly surface?: {
    readonly transmittance: number;
    readonly backgroundApparentTemperature: TemperatureDocument;
  };
  readonly viewAngle?: number;
  readonly reflectedMeasuredAt?: 'target' | 'instrument';
}

/** Settings an instrument applied itself. */
export interface RecordedDocument {
  readonly emissivity: number;
  readonly reflectedApparentTemperature: TemperatureDocument;
  readonly path?: readonly LayerDocument[];
  readonly instrument?: InstrumentDocument;
  /** Step of the stored temperatures. [K] */
  readonly resolution?: number;
}

/** A conditions document, version 1. */
export interface ConditionsDocument extends AreaConditionsDocument {
  readonly format: 'graybody-conditions';
  readonly version: 1;
  readonly band: BandDescriptor;
  readonly emissivity: number | Curve;
  readonly instrument?: InstrumentDocument;
  readonly origins?: Readonly<Record<string, string>>;
  readonly uncertainties?: Uncertainties;
  readonly areas?: readonly {
    readonly name: string;
    readonly region: Exclude<Region, { kind: 'mask' }>;
    readonly conditions: AreaConditionsDocument;
    readonly uncertainties?: Uncertainties;
  }[];
  readonly recorded?: RecordedDocument;
}

const kelvinOf = (value: number): TemperatureDocument => ({ kelvin: value });

/** Drops the keys whose value is undefined. */
export function compact<T extends object>(record: T): { [Key in keyof T]: Exclude<T[Key], undefined> } {
  return Object.fromEntries(Object.entries(record).filter(([, value]) => value !== undefined)) as {
    [Key in keyof T]: Exclude<T[Key], undefined>;
  };
}

/**
 * Conditions as plain data, maps replaced by their value at a pixel.
 *
 * @throws {MeasurementError} as `measurementModel`; `needs-pixel` where an input is a map and no pixel is given.
 */
export function conditionsDocument(conditions: Conditions, pixel?: Pixel): ConditionsDocument {
  return documentOf(checkedConditions(conditions), pixel);
}

function documentOf(conditions: Conditions, pixel: Pixel | undefined): ConditionsDocument {
  const { band, surface, instrument } = conditions;
  const at = (value: Scalar, name: string): number => scalarAt(value, pixel, name);
  const { emissivity, reflectedApparentTemperature: reflected, reflectedRadiance: radiance } = conditions;
  return compact({
    format: 'graybody-conditions',
    version: 1,
    band: band.descriptor,
    emissivity: isCurve(emissivity) ? emissivity : at(emissivity, 'emissivity'),
    reflectedApparentTemperature:
      reflected === undefined ? undefined : kelvinOf(at(reflected, 'reflectedApparentTemperature')),
    reflectedRadiance: radiance === undefined ? undefined : at(radiance, 'reflectedRadiance'),
    path: conditions.path?.map((layer, k, path) => layerDocument(layer, path.slice(k + 1), at, `path[${k}]`)),
    surface: surface && {
      transmittance: at(surface.transmittance, 'surface.transmittance'),
      backgroundApparentTemperature: kelvinOf(
        at(surface.backgroundApparentTemperature, 'surface.backgroundApparentTemperature'),
      ),
    },
    viewAngle: conditions.viewAngle,
    reflectedMeasuredAt: conditions.reflectedMeasuredAt,
    instrument: instrument && instrumentDocument(instrument),
    origins: conditions.origins,
  }) as ConditionsDocument;
}

/** Recorded settings as plain data. */
export function recordedDocument(recorded: RecordedSettings, pixel?: Pixel): RecordedDocument {
  const document = documentOf(recorded, pixel);
  const { emissivity, reflectedApparentTemperature, path, instrument } = document;
  const { resolution } = recorded;
  return compact({
    emissivity,
    reflectedApparentTemperature,
    path,
    instrument,
    resolution,
  }) as RecordedDocument;
}

function layerDocument(
  layer: Layer,
  nearer: readonly Layer[],
  at: (value: Scalar, name: string) => number,
  name: string,
): LayerDocument {
  if (layer.document) return layer.document;
  const ratio = (key: 'transmittance' | 'reflectance', value: Scalar | Curve): number | Curve | Interval => {
    const halfWidth = layer.halfWidths[key];
    if (isCurve(value)) return value;
    const middle = at(value, `${name}.${key}`);
    return halfWidth === undefined ? middle : { low: middle - halfWidth, high: middle + halfWidth };
  };
  const kelvin = (key: 'temperature' | 'mirroredTemperature'): TemperatureDocument | undefined => {
    const value = layer[key];
    return value === undefined ? undefined : kelvinOf(at(value, `${name}.${key}`));
  };
  const { pathRadiance, reflectance } = layer;
  return compact({
    kind: layer.kind,
    transmittance: ratio('transmittance', layer.transmittanceBehind(nearer)),
    reflectance: reflectance === 0 ? undefined : ratio('reflectance', reflectance),
    temperature: kelvin('temperature'),
    mirroredTemperature: kelvin('mirroredTemperature'),
    pathRadiance: pathRadiance === undefined ? undefined : at(pathRadiance, `${name}.pathRadiance`),
  }) as LayerDocument;
}

function instrumentDocument(instrument: NonNullable<Conditions['instrument']>): InstrumentDocument {
  const { measuringRange, netd, ...rest } = instrument;
  return compact({
    ...rest,
    measuringRange: measuringRange && {
      from: kelvinOf(measuringRange.from),
      to: kelvinOf(measuringRange.to),
    },
    netd: netd && { value: netd.value, sceneTemperature: kelvinOf(netd.sceneTemperature) },
  }) as InstrumentDocument;
}
