import { readdirSync, readFileSync } from 'node:fs';
import { basename, join, relative } from 'node:path';
import { describe, expect, it } from 'vitest';
import { root } from './support/examples.js';

/** Files of a folder and below, by ending. */
function filesBelow(folder: string, ending: string): string[] {
  return readdirSync(join(root, folder), { recursive: true, withFileTypes: true })
    .filter((entry) => entry.isFile() && entry.name.endsWith(ending))
    .map((entry) => relative(root, join(entry.parentPath, entry.name)))
    .filter((path) => !/(^|\/)(node_modules|dist|coverage)\//.test(path));
}

/** Modules a file imports or re-exports at run time; type-only imports are no arrow. */
function importsOf(path: string): string[] {
  const text = readFileSync(join(root, path), 'utf8');
  const statements = text.matchAll(/^(?:import|export)\s+(?!type\b)(?:[\s\S]*?\sfrom\s+)?'([^']+)';/gm);
  const dynamic = text.matchAll(/\bimport\('([^']+)'\)/g);
  return [...statements, ...dynamic].map((match) => match[1]!);
}

/** Levels of core, lowest first: a file imports from its own level or a lower one. */
const coreLevels: readonly (readonly string[])[] = [
  ['errors', 'version', 'quantity', 'constants', 'descriptor', 'humid-air-data'],
  ['units', 'view'],
  ['check'],
  ['planck', 'quadrature', 'curve', 'scalar', 'regions'],
  ['table', 'kernel', 'humidity'],
  ['band'],
  ['layer'],
  ['conditions', 'measurement-equation'],
  ['evaluation'],
  ['sensitivity'],
  ['model'],
  ['cautions', 'uncertainty', 'frame-io', 'document', 'propagation'],
  ['humid-air', 'atmosphere'],
  ['frame'],
  ['measurement', 'recorrection'],
  ['areas', 'result', 'procedure-support', 'procedures'],
  ['schema', 'record', 'index'],
];

const levelOf = (name: string): number => coreLevels.findIndex((level) => level.includes(name));

describe('import arrows of core', () => {
  const files = filesBelow('packages/core/src', '.ts');

  it.each(files)('%s imports only its own level or lower ones', (path) => {
    const own = levelOf(basename(path, '.ts'));
    expect(own, `${path} has no level in this test`).toBeGreaterThanOrEqual(0);
    for (const target of importsOf(path)) {
      if (!target.startsWith('./')) continue;
      expect(levelOf(basename(target, '.js')), `${path} imports ${target}`).toBeLessThanOrEqual(own);
    }
  });

  it('only the schema and the record need a package, and it is zod; nothing needs Node', () => {
    for (const path of files) {
      const outside = importsOf(path).filter((target) => !target.startsWith('./'));
      const allowed = ['schema', 'record'].includes(basename(path, '.ts')) ? ['zod'] : [];
      expect(
        outside.filter((target) => !allowed.includes(target)),
        path,
      ).toEqual([]);
    }
  });
});

describe('import arrows of arrays', () => {
  it('a format imports no other format', () => {
    for (const path of filesBelow('packages/arrays/src/formats', '.ts')) {
      const siblings = importsOf(path).filter((target) => /^\.\/[^/]+\.js$/.test(target));
      expect(siblings, path).toEqual([]);
    }
  });

  it('nothing imports the command line', () => {
    for (const path of filesBelow('packages/arrays/src', '.ts').filter((name) => !name.includes('/cli/'))) {
      expect(
        importsOf(path).filter((target) => target.includes('/cli/')),
        path,
      ).toEqual([]);
    }
  });
});

describe('size and wording', () => {
  const sources = ['packages', 'test', 'docs'].flatMap((folder) => filesBelow(folder, '.ts'));

  it('no file has more than 400 lines without a reason in its header', () => {
    const long = sources.filter((path) => {
      const text = readFileSync(join(root, path), 'utf8');
      return text.split('\n').length > 401 && !text.slice(0, 400).includes('Reason for the length:');
    });
    expect(long).toEqual([]);
  });

  it('no default export, and no path of a machine', () => {
    for (const path of sources) {
      const text = readFileSync(join(root, path), 'utf8');
      expect(/^export default/m.test(text) && !path.endsWith('config.ts'), path).toBe(false);
      expect(/['"`]\/(?:work|root|home|tmp)\//.test(text), path).toBe(false);
    }
  });
});
