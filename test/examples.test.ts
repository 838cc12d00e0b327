import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { describe, expect, it } from 'vitest';
import { examplesIn, root, runExample } from './support/examples.js';

const files = ['README.md', 'packages/core/README.md', 'packages/arrays/README.md'];

describe.each(files)('examples of %s', (file) => {
  const examples = existsSync(join(root, file)) ? examplesIn(file) : [];

  it('there is at least one, and each says what it prints', () => {
    expect(examples.length).toBeGreaterThan(0);
    for (const { line, prints } of examples) expect(prints, `${file}:${line}`).toBeDefined();
  });

  it.each(examples.map((example) => [example.line, example] as const))(
    'line %i prints what it says',
    (line, example) => {
      expect(runExample(example, `${file.replace(/\W/g, '-')}-${line}`)).toBe(example.prints);
    },
  );
});
