import { existsSync, readdirSync, readFileSync } from 'node:fs';
import { dirname, join, relative } from 'node:path';
import { arrayErrorCodes, readConditionsXml } from '@graybody/arrays';
import { cautionCodes, frameFlag, isBand, measurementErrorCodes } from '@graybody/core';
import { conditionsJsonSchema, describedModels, readConditionsDocument } from '@graybody/core/record';
import { describe, expect, it } from 'vitest';
import { root } from './support/examples.js';

const text = (path: string): string => readFileSync(join(root, path), 'utf8');

/** Markdown files of the repository that are ours. */
const pages = ['', 'docs', 'packages/core', 'packages/arrays'].flatMap((folder) =>
  readdirSync(join(root, folder))
    .filter((name) => name.endsWith('.md'))
    .map((name) => join(folder, name)),
);

/** Code fences of one language in a Markdown file. */
function fences(path: string, language: string): { readonly line: number; readonly code: string }[] {
  const page = text(path);
  return [...page.matchAll(new RegExp(`^\`\`\`${language}\\n([\\s\\S]*?)^\`\`\``, 'gm'))].map((match) => ({
    line: page.slice(0, match.index).split('\n').length + 1,
    code: match[1]!,
  }));
}

/** Headings of the third level below each one of the second, without their marks. */
function sections(path: string): Map<string, string[]> {
  const found = new Map<string, string[]>();
  let current: string[] = [];
  for (const [, marks, title] of text(path).matchAll(/^(##|###) (.+)$/gm)) {
    if (marks === '##') found.set(title!, (current = []));
    else current.push(title!);
  }
  return found;
}

describe('docs/ERRORS.md', () => {
  const found = sections('docs/ERRORS.md');
  const flags = Object.entries(frameFlag).map(([name, code]) => `\`${name}\` (${code})`);

  it.each([
    ['MeasurementError', measurementErrorCodes.map((code) => `\`${code}\``)],
    ['Cautions', cautionCodes.map((code) => `\`${code}\``)],
    ['Flags of a frame', flags],
    ['ArrayError', arrayErrorCodes.map((code) => `\`${code}\``)],
  ])('%s: has a heading for every code, and for no other', (section, codes) => {
    expect([...(found.get(section) ?? [])].sort()).toEqual([...codes].sort());
  });

  it('says a remedy under every error and caution', () => {
    const parts = text('docs/ERRORS.md').split(/^### /m).slice(1);
    const without = parts.filter((part) => !/^`ok`/.test(part) && !part.includes('*Remedy*'));
    expect(without.map((part) => part.split('\n')[0])).toEqual([]);
  });
});

describe('docs/METHOD.md', () => {
  const defined = [...text('docs/METHOD.md').matchAll(/^\*\*Eq\. (\d+)\*\*/gm)].map((match) =>
    Number(match[1]),
  );
  const sources = ['packages/core/src', 'packages/arrays/src', 'docs/demo/src'].flatMap((folder) =>
    readdirSync(join(root, folder), { recursive: true, encoding: 'utf8' })
      .filter((name) => name.endsWith('.ts'))
      .map((name) => join(folder, name)),
  );

  it('numbers its equations 1, 2, 3 … without a gap or a repetition', () => {
    expect([...defined].sort((a, b) => a - b)).toEqual(defined.map((_, i) => i + 1));
  });

  it('has every equation the sources and the other pages refer to', () => {
    const missing = [...sources, ...pages].flatMap((path) =>
      [...text(path).matchAll(/METHOD(?:\.md)?\)? eq\. (\d+)(?:–(\d+))?/g)].flatMap(
        ([reference, from, to]) =>
          [from, to ?? from].some((number) => !defined.includes(Number(number)))
            ? [`${path}: ${reference}`]
            : [],
      ),
    );
    expect(missing).toEqual([]);
  });

  it('is referred to from the sources in one spelling, "METHOD.md eq. 7"', () => {
    const mentions = sources.flatMap((path) =>
      [...text(path).matchAll(/METHOD\b[^\n]{0,10}/g)]
        .filter(([mention]) => !/^METHOD\.md (?:eq\. \d|was )/.test(mention)) // result.ts: "Which equation of METHOD.md was inverted"
        .map(([mention]) => `${path}: ${mention}`),
    );
    expect(mentions).toEqual([]);
  });

  it('names test files that exist', () => {
    const named = [...text('docs/METHOD.md').matchAll(/`([\w-]+\.test\.ts)`|\(([\w-]+\.test\.ts)\)/g)];
    expect(named.length).toBeGreaterThan(3);
    const missing = named
      .map(([, a, b]) => a ?? b!)
      .filter((name) => !existsSync(join(root, 'packages/core/test', name)));
    expect([...new Set(missing)]).toEqual([]);
  });

  it('has every equation referred to inside itself', () => {
    const inside = [...text('docs/METHOD.md').matchAll(/\beq\. (\d+)/g)].map((match) => Number(match[1]));
    expect(inside.filter((number) => !defined.includes(number))).toEqual([]);
  });
});

describe('docs/conditions.schema.json', () => {
  it('is what docs/generate-schema.mjs would write', () => {
    expect(JSON.parse(text('docs/conditions.schema.json'))).toEqual(conditionsJsonSchema());
  });
});

describe('docs/CONDITIONS.md', () => {
  const json = fences('docs/CONDITIONS.md', 'json');
  const xml = fences('docs/CONDITIONS.md', 'xml');

  it('has examples of both kinds', () => {
    expect(json.length).toBeGreaterThan(3);
    expect(xml.length).toBeGreaterThan(1);
  });

  it.each(json)('the JSON example at line $line is read and compiles into models', ({ code }) => {
    const described = readConditionsDocument(JSON.parse(code));
    expect(describedModels(described).areas.length).toBe(described.areas.length);
  });

  it.each(xml)('the XML example at line $line describes what one of the JSON examples does', ({ code }) => {
    const described = plain(readConditionsXml(code));
    const alike = json.filter((one) => plain(readConditionsDocument(JSON.parse(one.code))) === described);
    expect(alike.length).toBe(1);
  });

  it('names every key of the schema', () => {
    const page = text('docs/CONDITIONS.md');
    const unnamed = keysOf(conditionsJsonSchema()).filter(
      (key) => !page.includes(`\`${key}\``) && !page.includes(`"${key}"`),
    );
    expect(unnamed).toEqual([]);
  });
});

describe('links', () => {
  it.each(pages)('%s: every link to a file leads to one', (path) => {
    const targets = [...text(path).matchAll(/\]\(([^)\s]+)\)/g)]
      .map((match) => match[1]!.replace(/#.*$/, ''))
      .filter((target) => target !== '' && !/^[a-z]+:/.test(target));
    const broken = targets.filter((target) => !existsSync(join(root, dirname(path), target)));
    expect(broken, relative(root, path)).toEqual([]);
  });
});

/** Described conditions as a text in which two that mean the same are the same. */
function plain(described: ReturnType<typeof readConditionsDocument>): string {
  return JSON.stringify(described, (_key, value: unknown) => {
    if (isBand(value)) return value.descriptor;
    if (typeof value !== 'object' || value === null || Array.isArray(value)) return value;
    return Object.fromEntries(Object.entries(value).sort(([a], [b]) => (a < b ? -1 : 1)));
  });
}

function keysOf(schema: unknown): string[] {
  if (typeof schema !== 'object' || schema === null) return [];
  const { properties } = schema as { properties?: object };
  return [...new Set([...Object.keys(properties ?? {}), ...Object.values(schema).flatMap(keysOf)])];
}
