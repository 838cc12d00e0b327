/**
 * The schema of conditions documents and result records, version 1: one zod schema for JSON and XML alike.
 *
 * It checks shape and plain ranges; what conditions mean together (τ + ρ ≤ 1, what must be given with what) is
 * checked where they are made. It uses no transforms, so that it exports to JSON Schema.
 */
import * as z from 'zod';

const number = (expected = 'a number'): z.ZodNumber => z.number({ error: () => expected });
const ratio: z.ZodNumber = number('a ratio of 0…1').gte(0, 'a ratio ≥ 0').lte(1, 'a ratio ≤ 1');
const list = z.array(number('a number in the list'), 'a list of numbers').readonly();

const temperature = z.union(
  [
    z.strictObject({ celsius: number('a temperature in degrees Celsius') }),
    z.strictObject({ kelvin: number('a temperature in kelvin') }),
    z.strictObject({ fahrenheit: number('a temperature in degrees Fahrenheit') }),
  ],
  {
    error: () =>
      'a temperature with its unit, { "celsius": 21 }, { "kelvin": 294.15 } or { "fahrenheit": 70 }',
  },
);

const curve = z.union([
  z.strictObject({ wavelength: list, value: list }),
  z.strictObject({ wavenumber: list, value: list }),
]);
const interval = z.strictObject({ low: ratio, high: ratio });
const ratioOrCurve = z.union([ratio, curve], {
  error: () => 'a ratio of 0…1 or a curve { wavelength, value }',
});
const ratioCurveOrInterval = z.union([ratio, interval, curve], {
  error: () => 'a ratio of 0…1, an interval { low, high } or a curve { wavelength, value }',
});

const detector = z.enum(['energy', 'photon'], { error: () => "'energy' or 'photon'" }).optional();
const radianceUnit = z.enum(['W·m⁻²·sr⁻¹', 'W·m⁻²·sr⁻¹·µm⁻¹', 'signal']).optional();
const calibrationRange = z.strictObject({ from: number(), to: number() }).optional();
const bandText = 'a band such as { "kind": "top-hat", "from": 8, "to": 14 }';
const plainBand = z.union(
  [
    z.strictObject({ kind: z.literal('top-hat'), from: number(), to: number(), detector }),
    z.strictObject({ kind: z.literal('sampled'), wavelength: list, responsivity: list, detector }),
    z.strictObject({ kind: z.literal('sampled'), wavenumber: list, responsivity: list, detector }),
    z.strictObject({ kind: z.literal('monochromatic'), wavelength: number() }),
    z.strictObject({
      kind: z.literal('calibrated'),
      form: z.literal('k1k2'),
      k1: number(),
      k2: number(),
      radianceUnit,
      range: calibrationRange,
    }),
    z.strictObject({
      kind: z.literal('calibrated'),
      form: z.literal('sakuma-hattori'),
      a: number(),
      b: number(),
      c: number(),
      radianceUnit,
      range: calibrationRange,
    }),
  ],
  { error: () => bandText },
);
const weighted = (inner: z.ZodType): z.ZodType =>
  z.union([plainBand, z.strictObject({ kind: z.literal('weighted'), band: inner, curve })], {
    error: () => bandText,
  });
// Three weightings deep: nothing recursive, so that a hostile document cannot nest without end.
const band = weighted(weighted(weighted(plainBand)));

const humidAir = z.strictObject({
  kind: z.literal('humid-air'),
  temperature,
  relativeHumidity: ratio,
  distance: number().gte(0, 'a distance ≥ 0 m'),
  pressure: number().optional(),
  carbonDioxide: ratio.optional(),
  visibility: number().optional(),
});
const givenLayer = z.strictObject({
  kind: z.enum(['air', 'window', 'layer'], { error: () => "'air', 'window' or 'layer'" }),
  transmittance: ratioCurveOrInterval,
  reflectance: ratioCurveOrInterval.optional(),
  temperature: temperature.optional(),
  mirroredTemperature: temperature.optional(),
  pathRadiance: number().gte(0, 'a radiance ≥ 0').optional(),
});
const layer = z.union([givenLayer, humidAir], {
  error: () => "a layer of kind 'air', 'window', 'layer' or 'humid-air'",
});
const path = z.array(layer, 'a list of layers from target to instrument').readonly().optional();

const instrument = z
  .strictObject({
    measuringRange: z.strictObject({ from: temperature, to: temperature }).optional(),
    netd: z.strictObject({ value: number(), sceneTemperature: temperature }).optional(),
    accuracy: z
      .strictObject({
        kelvin: number().optional(),
        percent: number().optional(),
        percentOf: z.enum(['celsius', 'kelvin', 'range']).optional(),
      })
      .optional(),
    ifov: number().optional(),
    lens: z.string().optional(),
    calibrationDate: z.string().optional(),
    warmUp: number().optional(),
  })
  .optional();

const entry = z.union(
  [
    number().gte(0, 'an uncertainty ≥ 0'),
    z.strictObject({ standard: number().gte(0) }),
    z.strictObject({
      halfWidth: number().gte(0),
      distribution: z.enum(['rectangular', 'triangular', 'arcsine']).optional(),
    }),
    z.strictObject({ expanded: number().gte(0), coverageFactor: number().gt(0) }),
  ],
  {
    error: () =>
      'a standard uncertainty, or { standard }, { halfWidth, distribution } or { expanded, coverageFactor }',
  },
);
const optionalEntry = entry.optional();
const uncertainties = z
  .strictObject({
    apparent: optionalEntry,
    recorded: optionalEntry,
    emissivity: optionalEntry,
    reflectedApparentTemperature: optionalEntry,
    reflectedRadiance: optionalEntry,
    path: z
      .array(
        z.strictObject({
          transmittance: optionalEntry,
          reflectance: optionalEntry,
          temperature: optionalEntry,
          mirroredTemperature: optionalEntry,
          pathRadiance: optionalEntry,
        }),
      )
      .readonly()
      .optional(),
    surface: z
      .strictObject({ transmittance: optionalEntry, backgroundApparentTemperature: optionalEntry })
      .optional(),
  })
  .optional();

const place = z.strictObject({ row: number(), column: number() });
const region = z.union(
  [
    z.strictObject({
      kind: z.literal('rectangle'),
      row: number(),
      column: number(),
      height: number(),
      width: number(),
    }),
    z.strictObject({ kind: z.literal('ellipse'), centre: place, semiAxes: place }),
    z.strictObject({
      kind: z.literal('polygon'),
      points: z.array(place).min(3, 'three or more points').readonly(),
    }),
  ],
  { error: () => 'a region of kind rectangle, ellipse or polygon' },
);

const surface = z
  .strictObject({ transmittance: ratio, backgroundApparentTemperature: temperature })
  .optional();
const areaKeys = {
  emissivity: ratioOrCurve.optional(),
  reflectedApparentTemperature: temperature.optional(),
  reflectedRadiance: number().gte(0, 'a radiance ≥ 0').optional(),
  path,
  surface,
  viewAngle: number().gte(0, 'an angle ≥ 0°').lt(90, 'an angle below 90°').optional(),
  reflectedMeasuredAt: z.enum(['target', 'instrument']).optional(),
};
const recorded = z
  .strictObject({
    emissivity: ratio,
    reflectedApparentTemperature: temperature,
    path,
    instrument,
    resolution: number().gt(0, 'a step > 0').optional(),
  })
  .optional();

/** Schema of a conditions document, version 1. */
export const conditionsSchema: z.ZodType = z.strictObject({
  format: z.literal('graybody-conditions', { error: () => "'graybody-conditions'" }),
  version: z.literal(1, { error: () => 'version 1' }),
  band,
  ...areaKeys,
  emissivity: ratioOrCurve,
  instrument,
  origins: z.record(z.string(), z.string()).optional(),
  uncertainties,
  areas: z
    .array(z.strictObject({ name: z.string(), region, conditions: z.strictObject(areaKeys), uncertainties }))
    .readonly()
    .optional(),
  recorded,
});

/** Schema of a result record, version 1. */
export const resultSchema: z.ZodType = z.strictObject({
  format: z.literal('graybody-result'),
  version: z.literal(1),
  software: z.strictObject({ name: z.literal('@graybody/core'), version: z.string() }),
  method: z.string(),
  reading: z.strictObject({
    quantity: z.enum(['apparent temperature', 'recorded temperature']),
    kelvin: number(),
  }),
  conditions: conditionsSchema,
  recorded,
  uncertainties,
  result: z.strictObject({
    quantity: z.literal('surface temperature'),
    kelvin: number(),
    standardUncertainty: number().optional(),
    expandedUncertainty: number().optional(),
    coverageFactor: number().optional(),
  }),
  budget: z
    .array(
      z.strictObject({
        name: z.string(),
        standardUncertainty: number(),
        sensitivity: number(),
        contribution: number(),
        share: number(),
        origin: z.string().optional(),
      }),
    )
    .readonly(),
  cautions: z.array(z.strictObject({ code: z.string(), message: z.string(), remedy: z.string() })).readonly(),
});

/** Every key a document may have somewhere, to name the nearest one for a key that is not known. */
export function documentKeys(): string[] {
  return [...new Set([conditionsSchema, resultSchema].flatMap((schema) => keysOf(z.toJSONSchema(schema))))];
}

function keysOf(schema: unknown): string[] {
  if (typeof schema !== 'object' || schema === null) return [];
  const { properties } = schema as { properties?: object };
  return [...(properties ? Object.keys(properties) : []), ...Object.values(schema).flatMap(keysOf)];
}
