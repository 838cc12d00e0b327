/**
 * Writes docs/conditions.schema.json, the JSON Schema of a conditions document, from the schema the library uses:
 * `npm run build && node docs/generate-schema.mjs`. test/docs.test.ts fails when the file is not what this writes.
 */
import { execFileSync } from 'node:child_process';
import { writeFileSync } from 'node:fs';
import { fileURLToPath } from 'node:url';
import { conditionsJsonSchema } from '@graybody/core/record';

const file = fileURLToPath(new URL('conditions.schema.json', import.meta.url));
const biome = fileURLToPath(new URL('../node_modules/@biomejs/biome/bin/biome', import.meta.url));

writeFileSync(file, `${JSON.stringify(conditionsJsonSchema(), null, 2)}\n`);
execFileSync(process.execPath, [biome, 'format', '--write', file], { stdio: 'inherit' });
