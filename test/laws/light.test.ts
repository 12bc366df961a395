import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { channelCounts, depths, kernels, LINEAR, oneOf, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { referenceChain } from '../reference/chain.ts';
import { holds } from './holds.ts';

/** Relative luminance, WCAG 2.2: the standard's four-digit weights. */
const WEIGHTS = [0.2126, 0.7152, 0.0722];

it('measures luminance of what a level can hold, before it is rounded, weighed by the alpha that was filtered', () => {
  const cases = fc.tuple(
    seeds,
    smallExtents,
    channelCounts,
    depths,
    kernels([...LINEAR, 'nearest']),
    wraps,
    oneOf([false, true]),
  );
  holds(cases, 60, ([seed, extent, channels, depth, kernel, wrap, keepCoverage]) => {
    const noise = noiseRaster(seed, extent, channels, depth, 'noise');
    const raster = channels % 2 === 0 ? withAlpha(noise, seed, 3, 4) : noise;
    const one = treatment({
      kernel: { minify: kernel, magnify: kernel },
      derive: kernel.name === 'nearest' ? 'base' : 'previous',
      wrap,
      alpha: { use: 'mask', keepCoverage: keepCoverage && kernel.name !== 'nearest' },
    });
    const reference = referenceChain(raster, one);
    for (const { level, light } of buildChain(raster, one).images) {
      if (light === undefined || level === undefined) throw new TypeError('Expected light');
      const { carried } = reference[level];
      let sum = 0;
      let weight = 0;
      for (let texel = 0; texel < carried.width * carried.height; texel++) {
        const at = texel * channels;
        const held = (value: number, bound: number): number => Math.min(bound, Math.max(0, value));
        const share = channels % 2 === 0 ? held(carried.values[at + channels - 1], 1) : 1;
        // Light is carried times alpha.
        const front = channels >= 3 ? [0, 1, 2] : [0, 0, 0];
        sum += front.reduce((total, c, i) => total + held(carried.values[at + c], share) * WEIGHTS[i], 0);
        weight += share;
      }
      // Six digits are written; float32 keeps seven.
      expect(Math.abs(light.weight - weight)).toBeLessThanOrEqual(1e-6 * (1 + weight));
      expect(Math.abs(light.light - sum)).toBeLessThanOrEqual(1e-6 * (1 + sum));
    }
  });
});

it('keeps the mean luminance of a checkerboard down the chain', () => {
  const raster = noiseRaster(4, { width: 64, height: 64 }, 3, 16, 'extremes');
  const { images } = buildChain(raster, treatment({ kernel: both('box') }));
  const means = images.map(({ light }) => (light?.light ?? 0) / (light?.weight ?? 1));
  // Stored in 16 bits: half a code of sRGB at middle gray is 1e-5 of light.
  for (const mean of means) expect(Math.abs(mean - means[0])).toBeLessThan(2e-5);
});
