import fc from 'fast-check';
import { afterAll, describe, expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { maxCode, type StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import {
  depths,
  extents,
  kernels,
  LINEAR,
  oneOf,
  POSITIVE,
  rasters,
  seeds,
  smallExtents,
  wraps,
} from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { type ReferenceLevel, referenceChain } from '../reference/chain.ts';
import { engineLevels } from './builders.ts';
import { holds } from './holds.ts';

// The engine's codes against double precision. A code that differs does so by one, and only where the exact value lies
// this close to the boundary between the two codes.
const BOUNDARY = { 8: 1e-3, 16: 0.05 } as const;

const tally = { codes: 0, differing: 0 };

afterAll(() => {
  const share = ((tally.differing / tally.codes) * 1e6).toFixed(1);
  console.log(
    `accuracy: ${tally.differing} of ${tally.codes} codes differ from double precision (${share} in a million)`,
  );
});

describe('codes equal those of double precision but near a boundary', () => {
  it.each(['color', 'data', 'height'] as const)('%s, all channels', (content) => {
    holds(fc.tuple(rasters(smallExtents, 'noise'), kernels(LINEAR), wraps), 60, ([raster, kernel, wrap]) => {
      compare(
        raster,
        treatment({ content, kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } }),
      );
    });
  });

  it('every extent up to 64 x 64', () => {
    holds(fc.tuple(rasters(extents, 'noise'), kernels(LINEAR), wraps), 25, ([raster, kernel, wrap]) => {
      compare(raster, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } }));
    });
  });

  it('the hardest contrast, and both ways to derive', () => {
    const cases = fc.tuple(
      rasters(smallExtents, 'extremes'),
      kernels(LINEAR),
      wraps,
      oneOf(['previous', 'base'] as const),
    );
    holds(cases, 60, ([raster, kernel, wrap, derive]) => {
      compare(raster, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, derive, alpha: { use: 'data' } }));
    });
  });

  it('light: code, a transfer a channel, and a depth that grows', () => {
    const cases = fc.tuple(rasters(smallExtents, 'noise'), kernels(LINEAR), wraps);
    holds(cases, 40, ([raster, kernel, wrap]) => {
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } });
      compare(raster, { ...one, light: 'code' });
      compare(raster, { ...one, transfer: ['linear', 'srgb', 'linear', 'linear'] });
      compare(raster, { ...one, depth: 16 });
      compare(raster, { ...one, depth: 8 });
    });
  });

  it('color under opacity', () => {
    const cases = fc.tuple(seeds, smallExtents, oneOf([2, 4] as const), depths, kernels(POSITIVE), wraps);
    holds(cases, 60, ([seed, extent, channels, depth, kernel, wrap]) => {
      const raster = withAlpha(noiseRaster(seed, extent, channels, depth, 'noise'), seed, 3, 3);
      for (const fill of ['hidden', 'none'] as const) {
        compare(raster, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, fill }));
      }
    });
  });

  it('color under opacity with negative lobes', () => {
    const cases = fc.tuple(seeds, smallExtents, depths, kernels(LINEAR), wraps);
    holds(cases, 60, ([seed, extent, depth, kernel, wrap]) => {
      const raster = withAlpha(noiseRaster(seed, extent, 4, depth, 'middle'), seed, 2, 6);
      compare(raster, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap }));
    });
  });

  it('a border round an image', () => {
    const cases = fc.tuple(seeds, smallExtents, depths, kernels(POSITIVE));
    holds(cases, 40, ([seed, extent, depth, kernel]) => {
      const raster = withAlpha(noiseRaster(seed, extent, 4, depth, 'noise'), seed, 2, 6);
      const wrap = { x: 'clamp-to-border', y: 'clamp-to-border' } as const;
      compare(raster, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap }));
    });
  });

  it('normals', () => {
    const cases = fc.tuple(
      rasters(smallExtents, 'noise', oneOf([2, 3, 4] as const)),
      kernels(LINEAR),
      wraps,
      oneOf([2, 3] as const),
    );
    holds(cases, 60, ([raster, kernel, wrap, count]) => {
      const one = treatment({
        content: 'normal',
        kernel: { minify: kernel, magnify: kernel },
        wrap,
        normal: { count },
      });
      compare(raster, { ...one, alpha: { ...one.alpha, use: 'data' } });
    });
  });

  it('clipped samples are counted', () => {
    holds(fc.tuple(rasters(smallExtents, 'extremes'), kernels(LINEAR), wraps), 40, ([raster, kernel, wrap]) => {
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } });
      const levels = referenceChain(raster, one);
      const images = buildChain(raster, one).images;
      levels.slice(1).forEach(({ straight, channels }, i) => {
        const { clipped } = images[i + 1];
        for (let c = 0; c < channels; c++) {
          const values = Array.from(straight).filter((_, at) => at % channels === c);
          // What lies outside by less than float32 sums may err counts either way.
          for (const [side, beyond] of [
            [clipped.below[c], (slack: number) => values.filter((value) => value < -slack).length],
            [clipped.above[c], (slack: number) => values.filter((value) => value > 1 + slack).length],
          ] as const) {
            expect(side).toBeGreaterThanOrEqual(beyond(2 ** -19));
            expect(side).toBeLessThanOrEqual(beyond(0));
          }
        }
      });
    });
  });
});

it.each(['clamp-to-edge', 'repeat', 'mirror-repeat'] as const)('streams a larger image with %s', (wrap) => {
  // So many rows that few of them are held at a time, and the first come back at the end where the image repeats.
  const raster = noiseRaster(2, { width: 103, height: 258 }, 4, 8, 'noise');
  for (const name of ['box', 'kaiser', 'mitchell']) {
    compare(raster, treatment({ kernel: both(name), wrap: { x: wrap, y: wrap }, alpha: { use: 'data' } }));
  }
});

function compare(raster: StraightRaster, one: Treatment): void {
  const levels = engineLevels(buildChain(raster, one));
  const reference = referenceChain(raster, one);
  expect(levels.length).toBe(reference.length);
  levels.forEach((level, i) => {
    expect(level.extent).toEqual(reference[i].extent);
    expect(level.depth).toBe(reference[i].depth);
    const positive = (POSITIVE as readonly string[]).includes(one.kernel.minify.name);
    const fault = firstFault(
      level,
      reference[i],
      i === 0 ? null : alphaOf(raster, one),
      positive ? 'relative' : 'absolute',
    );
    expect(
      fault,
      `level ${i} of ${JSON.stringify({ ...raster.extent, kernel: one.kernel.minify, wrap: one.wrap })}`,
    ).toBeNull();
  });
}

function alphaOf(raster: StraightRaster, one: Treatment): number | null {
  const used = one.alpha.use === 'opacity' || one.alpha.use === 'mask';
  return raster.channels % 2 === 0 && used ? raster.channels - 1 : null;
}

/** The first code that breaks the rule, in words; null where none does. */
function firstFault(
  level: StraightRaster,
  reference: ReferenceLevel,
  alpha: number | null,
  error: 'relative' | 'absolute',
): string | null {
  const { codes, channels, depth } = level;
  for (let at = 0; at < codes.length; at++) {
    const fraction = reference.fractions[at];
    const texel = at - (at % channels);
    const underAlpha = alpha !== null && at % channels !== alpha;
    // Color where the stored alpha is 0 is the fill's, or black: alpha.test.ts has its laws.
    if (underAlpha && (codes[texel + alpha] === 0 || Number.isNaN(fraction))) continue;
    tally.codes++;
    if (codes[at] === Math.round(fraction) || codes[at] === reference.codes[at]) continue;
    tally.differing++;
    const a = alpha === null ? maxCode(depth) : reference.fractions[texel + alpha];
    // Where positive and negative taps cancel, the error of a float32 sum stays while alpha gets small, and dividing by
    // alpha enlarges it. Sums of positive taps keep their relative error.
    const enlarged = underAlpha && error === 'absolute' ? Math.max(1, maxCode(depth) / a) : 1;
    const allowed = BOUNDARY[depth] * enlarged;
    const distance = Math.abs(Math.abs(codes[at] - fraction) - 0.5);
    if (Math.abs(codes[at] - reference.codes[at]) > 1 || distance > allowed) {
      return `code ${codes[at]} at ${at} where the exact value is ${fraction} and alpha is ${a}`;
    }
  }
  return null;
}
