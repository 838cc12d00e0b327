import { readFileSync } from 'node:fs';
import { expect, it } from 'vitest';
import { celsius, measurementResult, softwareVersion, topHatBand } from '../src/index.js';

it('softwareVersion is that of package.json, and a record states it', () => {
  const { version } = JSON.parse(readFileSync(new URL('../package.json', import.meta.url), 'utf8')) as {
    version: string;
  };
  expect(softwareVersion).toBe(version);
  const conditions = { band: topHatBand(8, 14), emissivity: 0.9, reflectedApparentTemperature: celsius(20) };
  expect(measurementResult(celsius(60), conditions).record.software.version).toBe(version);
});
