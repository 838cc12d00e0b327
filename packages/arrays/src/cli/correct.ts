/**
 * Corrects a frame array of one's own: `npm run correct -- FRAMES --conditions FILE --out FILE`.
 *
 * Reads the frames and the conditions document (JSON or XML), writes surface temperatures, the reason codes beside
 * them, and a record with the fingerprints of what went in. Exit code 0 done, 2 for what the caller can mend.
 */
import { createHash } from 'node:crypto';
import { readFile, writeFile } from 'node:fs/promises';
import { basename, extname } from 'node:path';
import { parseArgs } from 'node:util';
import {
  type AnyKelvin,
  isMeasurementError,
  type Quantity,
  type SurfaceFrame,
  softwareVersion,
  surfaceFrameByArea,
  toCelsius,
  type View,
} from '@graybody/core';
import { humidAir } from '@graybody/core/atmosphere';
import { type DescribedConditions, describedModels, readConditionsDocument } from '@graybody/core/record';
import {
  isArrayError,
  pictureSvg,
  readConditionsXml,
  readFrames,
  writeFlags,
  writeFrames,
} from '../index.js';

const usage = `npm run correct -- FRAMES --conditions FILE --out FILE [options]

  FRAMES             NPY, TIFF or a delimited grid, of apparent temperature, or of recorded temperature when
                     the conditions document has recorded settings
  --conditions FILE  conditions document, JSON or XML (docs/CONDITIONS.md)
  --out FILE         surface temperatures in kelvin, as .npy, .tif or .csv; beside it NAME.flags.* with the
                     reason codes and NAME.record.json
  --unit UNIT        unit of the frames where the file does not say: K, degC, degF
  --quantity NAME    what the frames hold where the file does not say, e.g. 'apparent temperature'
  --scale N --offset N   value = scale · number + offset, before the unit
  --no-data N        number that stands for a missing pixel
  --picture FILE     the first frame before and after, as SVG
`;

const options = {
  conditions: { type: 'string' },
  out: { type: 'string' },
  unit: { type: 'string' },
  quantity: { type: 'string' },
  scale: { type: 'string' },
  offset: { type: 'string' },
  'no-data': { type: 'string' },
  picture: { type: 'string' },
  help: { type: 'boolean' },
} as const;

/** What the caller can mend: said without a stack trace. */
class UsageError extends Error {}

async function main(): Promise<void> {
  const { values, positionals } = readArguments();
  if (values.help) {
    process.stdout.write(usage);
    return;
  }
  const [source] = positionals;
  if (source === undefined || positionals.length > 1 || !values.conditions || !values.out) {
    throw new UsageError(`expected one array, --conditions and --out.\n\n${usage}`);
  }
  const conditionsText = await readFile(values.conditions, 'utf8').catch((cause: Error) => {
    throw new UsageError(`--conditions ${values.conditions}: ${cause.message}`);
  });
  const described = readConditions(conditionsText, values.conditions);
  const { model, areas } = describedModels(described);
  const frames = await readFrames(source, {
    ...(values.unit === undefined ? {} : { unit: values.unit }),
    ...(values.scale === undefined ? {} : { scale: numberOf(values.scale, '--scale') }),
    ...(values.offset === undefined ? {} : { offset: numberOf(values.offset, '--offset') }),
    ...(values['no-data'] === undefined ? {} : { noData: numberOf(values['no-data'], '--no-data') }),
    ...(values.quantity === undefined ? {} : { quantity: values.quantity as Quantity }),
    otherwise: model.reads,
  });
  const surface = surfaceFrameByArea(frames, model, areas);

  const stem = values.out.slice(0, values.out.length - extname(values.out).length);
  const flagsPath = `${stem}.flags${extname(values.out)}`;
  await writeFrames(values.out, surface, { provenance: `corrected by @graybody/core ${softwareVersion}` });
  await writeFlags(flagsPath, surface.flags);
  const record = {
    format: 'graybody-correction',
    version: 1,
    software: { name: '@graybody/core', version: softwareVersion },
    frames: { file: basename(source), sha256: await fingerprint(source), shape: surface.temperature.shape },
    conditions: { file: basename(values.conditions), sha256: await fingerprint(values.conditions) },
    reads: model.reads,
    result: { file: basename(values.out), quantity: surface.quantity, unit: surface.unit },
    unsolved: surface.unsolved,
    counts: surface.counts,
    cautions: surface.cautions,
  };
  await writeFile(`${stem}.record.json`, `${JSON.stringify(record, null, 2)}\n`);
  if (values.picture !== undefined) await writeFile(values.picture, picture(frames.array, surface, source));
  process.stdout.write(report(frames.array, surface, [values.out, flagsPath, `${stem}.record.json`]));
}

function readArguments(): ReturnType<typeof parseArgs<{ options: typeof options; allowPositionals: true }>> {
  try {
    return parseArgs({ options, allowPositionals: true });
  } catch (error) {
    throw new UsageError(`${(error as Error).message.split('. ')[0]}.\n\n${usage}`);
  }
}

function readConditions(text: string, path: string): DescribedConditions {
  if (text.trimStart().startsWith('<')) return readConditionsXml(text, { humidAir });
  let document: unknown;
  try {
    document = JSON.parse(text);
  } catch (error) {
    throw new UsageError(`${path}: neither JSON nor XML: ${(error as Error).message}`);
  }
  return readConditionsDocument(document, { humidAir });
}

function numberOf(text: string, option: string): number {
  const value = Number(text);
  if (text.trim() === '' || !Number.isFinite(value))
    throw new UsageError(`${option}: expected a number, got "${text}".`);
  return value;
}

async function fingerprint(path: string): Promise<string> {
  return createHash('sha256')
    .update(await readFile(path))
    .digest('hex');
}

function picture(reading: View, surface: SurfaceFrame, source: string): string {
  return pictureSvg(
    [
      { title: 'as read', frame: firstPlane(reading) },
      {
        title: 'surface temperature',
        frame: firstPlane(surface.temperature),
        flags: firstPlane(surface.flags),
      },
    ],
    { title: basename(source) },
  );
}

/** The first (row, column) plane of a stack. */
function firstPlane({ data, shape, stride, offset }: View): View {
  return { data, shape: shape.slice(-2), stride: stride.slice(-2), offset };
}

function report(reading: View, surface: SurfaceFrame, written: readonly string[]): string {
  const lines = [
    `${surface.temperature.shape.join(' × ')} pixels (frame × row × column)`,
    `as read               ${range(reading)}`,
    `surface temperature   ${range(surface.temperature)}`,
    `pixels without value  ${surface.unsolved}`,
  ];
  for (const [name, count] of Object.entries(surface.counts)) {
    if (name !== 'ok' && count > 0) lines.push(`  ${name}: ${count}`);
  }
  for (const { message, remedy } of surface.cautions) lines.push(`caution: ${message} ${remedy}`);
  lines.push(`wrote ${written.join(', ')}`, '');
  return lines.join('\n');
}

/** Lowest, mean and highest value of a view, in degrees Celsius. */
function range({ data }: View): string {
  let [low, high, sum, count] = [Number.POSITIVE_INFINITY, Number.NEGATIVE_INFINITY, 0, 0];
  for (const value of data) {
    if (!Number.isFinite(value)) continue;
    if (value < low) low = value;
    if (value > high) high = value;
    sum += value;
    count += 1;
  }
  if (count === 0) return 'no value';
  const [from, mean, to] = [low, sum / count, high].map((value) => toCelsius(value as AnyKelvin).toFixed(2));
  return `${from} … ${to} °C, mean ${mean} °C`;
}

try {
  await main();
} catch (error) {
  const mendable = error instanceof UsageError || isMeasurementError(error) || isArrayError(error);
  process.stderr.write(`correct: ${mendable ? (error as Error).message : String((error as Error).stack)}\n`);
  process.exitCode = mendable ? 2 : 1;
}
