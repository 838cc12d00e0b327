/**
 * The demo: real and synthetic frames corrected from file to surface temperature. Prints tables and writes arrays,
 * records and pictures to demo-output/.
 */
import { type Panel, pictureSvg, writeFlags, writeFrames } from '@graybody/arrays';
import { celsius, type MeasurementResult, type View } from '@graybody/core';
import { outputPath, writeOutput } from './files.js';
import { correctScene, type RegionOutcome, type Scene, type SceneOutcome, scenes } from './inspection.js';
import { satelliteScene } from './satellite.js';
import { degrees, textTable } from './text-table.js';

/** Scales of the pictures, and the regions pointed at. */
const pictures: Readonly<
  Record<Scene, { readonly from: number; readonly to: number; readonly marked: readonly string[] }>
> = {
  compressor: { from: -20, to: 110, marked: ['discharge pipe', 'flange', 'cladding'] },
  'switch-cabinet': { from: 20, to: 85, marked: ['joint L3 bare', 'joint L3 painted'] },
  'oven-front': { from: 120, to: 330, marked: ['apron'] },
};

await showSatellite();
for (const scene of scenes) await showScene(scene);
print('Arrays, records and pictures are in demo-output/.');
print(
  'A temperature is one input to a decision. Work near energised or hot parts is for qualified people, under local',
);
print('codes and licensed practice.');

async function showSatellite(): Promise<void> {
  print(
    '1. A real scene from orbit, two long-wave bands: counts → radiance → brightness → surface temperature',
  );
  print(
    '   Emissivity, transmittance, path and down-welling radiance are ASSUMED; nothing is tuned to agree.\n',
  );
  const bands = await satelliteScene();
  const rows = bands.map(({ name, meanBrightness, meanSurface, result }) => [
    name,
    degrees(meanBrightness),
    degrees(meanSurface),
    `± ${result.expandedUncertainty!.toFixed(1)} K`,
    result.budget[0]!.name,
  ]);
  print(textTable(['band', 'brightness °C', 'surface °C', 'U (k = 2)', 'largest part'], rows));
  const [first, second] = bands;
  const difference = first!.meanSurface - second!.meanSurface;
  const uncertainty = Math.hypot(first!.result.standardUncertainty!, second!.result.standardUncertainty!);
  print(
    `difference of the bands ${difference.toFixed(2)} K, u = ${uncertainty.toFixed(1)} K with the two taken as independent\n`,
  );
  for (const { name, surface, result } of bands) {
    const file = name.replace(' ', '-');
    await writeFrames(outputPath(`satellite-${file}-surface.tif`), surface);
    await writeFlags(outputPath(`satellite-${file}-flags.tif`), surface.flags);
    writeOutput(`satellite-${file}-record.json`, `${JSON.stringify(result, null, 2)}\n`);
  }
  const panels = bands.flatMap(({ name, brightness, surface }): Panel[] => [
    { title: `${name}, brightness`, frame: plane(brightness) },
    { title: `${name}, surface`, frame: plane(surface.temperature), flags: plane(surface.flags) },
  ]);
  writeOutput(
    'satellite.svg',
    pictureSvg(panels, { title: 'Scene from orbit, assumed atmosphere', pixelSize: 5 }),
  );
}

async function showScene(scene: Scene): Promise<void> {
  const outcome = await correctScene(scene);
  const again = await correctScene(scene, 'recorded');
  print(`${scenes.indexOf(scene) + 2}. Ice works, ${scene}: synthetic frames whose truth is known`);
  print('   apparent: what the instrument shows; recovered: corrected; again: recorded with wrong settings');
  print('   (ε 0.95, reflected 20 °C, no air, no window), taken back and corrected anew.\n');
  const rows = outcome.regions.map((region, i) => [
    region.name,
    degrees(region.truth),
    degrees(region.shown),
    degrees(region.recovered),
    `${region.error >= 0 ? '+' : '−'}${Math.abs(region.error).toFixed(3)}`,
    region.standardError.toFixed(3),
    `± ${region.result!.expandedUncertainty!.toFixed(1)}`,
    degrees(again.regions[i]!.shown),
    degrees(again.regions[i]!.recovered),
  ]);
  const head = [
    'region, °C',
    'true',
    'apparent',
    'recovered',
    'error K',
    'std. error',
    'U (k = 2)',
    'recorded',
    'again',
  ];
  print(textTable(head, rows));
  const { surface } = outcome;
  const reasons = Object.entries(surface.counts).filter(([name, count]) => name !== 'ok' && count > 0);
  print(
    `pixels without a value: ${surface.unsolved}; flags: ${reasons.map(([n, c]) => `${n} ${c}`).join(', ') || 'none'}`,
  );
  for (const text of lesson(outcome.regions)) print(text);
  const cautions = [
    ...new Set(outcome.regions.flatMap(({ result }) => result!.cautions.map(({ code }) => code))),
  ];
  if (cautions.length > 0)
    print(`cautions on some regions: ${cautions.join(', ')} (in the records, with what to do)`);
  print('');
  await writeFrames(outputPath(`${scene}-surface.tif`), surface);
  await writeFrames(outputPath(`${scene}-surface.npy`), surface);
  await writeFlags(outputPath(`${scene}-flags.npy`), surface.flags);
  writeOutput(`${scene}-records.json`, `${JSON.stringify(recordsOf(outcome.regions), null, 2)}\n`);
  writeOutput(`${scene}.svg`, picture(scene, outcome));
}

/** Why apparent temperature is not temperature, from the numbers of this scene. */
function lesson(regions: readonly RegionOutcome[]): string[] {
  const worst = regions.reduce((a, b) => (Math.abs(b.shown - b.truth) > Math.abs(a.shown - a.truth) ? b : a));
  const pairs = regions.flatMap((a) => regions.map((b) => ({ a, b, apart: a.shown - b.shown })));
  const alike = pairs.filter(({ a, b }) => Math.abs(a.truth - b.truth) < 0.5);
  const pair = alike.reduce((most, one) => (one.apart > most.apart ? one : most));
  const off = worst.shown - worst.truth;
  return [
    `furthest off: ${worst.name}, shown ${Math.abs(off).toFixed(1)} K too ${off > 0 ? 'hot' : 'cold'}`,
    ...(pair.apart > 1
      ? [`equally hot, shown ${pair.apart.toFixed(1)} K apart: ${pair.a.name} and ${pair.b.name}`]
      : []),
  ];
}

function recordsOf(regions: readonly RegionOutcome[]): Record<string, MeasurementResult | undefined> {
  return Object.fromEntries(regions.map(({ name, result }) => [name, result]));
}

function picture(scene: Scene, { reading, surface, truth, regions }: SceneOutcome): string {
  const { from, to, marked } = pictures[scene];
  const panels: [string, View, (region: RegionOutcome) => number][] = [
    ['apparent temperature: what is shown', reading, (region) => region.shown],
    ['surface temperature: corrected', surface.temperature, (region) => region.recovered],
    ['true temperature', truth, (region) => region.truth],
  ];
  const named = regions.filter(({ name }) => marked.includes(name));
  return pictureSvg(
    panels.map(([title, frame, value]) => ({
      title,
      frame: plane(frame),
      ...(frame === surface.temperature ? { flags: plane(surface.flags) } : {}),
      marks: named.map((region) => ({
        row: region.centre.row,
        column: region.centre.column,
        label: `${region.name} ${degrees(value(region), 1)} °C`,
      })),
    })),
    { title: `Ice works, ${scene}`, range: { from: celsius(from), to: celsius(to) } },
  );
}

/** The first frame of a stack. */
function plane(stack: View): View {
  if (stack.shape.length === 2) return stack;
  return {
    data: stack.data,
    shape: stack.shape.slice(1),
    stride: stack.stride.slice(1),
    offset: stack.offset,
  };
}

function print(text: string): void {
  process.stdout.write(`${text}\n`);
}
