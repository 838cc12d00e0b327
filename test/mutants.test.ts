import {
  copyFileSync,
  mkdirSync,
  mkdtempSync,
  readdirSync,
  readFileSync,
  rmSync,
  writeFileSync,
} from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import typescript from 'typescript';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { type Core, checks } from './mutants/checks.js';
import { type Mutant, mutants } from './mutants/mutants.js';
import { root } from './support/examples.js';

/**
 * Breaks a copy of the core in one line at a time and expects a named check to notice. The library's own folder is
 * never touched. A mutant whose line is no longer there exactly once is stale, and fails.
 */
const source = join(root, 'packages/core/src');
let folder: string;
let compiled: string[] = [];

/** JavaScript of a module; throws when it does not parse. */
function compile(text: string, name: string): string {
  const { outputText, diagnostics = [] } = typescript.transpileModule(text, {
    fileName: name,
    reportDiagnostics: true,
    compilerOptions: { target: typescript.ScriptTarget.ES2022, module: typescript.ModuleKind.ESNext },
  });
  if (diagnostics.length === 0) return outputText;
  const message = typescript.flattenDiagnosticMessageText(diagnostics[0]!.messageText, ' ');
  throw new Error(`${name} does not compile: ${message}`);
}

/** The text of a file with a mutation in it; throws when the line is not there exactly once. */
function mutated({ name, file, from, to }: Mutant): string {
  const text = readFileSync(join(source, file), 'utf8');
  const found = text.split(from).length - 1;
  if (found !== 1) {
    throw new Error(
      `stale mutant "${name}": its line occurs ${found} times in ${file}. Write it anew: ${from}`,
    );
  }
  return text.split(from).join(to);
}

/** Lays a copy of the compiled core out in a folder of its own, with a mutation if there is one, and loads it. */
async function load(name: string, mutant?: Mutant): Promise<Core> {
  const target = join(folder, name);
  mkdirSync(target);
  for (const file of compiled) copyFileSync(join(folder, 'whole', file), join(target, file));
  if (mutant) {
    const file = mutant.file.replace(/\.ts$/, '.js');
    writeFileSync(join(target, file), compile(mutated(mutant), mutant.file));
  }
  return (await import(/* @vite-ignore */ pathToFileURL(join(target, 'index.js')).href)) as Core;
}

/** What a check throws; undefined where it agrees. */
function failureOf(check: string, library: Core): Error | undefined {
  try {
    checks[check]!(library);
    return undefined;
  } catch (error) {
    return error as Error;
  }
}

beforeAll(() => {
  // Below a folder of this name vitest leaves modules to Node, which is faster than passing each through vite.
  folder = join(mkdtempSync(join(tmpdir(), 'graybody-mutants-')), 'node_modules');
  mkdirSync(join(folder, 'whole'), { recursive: true });
  writeFileSync(join(folder, 'package.json'), '{ "type": "module" }');
  // Without the subpath that needs zod; the root imports nothing from outside.
  const files = readdirSync(source).filter(
    (file) => file.endsWith('.ts') && !/^(schema|record)\.ts$/.test(file),
  );
  for (const file of files) {
    const output = compile(readFileSync(join(source, file), 'utf8'), file);
    writeFileSync(join(folder, 'whole', file.replace(/\.ts$/, '.js')), output);
  }
  compiled = files.map((file) => file.replace(/\.ts$/, '.js'));
});

afterAll(() => {
  rmSync(join(folder, '..'), { recursive: true, force: true });
});

describe('the unmutated copy', () => {
  it.each(Object.keys(checks))('passes the check "%s"', async (check) => {
    const library = (await import(
      /* @vite-ignore */ pathToFileURL(join(folder, 'whole/index.js')).href
    )) as Core;
    expect(failureOf(check, library)).toBeUndefined();
  });
});

describe('mutants', () => {
  it.each(mutants.map((mutant, index) => [mutant.name, mutant.killedBy, mutant, index] as const))(
    '%s: noticed by "%s"',
    async (_name, check, mutant, index) => {
      expect(Object.keys(checks)).toContain(check);
      const failure = failureOf(check, await load(`mutant-${index}`, mutant));
      expect(failure, `the check "${check}" does not notice it`).toBeInstanceOf(Error);
      // A mutant must be wrong, not broken: a slip in its own text proves nothing about the check.
      expect(failure?.name).not.toMatch(/TypeError|ReferenceError|SyntaxError/);
    },
  );

  it('every check notices at least one of them, so none of them is idle', () => {
    const named = new Set(mutants.map(({ killedBy }) => killedBy));
    expect(Object.keys(checks).filter((check) => !named.has(check))).toEqual([]);
  });

  it('a stale mutant is refused', () => {
    const [first] = mutants;
    expect(() => mutated({ ...first!, from: 'this line is nowhere' })).toThrow(
      /stale mutant .* occurs 0 times/,
    );
    expect(() => mutated({ ...first!, from: 'const ' })).toThrow(/stale mutant .* occurs (?!1 )\d+ times/);
  });
});
