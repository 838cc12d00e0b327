/**
 * Records: conditions and results as JSON, checked by a schema, read back into what they describe.
 *
 * This subpath is the only one that needs zod. A document of a newer major version is refused.
 */
import * as z from 'zod';
import type { Area } from './areas.js';
import { bandFromDescriptor } from './band.js';
import { nearest } from './check.js';
import {
  type Conditions,
  checkedConditions,
  type Instrument,
  type RecordedConditions,
} from './conditions.js';
import type {
  AreaConditionsDocument,
  ConditionsDocument,
  HumidAirDocument,
  InstrumentDocument,
  LayerDocument,
  TemperatureDocument,
} from './document.js';
import { compact } from './document.js';
import { describe, MeasurementError, within } from './errors.js';
import { air, infraredWindow, type Layer, layer } from './layer.js';
import { type MeasurementModel, measurementModel } from './measurement.js';
import { type Recorrection, recorrection } from './recorrection.js';
import { checkedRegion, type Region } from './regions.js';
import {
  type MeasurementResult,
  measurementResult,
  type ResultRecord,
  recorrectionResult,
} from './result.js';
import { conditionsSchema, documentKeys, resultSchema } from './schema.js';
import type { Uncertainties } from './uncertainty.js';
import { type AnyKelvin, celsius, fahrenheit, kelvin } from './units.js';

export type { ConditionsDocument, TemperatureDocument } from './document.js';
export { conditionsSchema, resultSchema } from './schema.js';

/** Functions for layers whose data are not part of this subpath. */
export interface LayerMakers {
  /** `humidAir` of `@graybody/core/atmosphere`. */
  readonly humidAir?: (input: {
    readonly temperature: AnyKelvin;
    readonly relativeHumidity: number;
    readonly distance: number;
  }) => Layer;
}

/** What a conditions document describes. */
export interface DescribedConditions {
  readonly conditions: Conditions;
  readonly uncertainties: Uncertainties | undefined;
  /** Parts of the frame with conditions of their own, those of the document where they say nothing. */
  readonly areas: readonly {
    readonly name: string;
    readonly region: Region;
    readonly conditions: Conditions;
    readonly uncertainties: Uncertainties | undefined;
  }[];
  /** Settings an instrument applied itself: the frames then hold recorded temperature. */
  readonly recorded: RecordedConditions | undefined;
}

/**
 * Reads a conditions document: checks it against the schema and makes what it describes.
 *
 * @param document - A parsed JSON value.
 * @param makers - `{ humidAir }` of the `/atmosphere` subpath, for documents with computed air.
 * @throws {MeasurementError} `wrong-version` for a newer version; `unknown-key`, `missing-input`, `wrong-type`,
 *   `out-of-range` with the path of what is at fault; whatever the described conditions throw.
 */
export function readConditionsDocument(document: unknown, makers: LayerMakers = {}): DescribedConditions {
  refuseOther(document, 'graybody-conditions');
  const checked = checkedBy(conditionsSchema, document) as unknown as ConditionsDocument;
  const { areas = [], recorded, uncertainties } = checked;
  const conditions = conditionsOf(checked, makers);
  return {
    conditions,
    uncertainties,
    areas: areas.map((area, i) =>
      within(`areas[${i}]`, () => ({
        name: area.name,
        region: checkedRegion(area.region),
        conditions: within('conditions', () => conditionsOf(overridden(checked, area.conditions), makers)),
        uncertainties: areaUncertainties(uncertainties, area),
      })),
    ),
    recorded:
      recorded &&
      (compact({
        emissivity: recorded.emissivity,
        reflectedApparentTemperature: kelvinOf(recorded.reflectedApparentTemperature),
        path: recorded.path && layersOf(recorded.path, 'recorded.path', makers),
        instrument: recorded.instrument && instrumentOf(recorded.instrument),
        resolution: recorded.resolution,
      }) as RecordedConditions),
  };
}

/**
 * The models of described conditions: the whole frame's, and one for every area. They read recorded temperature
 * where the document has recorded settings, apparent temperature otherwise. Feed them to `surfaceFrameByArea`.
 */
export function describedModels({ conditions, areas, recorded }: DescribedConditions): {
  readonly model: MeasurementModel | Recorrection;
  readonly areas: readonly (Area & { readonly name: string })[];
} {
  const modelOf = (actual: Conditions): MeasurementModel | Recorrection =>
    recorded === undefined ? measurementModel(actual) : recorrection(recorded, actual);
  return {
    model: modelOf(conditions),
    areas: areas.map(({ name, region, conditions: own }) => ({ name, region, model: modelOf(own) })),
  };
}

/**
 * Computes a result record anew, from its inputs alone.
 *
 * @returns The result; its temperature equals the record's within 1e-9 K with the same version.
 * @throws {MeasurementError} as {@link readConditionsDocument}.
 */
export function recompute(record: unknown, makers: LayerMakers = {}): MeasurementResult {
  refuseOther(record, 'graybody-result');
  const checked = checkedBy(resultSchema, record) as unknown as ResultRecord;
  const { reading, uncertainties } = checked;
  const document = compact({ ...checked.conditions, recorded: checked.recorded });
  const { conditions, recorded } = readConditionsDocument(document, makers);
  if (reading.quantity === 'apparent temperature') {
    return measurementResult(kelvin(reading.kelvin), conditions, uncertainties);
  }
  if (recorded === undefined) {
    throw new MeasurementError('missing-input', {
      path: 'recorded',
      expected: 'the recorded settings, because the reading is a recorded temperature',
    });
  }
  return recorrectionResult(kelvin(reading.kelvin), recorded, conditions, uncertainties);
}

/** JSON Schema (draft 2020-12) of a conditions document. */
export function conditionsJsonSchema(): Record<string, unknown> {
  return z.toJSONSchema(conditionsSchema, { reused: 'ref' }) as Record<string, unknown>;
}

/** JSON Schema (draft 2020-12) of a result record. */
export function resultJsonSchema(): Record<string, unknown> {
  return z.toJSONSchema(resultSchema, { reused: 'ref' }) as Record<string, unknown>;
}

/** An area says what differs; a reflected radiance takes the place of a temperature, and the other way round. */
function overridden(document: ConditionsDocument, area: AreaConditionsDocument): ConditionsDocument {
  const base: Record<string, unknown> = { ...document };
  if (area.reflectedRadiance !== undefined) delete base.reflectedApparentTemperature;
  if (area.reflectedApparentTemperature !== undefined) delete base.reflectedRadiance;
  return { ...base, ...area } as ConditionsDocument;
}

/** An area has the uncertainties of the document but for what it states, and for inputs it gives in another way. */
function areaUncertainties(
  whole: Uncertainties | undefined,
  { conditions, uncertainties }: NonNullable<ConditionsDocument['areas']>[number],
): Uncertainties | undefined {
  if (whole === undefined) return uncertainties;
  const kept: Record<string, unknown> = { ...whole };
  if (conditions.path !== undefined) delete kept.path;
  if (conditions.surface !== undefined) delete kept.surface;
  if (conditions.reflectedRadiance !== undefined) delete kept.reflectedApparentTemperature;
  if (conditions.reflectedApparentTemperature !== undefined) delete kept.reflectedRadiance;
  return { ...kept, ...uncertainties };
}

function conditionsOf(document: ConditionsDocument, makers: LayerMakers): Conditions {
  const { surface, reflectedApparentTemperature: reflected } = document;
  return checkedConditions(
    compact({
      band: within('band', () => bandFromDescriptor(document.band)),
      emissivity: document.emissivity,
      reflectedApparentTemperature: reflected && kelvinOf(reflected),
      reflectedRadiance: document.reflectedRadiance,
      path: document.path && layersOf(document.path, 'path', makers),
      surface: surface && {
        transmittance: surface.transmittance,
        backgroundApparentTemperature: kelvinOf(surface.backgroundApparentTemperature),
      },
      viewAngle: document.viewAngle,
      reflectedMeasuredAt: document.reflectedMeasuredAt,
      instrument: document.instrument && instrumentOf(document.instrument),
      origins: document.origins,
    }),
  );
}

function layersOf(path: readonly LayerDocument[], name: string, makers: LayerMakers): Layer[] {
  return path.map((document, k) =>
    layerWithin(`${name}[${k}]`, () => {
      if (document.kind === 'humid-air') return computedAir(document, makers);
      const { kind, temperature, mirroredTemperature, ...rest } = document;
      const input = compact({
        ...rest,
        temperature: temperature && kelvinOf(temperature),
        mirroredTemperature: mirroredTemperature && kelvinOf(mirroredTemperature),
      });
      if (kind === 'air') return air(input as Parameters<typeof air>[0]);
      if (kind === 'window') return infraredWindow(input as Parameters<typeof infraredWindow>[0]);
      return layer(input as Parameters<typeof layer>[0]);
    }),
  );
}

function computedAir(
  { kind: _kind, temperature, ...rest }: HumidAirDocument,
  { humidAir }: LayerMakers,
): Layer {
  if (humidAir) return humidAir({ temperature: kelvinOf(temperature), ...rest });
  throw new MeasurementError('missing-input', {
    path: 'kind',
    expected: 'the function that makes computed air',
    received: 'humid-air',
    hint: "Import { humidAir } from '@graybody/core/atmosphere' and pass { humidAir } as second argument.",
  });
}

/** A layer's own errors name the function that makes it; in a document the path says which layer it is. */
function layerWithin(name: string, make: () => Layer): Layer {
  return within(name, make, /^(air|humidAir|infraredWindow|layer)\./);
}

function instrumentOf(document: InstrumentDocument): Instrument {
  const { measuringRange: range, netd, ...rest } = document;
  return compact({
    ...rest,
    measuringRange: range && { from: kelvinOf(range.from), to: kelvinOf(range.to) },
    netd: netd && { value: netd.value, sceneTemperature: kelvinOf(netd.sceneTemperature) },
  }) as Instrument;
}

function kelvinOf(document: TemperatureDocument): AnyKelvin {
  if ('celsius' in document) return celsius(document.celsius);
  return 'fahrenheit' in document ? fahrenheit(document.fahrenheit) : kelvin(document.kelvin);
}

function refuseOther(document: unknown, format: string): void {
  const { format: given, version } = Object(document) as { format?: unknown; version?: unknown };
  // Said first: of a document of another format every key would be at fault.
  if (typeof given === 'string' && given !== format) {
    throw new MeasurementError('out-of-range', { path: 'format', expected: `'${format}'`, received: given });
  }
  if (given === format && typeof version === 'number' && version > 1) {
    throw new MeasurementError('wrong-version', {
      path: 'version',
      expected: `${format} of version 1`,
      received: version,
      hint: 'It was written by a newer release: update @graybody/core.',
    });
  }
}

/** Checks by a schema; the first issue becomes an error with our codes. */
function checkedBy(schema: z.ZodType, document: unknown): unknown {
  const outcome = schema.safeParse(document);
  if (outcome.success) return outcome.data;
  throw errorOf(deepest(outcome.error.issues), document);
}

/** The issue to tell: the deepest, an unknown key before what is missing in its place. */
function deepest(issues: readonly z.core.$ZodIssue[]): z.core.$ZodIssue {
  const leaves = issues.flatMap(leavesOf);
  const rank = (issue: z.core.$ZodIssue): number =>
    issue.code === 'unrecognized_keys' ? issue.path.length * 2 + 3 : issue.path.length * 2;
  return leaves.reduce((best, issue) => (rank(issue) > rank(best) ? issue : best));
}

/** Of a union, the issues of the branch that was meant: the one of the kind given. Without one, the union's own. */
function leavesOf(issue: z.core.$ZodIssue): z.core.$ZodIssue[] {
  if (issue.code !== 'invalid_union') return [issue];
  const isOfKind = (branch: readonly z.core.$ZodIssue[]): boolean =>
    !branch.some((inner) =>
      inner.path.length > 0
        ? inner.code === 'invalid_value' && (inner.path.at(-1) === 'kind' || inner.path.at(-1) === 'form')
        : inner.code === 'invalid_type' || (inner.code === 'invalid_union' && !inner.errors.some(isOfKind)),
    );
  const meant = issue.errors.filter(isOfKind);
  const fewest = Math.min(...meant.map((branch) => branch.length));
  const branch = meant.find(({ length }) => length === fewest);
  if (branch === undefined) return [issue];
  return branch.map((inner) => ({ ...inner, path: [...issue.path, ...inner.path] })).flatMap(leavesOf);
}

/** What was expected, in our words where the schema leaves them to zod. */
function expectedBy({ message }: z.core.$ZodIssue): string {
  const own = /^Invalid (?:input|option): expected ([^,]+)/.exec(message)?.[1];
  if (own === undefined) return message;
  const words: Readonly<Record<string, string>> = { object: 'an object', array: 'a list', string: 'a text' };
  return words[own] ?? own.replaceAll('"', "'").replaceAll('|', ', ');
}

function errorOf(issue: z.core.$ZodIssue, document: unknown): MeasurementError {
  const path = issue.path.reduce<string>(
    (text, key) =>
      typeof key === 'number' ? `${text}[${key}]` : text === '' ? String(key) : `${text}.${String(key)}`,
    '',
  );
  const received = issue.path.reduce<unknown>(
    (value, key) => (Object(value) as Record<PropertyKey, unknown>)[key],
    document,
  );
  if (issue.code === 'unrecognized_keys') {
    const key = issue.keys[0]!;
    return new MeasurementError('unknown-key', {
      path: path === '' ? key : `${path}.${key}`,
      expected: 'only keys of the schema (docs/CONDITIONS.md)',
      received: key,
      ...nearest(key, documentKeys()),
    });
  }
  const expected = expectedBy(issue);
  if (received === undefined) return new MeasurementError('missing-input', { path, expected });
  const notAnObject = issue.code === 'invalid_union' && typeof received !== 'object';
  const code = issue.code === 'invalid_type' || notAnObject ? 'wrong-type' : 'out-of-range';
  const percent = typeof received === 'number' && issue.code === 'too_big' && received > 1 && received <= 100;
  const { kind } = Object(received) as { kind?: unknown };
  const ofKind = issue.code === 'invalid_union' && kind !== undefined;
  return new MeasurementError(code, {
    path,
    expected,
    received,
    ...(percent ? { hint: `Write ${received / 100} for ${received} %.` } : {}),
    ...(ofKind ? { hint: `The kind given is ${describe(kind)}.` } : {}),
  });
}
