import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { measureCoverage } from '../../core/chain/coverage.ts';
import { maxCode } from '../../core/raster/raster.ts';
import { depths, kernels, LINEAR, oneOf, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, numbers, withAlpha } from '../fixtures/noise.ts';
import { lone, painted } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { referenceChain } from '../reference/chain.ts';
import { countedCoverage, coverageOf, passingCode, sampledCoverage, searchScale } from '../reference/coverage.ts';
import { builders, engineLevels, straight } from './builders.ts';
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
    holds(fc.tuple(seeds, kernels(LINEAR), wraps), builder.name === 'engine' ? 8 : 2, ([seed, kernel, wrap]) => {
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

const masks = fc.record({
  seed: seeds,
  extent: smallExtents,
  depth: depths,
  kernel: kernels(LINEAR),
  wrap: wraps,
  // 0.2 of 255 and of 65535 is a whole code: there the two tests part.
  cutoff: oneOf([0.1, 0.2, 0.25, 0.5, 0.75, 0.9]),
  test: oneOf(['>=', '>'] as const),
});

describe('the engine', () => {
  it('says of each level what a sampler sees in its codes', () => {
    holds(masks, 50, ({ seed, extent, depth, kernel, wrap, cutoff, test }) => {
      const image = withAlpha(noiseRaster(seed, extent, 4, depth, 'noise'), seed, 3, 3);
      for (const keepCoverage of [false, true]) {
        const alpha = { use: 'mask', keepCoverage, cutoff, test } as const;
        const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha });
        const passing = passingCode({ cutoff, test }, maxCode(depth));
        const { images } = buildChain(image, one);
        for (const level of images) {
          const seen = coverageOf({ ...lone(straight(level.raster), 3), wrap }, passing);
          expect(level.coverage).toBe(seen);
          if (level.coverageScale === undefined) continue;
          expect(Math.abs(level.coverageScale.residual - (seen - (images[0].coverage ?? 0)))).toBeLessThan(1e-12);
        }
        expect(images[0].coverageScale).toBeUndefined();
        expect(images.length < 2 || (images[1].coverageScale !== undefined) === keepCoverage).toBe(true);
      }
    });
  });

  it('comes as near to the coverage of level 0 as the reference does', () => {
    holds(masks, 40, ({ seed, extent, depth, kernel, wrap, cutoff, test }) => {
      const image = withAlpha(noiseRaster(seed, extent, 4, depth, 'noise'), seed, 3, 3);
      const alpha = { use: 'mask', keepCoverage: true, cutoff, test } as const;
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha });
      const reference = referenceChain(image, one);
      const wanted = reference[0].coverage ?? 0;
      for (const { level, coverageScale, extent: own } of buildChain(image, one).images) {
        if (coverageScale === undefined || level === undefined) continue;
        const found = Math.abs(coverageScale.residual);
        const best = Math.abs((reference[level].coverage ?? 0) - wanted);
        // The engine holds alpha in 16 bits while it searches: a sample or two on the edge may fall the other way.
        expect(Math.abs(found - best)).toBeLessThanOrEqual(2 / (own.width * own.height * 16));
      }
    });
  });

  it('scales stored alpha alone: colors and the next level come from the unscaled floats', () => {
    holds(masks, 40, ({ seed, extent, depth, kernel, wrap, cutoff }) => {
      const image = withAlpha(noiseRaster(seed, extent, 4, depth, 'middle'), seed, 2, 4);
      const one = treatment({
        kernel: { minify: kernel, magnify: kernel },
        wrap,
        fill: 'none',
        alpha: { use: 'mask', cutoff },
      });
      const plain = referenceChain(image, one);
      const kept = buildChain(image, { ...one, alpha: { ...one.alpha, keepCoverage: true } }).images;
      const codes = engineLevels(buildChain(image, one));
      kept.forEach(({ raster, coverageScale }, i) => {
        const level = straight(raster);
        const scale = coverageScale?.scale ?? 1;
        const max = maxCode(depth);
        for (let at = 0; at < level.codes.length; at++) {
          if (at % 4 !== 3) expect(level.codes[at]).toBe(codes[i].codes[at]);
          else {
            const unscaled = Math.min(1, Math.max(0, plain[i].carried.values[at]));
            const exact = Math.min(max, scale * unscaled * max);
            // The 16-bit plane is half a step off, times the scale; 16 at most.
            expect(Math.abs(level.codes[at] - exact)).toBeLessThanOrEqual(
              0.5 + (scale * max) / 65535 / 2 + 1e-2 * scale,
            );
          }
        }
      });
    });
  });

  it('calls it a tie where no scale can match, and keeps the nearer side', () => {
    // One opaque texel in each 2 x 2 block: level 1 is one alpha, 64, everywhere. Coverage is all or nothing.
    const image = painted({ width: 16, height: 16 }, 4, 8, (x, y) => [9, 9, 9, x % 2 === 0 && y % 2 === 0 ? 255 : 0]);
    const repeat = { x: 'repeat', y: 'repeat' } as const;
    const one = treatment({ kernel: both('box'), wrap: repeat, alpha: { use: 'mask', keepCoverage: true } });
    const [base, level] = buildChain(image, one).images;
    expect(level.coverageScale?.tie).toBe(true);
    expect([0, 1]).toContain(level.coverage);
    expect(Math.abs((level.coverage ?? 0) - (base.coverage ?? 0))).toBeLessThanOrEqual(0.5);
  });

  it('counts texels on levels of more than 65 536, and samples the rest', () => {
    const image = painted({ width: 257, height: 256 }, 2, 8, (x, y) => [9, (x * 7 + y * 13) % 5 === 0 ? 255 : 0]);
    const one = treatment({ kernel: both('triangle'), alpha: { use: 'mask' } });
    const [base, level] = buildChain(image, one).images;
    const plane = { ...lone(image, 1), wrap: one.wrap };
    expect(base.coverage).toBe(countedCoverage(plane, 128));
    expect(level.coverage).toBe(sampledCoverage({ ...lone(straight(level.raster), 1), wrap: one.wrap }, 128));
  });

  it('samples along edges what the reference samples everywhere', () => {
    // Patches of codes about the passing one, as masks are made of: most texels have only neighbors that decide alike.
    holds(
      fc.tuple(seeds, smallExtents, wraps, fc.integer({ min: 0, max: 255 })),
      200,
      ([seed, extent, wrap, passing]) => {
        const next = numbers(seed);
        const near = [0, Math.max(0, passing - 1), passing, Math.min(255, passing + 1), 255];
        const patches = Array.from({ length: 16 }, () => near[next() % near.length]);
        const codes = Uint8Array.from({ length: extent.width * extent.height }, (_, i) => {
          const [x, y] = [i % extent.width, Math.floor(i / extent.width)];
          return patches[((x >> 2) + (y >> 2) * 5) % patches.length];
        });
        const plane = { extent, depth: 8, codes, stride: 1, start: 0 } as const;
        expect(measureCoverage(plane, passing, wrap)).toBe(sampledCoverage({ extent, codes, wrap }, passing));
      },
    );
  });

  it('reads outside an image as its wrap says', () => {
    // Opaque at the left edge only: with a transparent border the edge itself fades.
    const image = painted({ width: 4, height: 1 }, 4, 8, (x) => [9, 9, 9, x === 0 ? 255 : 0]);
    const coverage = (mode: 'clamp-to-edge' | 'repeat' | 'mirror-repeat' | 'clamp-to-border'): number | undefined =>
      buildChain(image, treatment({ wrap: { x: mode, y: 'clamp-to-edge' }, alpha: { use: 'mask' } })).images[0]
        .coverage;
    // Of the four samples across texel 0 the outer two lie towards its neighbor outside, the others reach 5/8 and 7/8 of
    // it; of those across texel 1 the nearest sees 3/8 of it.
    expect(coverage('clamp-to-edge')).toBe(4 / 16);
    expect(coverage('mirror-repeat')).toBe(4 / 16);
    expect(coverage('repeat')).toBe(4 / 16);
    expect(coverage('clamp-to-border')).toBe(4 / 16);
    const high = { use: 'mask', cutoff: 0.75 } as const;
    const inner = (mode: 'clamp-to-edge' | 'clamp-to-border'): number | undefined =>
      buildChain(image, treatment({ wrap: { x: mode, y: 'clamp-to-edge' }, alpha: high })).images[0].coverage;
    // Three quarters: 5/8 fails, 7/8 passes; the outer two pass where the edge goes on.
    expect(inner('clamp-to-edge')).toBe(3 / 16);
    expect(inner('clamp-to-border')).toBe(2 / 16);
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
