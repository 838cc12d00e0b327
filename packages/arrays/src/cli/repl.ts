/**
 * A Node REPL with both packages loaded and example conditions in place: `npm run repl`.
 */
import { start } from 'node:repl';
import * as core from '@graybody/core';
import * as atmosphere from '@graybody/core/atmosphere';
import * as record from '@graybody/core/record';
import * as arrays from '../index.js';

const conditions: core.Conditions = {
  band: core.topHatBand(8, 14),
  emissivity: 0.86,
  reflectedApparentTemperature: core.celsius(21),
};

if (process.stdout.isTTY) {
  process.stdout.write(
    [
      `graybody ${core.softwareVersion}: both packages are loaded. Temperatures are kelvin; celsius(62.4) makes one.`,
      '  toCelsius(surfaceTemperature(celsius(62.4), conditions))',
      '  measurementResult(celsius(62.4), conditions, { apparent: 1, emissivity: 0.02, reflectedApparentTemperature: 2 })',
      "  const frames = await readFrames('fixtures/ice-works/switch-cabinet/apparent.npy', { unit: 'K', quantity: 'apparent temperature' })",
      'conditions = { band: topHatBand(8, 14), emissivity: 0.86, reflectedApparentTemperature: celsius(21) }',
      '',
    ].join('\n'),
  );
}
const repl = start({ prompt: process.stdout.isTTY ? '> ' : '', ignoreUndefined: true });
Object.assign(repl.context, core, atmosphere, record, arrays, { conditions });
