/**
 * Examples in Markdown that run: a ```ts fence directly followed by a ```text fence is a program and what it prints.
 */
import { execFileSync } from 'node:child_process';
import { mkdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { fileURLToPath } from 'node:url';
import ts from 'typescript';

/** Root of the repository. */
export const root: string = fileURLToPath(new URL('../..', import.meta.url));

/** One example of a Markdown file. */
export interface Example {
  readonly line: number;
  readonly code: string;
  /** What the program is said to print; undefined where no text fence follows. */
  readonly prints: string | undefined;
}

/** The TypeScript examples of a Markdown file, in order. */
export function examplesOf(markdown: string): Example[] {
  const fence = /^```ts\n([\s\S]*?)^```\n(?:\s*^```text\n([\s\S]*?)^```\n)?/gm;
  return [...markdown.matchAll(fence)].map((match) => ({
    line: markdown.slice(0, match.index).split('\n').length,
    code: match[1]!,
    prints: match[2]?.trimEnd(),
  }));
}

/** The TypeScript examples of a file of the repository. */
export function examplesIn(path: string): Example[] {
  return examplesOf(readFileSync(join(root, path), 'utf8'));
}

/** Runs an example with Node against the built packages, from the root of the repository; returns what it prints. */
export function runExample({ code }: Example, name: string): string {
  const { outputText } = ts.transpileModule(code, {
    compilerOptions: { module: ts.ModuleKind.ESNext, target: ts.ScriptTarget.ES2022 },
  });
  // Inside node_modules, so that the packages resolve as they do for a user.
  const folder = join(root, 'node_modules', '.graybody-examples');
  mkdirSync(folder, { recursive: true });
  const file = join(folder, `${name}.mjs`);
  try {
    writeFileSync(file, outputText);
    return execFileSync(process.execPath, [file], { cwd: root, encoding: 'utf8' }).trimEnd();
  } finally {
    rmSync(file, { force: true });
  }
}
