import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { kernels, LINEAR, seeds, wraps } from '../fixtures/arbitrary.ts';
import { type noiseRaster, numbers } from '../fixtures/noise.ts';
import { lone, painted } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { countedCoverage, coverageOf, passingCode, searchScale } from '../reference/coverage.ts';
import { builders } from './builders.ts';
import { holds } from './holds.ts';

describe('the reference', () => {
  it('passes codes as glTF 2.0 compares them, or strictly', () => {
    expect(passingCode({ cutoff: 0.5, test: '>=' }, 255)).toBe(128);
    expect(passingCode({ cutoff: 0.5, test: '>' }, 255)).toBe(128);
    expect(passingCode({ cutoff: 0.2, test: '>=' }, 255)).toBe(51);
    expect(passingCode({ cutoff: 0.2, test: '>' }, 255)).toBe(52);
    expect(passingCode({ cutoff: 0.5, test: '>=' }, 65535)).toBe(32768);
  });

  it('finds the scale of a row of distinct alphas', () => {
    // Castano 2010: half of these pass a cutoff of 1/2 at any scale in [1.6667, 2).
    const alphas = [0.1, 0.15, 0.2, 0.25, 0.3, 0.35, 0.4, 0.45];
    const { scale, coverage } = searchScale((s) => alphas.filter((a) => s * a >= 0.5).length / 8, 0.5);
    expect(coverage).toBe(0.5);
    expect(scale).toBeGreaterThanOrEqual(1.6666666);
    expect(scale).toBeLessThan(2);
  });
});

describe.each(builders)('$name', (builder) => {
  it.each([
    // Share of 2 x 2 blocks of a Bernoulli alpha whose mean is at least half: binomial, worked out exactly. Stored in 8
    // bits the mean of 2 in 4, 127.5, becomes 128 and passes both tests.
    { ones: 1, of: 4, share: 67 / 256 },
    { ones: 2, of: 5, share: 328 / 625 },
    { ones: 3, of: 4, share: 243 / 256 },
  ])('leaves the share of blocks that the binomial gives for $ones in $of', ({ ones, of, share }) => {
    // Every block of four draws from `of` equally likely values, once: of^4 blocks in a row.
    const image = painted({ width: 2 * of ** 4, height: 2 }, 2, 8, (x, y) => {
      const block = Math.floor(x / 2);
      const draw = Math.floor(block / of ** ((x % 2) + 2 * y)) % of;
      return [128, draw < ones ? 255 : 0];
    });
    const level = lone(builder.levels(image, treatment({ kernel: both('box') }))[1], 1);
    for (const test of ['>=', '>'] as const) {
      const passing = passingCode({ cutoff: 0.5, test }, 255);
      expect(countedCoverage({ ...level, wrap: { x: 'repeat', y: 'repeat' } }, passing)).toBe(share);
    }
  });

  it('keeps coverage as a sampler sees it, wherever distinct alphas let it', () => {
    holds(fc.tuple(seeds, kernels(LINEAR), wraps), 6, ([seed, kernel, wrap]) => {
      const image = leaf(seed);
      const one = treatment({
        kernel: { minify: kernel, magnify: kernel },
        wrap,
        alpha: { use: 'mask', keepCoverage: true },
      });
      const levels = builder.levels(image, one);
      const seen = levels.map((level) => coverageOf({ ...lone(level, 3), wrap }, 128));
      // Down to 8 x 8. Codes are whole numbers, so a step of the scale may move several samples at once: 16 samples a
      // texel, one code apart at most a texel's worth on each of the level's contour texels; 5 % in all on this image.
      levels.forEach((level, i) => {
        if (level.extent.width >= 8) expect(Math.abs(seen[i] - seen[0])).toBeLessThan(0.05);
      });
    });
  });
});

/** Random discs on a clear ground, as leaves are cut out. */
function leaf(seed: number): ReturnType<typeof noiseRaster> {
  const next = numbers(seed);
  const discs = Array.from({ length: 14 }, () => [next() % 64, next() % 64, 3 + (next() % 5)]);
  return painted({ width: 64, height: 64 }, 4, 8, (x, y) => {
    const inside = discs.some(([u, v, radius]) => (x - u) ** 2 + (y - v) ** 2 < radius ** 2);
    return [40, 120, 30, inside ? 255 : 0];
  });
}
