/**
 * Packs both packages, installs the tarballs into an empty project, imports them from Node ESM, and compiles a
 * TypeScript file against their types with NodeNext resolution. Needs the registry for the dependencies.
 */
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readdirSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';

const root = fileURLToPath(new URL('../..', import.meta.url));
const project = mkdtempSync(join(tmpdir(), 'graybody-packed-'));
const run = (command, args, cwd) =>
  execFileSync(command, args, { cwd, encoding: 'utf8', stdio: ['ignore', 'pipe', 'inherit'] });

const script = `
import { celsius, surfaceTemperature, toCelsius, topHatBand } from '@graybody/core';
import { recompute } from '@graybody/core/record';
import { readFrames } from '@graybody/arrays';
const conditions = { band: topHatBand(8, 14), emissivity: 0.86, reflectedApparentTemperature: celsius(21) };
console.log(toCelsius(surfaceTemperature(celsius(62.4), conditions)).toFixed(2), typeof recompute, typeof readFrames);
`;

try {
  for (const name of ['core', 'arrays'])
    run('npm', ['pack', '--silent', '--pack-destination', project], join(root, 'packages', name));
  const tarballs = readdirSync(project).filter((name) => name.endsWith('.tgz'));
  writeFileSync(
    join(project, 'package.json'),
    JSON.stringify({ name: 'empty', private: true, type: 'module' }),
  );
  run(
    'npm',
    ['install', '--silent', '--no-fund', '--no-audit', ...tarballs.map((name) => `./${name}`)],
    project,
  );
  writeFileSync(join(project, 'use.mjs'), script);
  const printed = run('node', ['use.mjs'], project).trim();
  if (printed !== '68.06 function function')
    throw new Error(`packed: expected "68.06 function function", got "${printed}"`);
  console.log(`packed: Node ESM prints ${printed}`);

  writeFileSync(join(project, 'use.ts'), script);
  writeFileSync(
    join(project, 'tsconfig.json'),
    JSON.stringify({
      compilerOptions: {
        module: 'NodeNext',
        target: 'ES2022',
        lib: ['ES2022', 'DOM'],
        strict: true,
        noEmit: true,
        types: [],
        exactOptionalPropertyTypes: true,
      },
      files: ['use.ts'],
    }),
  );
  run('node', [join(root, 'node_modules/typescript/bin/tsc'), '-p', project], project);
  console.log('packed: TypeScript NodeNext compiles');
  for (const name of ['core', 'arrays']) {
    console.log(
      run(
        'node',
        [join(root, 'node_modules/publint/src/cli.js'), join(root, 'packages', name), '--strict'],
        root,
      ).trim(),
    );
  }
} finally {
  rmSync(project, { recursive: true, force: true });
}
