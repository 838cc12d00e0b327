import { measurementModel, topHatBand } from '@graybody/core';
import { describe, expect, it, vi } from 'vitest';
import { readFrames } from '../src/frames.js';
import { withoutMethods } from '../src/ndarray.js';
import { fixture } from './support/fixtures.js';

describe('where a policy refuses `new Function`', () => {
  it('frames are the same fields without methods, which is said once, and a correction takes them', async () => {
    // What a content security policy without 'unsafe-eval' does; ndarray has compiled nothing yet in this file.
    vi.stubGlobal('Function', function refuse() {
      throw new EvalError("Refused to evaluate a string as JavaScript because 'unsafe-eval' is not allowed");
    });
    const frames = await readFrames(fixture('ice-works/oven-front/apparent.npy'), {
      quantity: 'apparent temperature',
      unit: 'K',
    });
    vi.unstubAllGlobals();
    expect(frames.warnings).toEqual([withoutMethods]);
    expect(typeof frames.array.get).toBe('undefined');
    expect(frames.array).toMatchObject({
      shape: [4, 120, 160],
      stride: [19200, 160, 1],
      offset: 0,
      dtype: 'float32',
    });
    const model = measurementModel({ band: topHatBand(3, 5), emissivity: 0.9, reflectedRadiance: 1 });
    expect(model.surfaceFrame(frames).unsolved).toBe(0);

    const again = await readFrames(fixture('ice-works/oven-front/apparent.npy'), {
      quantity: 'apparent temperature',
      unit: 'K',
    });
    expect(again.warnings).toEqual([]);
    expect(again.array.get(0, 0, 0)).toBe(frames.array.data[0]);
  });
});
