import { fileURLToPath } from 'node:url';
import { defineConfig } from 'vitest/config';

const source = (path: string): string => fileURLToPath(new URL(path, import.meta.url));

export default defineConfig({
  resolve: {
    alias: [
      { find: /^@graybody\/core$/, replacement: source('packages/core/src/index.ts') },
      { find: /^@graybody\/core\/atmosphere$/, replacement: source('packages/core/src/atmosphere.ts') },
      { find: /^@graybody\/core\/record$/, replacement: source('packages/core/src/record.ts') },
      { find: /^@graybody\/arrays$/, replacement: source('packages/arrays/src/index.ts') },
    ],
  },
  test: {
    include: ['packages/*/test/**/*.test.ts', 'test/**/*.test.ts'],
    testTimeout: 30_000,
    typecheck: {
      enabled: true,
      include: ['packages/*/test/**/*.test-d.ts'],
      tsconfig: 'packages/core/test/tsconfig.json',
    },
    coverage: {
      provider: 'v8',
      include: ['packages/core/src/**', 'packages/arrays/src/**'],
      thresholds: { 'packages/core/src/**': { lines: 95, branches: 95 } },
    },
  },
});
