import { execFile } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { build } from 'vite';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { root } from './support/examples.js';
import { commandOrSkip } from './support/tools.js';

const chromium = commandOrSkip(
  'the browser check',
  ['chromium', '--version'],
  ['chromium-browser', '--version'],
);

/** What a reporting app does: correct a reading, read conditions and a frame from bytes, under a strict policy. */
const page = `
import { celsius, measurementModel, surfaceTemperature, toCelsius, topHatBand } from '@graybody/core';
import { readConditionsDocument } from '@graybody/core/record';
import { readFrames } from '@graybody/arrays';
const conditions = { band: topHatBand(8, 14), emissivity: 0.86, reflectedApparentTemperature: celsius(21) };
const lines = [];
try {
  lines.push('spot ' + toCelsius(surfaceTemperature(celsius(62.4), conditions)).toFixed(2));
  const document = { format: 'graybody-conditions', version: 1, band: { kind: 'top-hat', from: 8, to: 14 }, emissivity: 0.86, reflectedApparentTemperature: { celsius: 21 } };
  const model = measurementModel(readConditionsDocument(document).conditions);
  const bytes = new Uint8Array(await (await fetch('frame.npy')).arrayBuffer());
  const frames = await readFrames(bytes, { unit: 'K', quantity: 'apparent temperature' });
  const surface = model.surfaceFrame(frames);
  lines.push('frame ' + surface.temperature.shape.join('x') + ' unsolved ' + surface.unsolved + ' get ' + typeof frames.array.get);
} catch (error) {
  lines.push('error ' + error.message);
}
document.querySelector('pre').textContent = lines.join('\\n');
`;

describe.skipIf(chromium === undefined)('in chromium, under a content security policy without eval', () => {
  let server: Server;
  let address = '';
  const profile = mkdtempSync(join(tmpdir(), 'graybody-chromium-'));

  beforeAll(async () => {
    const script = await bundled(page);
    server = createServer((request, response) => {
      response.setHeader(
        'Content-Security-Policy',
        "default-src 'none'; script-src 'self'; connect-src 'self'",
      );
      if (request.url === '/app.js') response.setHeader('Content-Type', 'text/javascript').end(script);
      else if (request.url === '/frame.npy')
        response.end(readFileSync(join(root, 'fixtures/ice-works/oven-front/apparent.npy')));
      else
        response
          .setHeader('Content-Type', 'text/html')
          .end(
            '<!doctype html><meta charset="utf-8"><title>check</title><pre>waiting</pre><script type="module" src="app.js"></script>',
          );
    });
    await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', resolve));
    address = `http://127.0.0.1:${(server.address() as AddressInfo).port}/`;
  }, 60_000);

  afterAll(() => {
    server?.close();
    rmSync(profile, { recursive: true, force: true });
  });

  it('a spot, a conditions document and a frame give the values Node gives', async () => {
    const flags =
      '--headless --no-sandbox --disable-gpu --disable-quic --no-first-run --disable-background-networking --disable-component-update --disable-sync';
    const { stdout } = await promisify(execFile)(
      chromium!,
      [
        ...flags.split(' '),
        `--user-data-dir=${profile}`,
        '--virtual-time-budget=20000',
        '--dump-dom',
        address,
      ],
      { timeout: 60_000, maxBuffer: 1e7 },
    );
    const text = /<pre>([\s\S]*?)<\/pre>/.exec(stdout)?.[1];
    // Under this policy the arrays have no methods (ndarray compiles its own): `get` is not there.
    expect(text).toBe('spot 68.06\nframe 4x120x160 unsolved 0 get undefined');
  }, 90_000);
});

/** One script of a page and all it imports. */
async function bundled(source: string): Promise<string> {
  const name = 'virtual:page';
  const result = await build({
    root,
    configFile: false,
    logLevel: 'error',
    plugins: [
      {
        name: 'page',
        resolveId: (id) => (id === name ? `\0${name}` : undefined),
        load: (id) => (id === `\0${name}` ? source : undefined),
      },
    ],
    build: {
      write: false,
      minify: false,
      target: 'es2022',
      rollupOptions: { input: name, output: { inlineDynamicImports: true } },
    },
  });
  const outputs = Array.isArray(result) ? result : [result];
  const chunk = outputs
    .flatMap((one) => ('output' in one ? one.output : []))
    .find((one) => one.type === 'chunk');
  if (chunk?.type !== 'chunk') throw new Error('the page was not bundled');
  return chunk.code;
}
