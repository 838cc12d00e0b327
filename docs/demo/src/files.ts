/**
 * Where the demo reads from and writes to.
 */
import { mkdirSync, readFileSync, writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';

const fixtures = new URL('../../../fixtures/', import.meta.url);
const output = new URL('../../../demo-output/', import.meta.url);

/** Path of a fixture. */
export function fixture(name: string): string {
  return fileURLToPath(new URL(name, fixtures));
}

/** A JSON fixture, parsed. */
export function fixtureJson(name: string): unknown {
  return JSON.parse(readFileSync(fixture(name), 'utf8'));
}

/** Path in the output folder, which is made when it is not there. */
export function outputPath(name: string): string {
  mkdirSync(output, { recursive: true });
  return fileURLToPath(new URL(name, output));
}

/** Writes a text into the output folder. */
export function writeOutput(name: string, text: string): void {
  writeFileSync(outputPath(name), text);
}
