import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  channelCounts,
  depths,
  extents,
  kernels,
  LINEAR,
  oneOf,
  rasters,
  sizes,
  smallExtents,
  wraps,
} from '../fixtures/arbitrary.ts';
import { flat, lone, mirrored, turned } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { builders } from './builders.ts';
import { holds } from './holds.ts';

// Laws of a whole chain, in codes. Alpha is data here; laws of opacity stand in alpha.test.ts.

const MINIFYING = [...LINEAR, 'nearest'] as const;

describe.each(builders)('$name', (builder) => {
  it.each([
    // Vulkan, "Image Mip Level Sizing": floor(log2(max(w, h))) + 1 levels.
    [1, 1, 1],
    [2, 1, 2],
    [3, 3, 2],
    [5, 3, 3],
    [255, 1, 8],
    [256, 16, 9],
    [257, 16, 9],
    [1000, 6, 10],
    [1024, 1, 11],
  ])('a chain of %i x %i has %i levels', (width, height, count) => {
    const levels = builder.levels(flat({ width, height }, 8, [7]), treatment({ kernel: both('box') }));
    expect(levels.length).toBe(count);
  });

  it('halves 57 x 43 by rounding down', () => {
    const levels = builder.levels(flat({ width: 57, height: 43 }, 8, [7]), treatment({ kernel: both('box') }));
    expect(levels.map(({ extent }) => [extent.width, extent.height])).toEqual([
      [57, 43],
      [28, 21],
      [14, 10],
      [7, 5],
      [3, 2],
      [1, 1],
    ]);
  });

  it('holds the source in level 0, bit for bit', () => {
    const cases = fc.tuple(
      rasters(smallExtents, 'noise'),
      kernels(MINIFYING),
      wraps,
      oneOf(['opacity', 'data'] as const),
    );
    holds(cases, 60, ([raster, kernel, wrap, use]) => {
      const [base] = builder.levels(
        raster,
        treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use } }),
      );
      expect(base.codes).toEqual(raster.codes);
      expect(base.depth).toBe(raster.depth);
    });
  });

  it('keeps a constant image constant at every level', () => {
    const cases = fc.tuple(
      builder.name === 'engine' ? extents : smallExtents,
      channelCounts,
      depths,
      sizes,
      kernels(MINIFYING),
      wraps,
      oneOf(['color', 'data'] as const),
    );
    holds(cases, 80, ([extent, channels, depth, code, kernel, wrap, content]) => {
      const color = [0, 1, 2, 3]
        .slice(0, channels)
        .map((c) => (depth === 8 ? (code * 4 + c * 50) % 256 : (code * 1021 + c * 9000) % 65536));
      const base = flat(extent, depth, color);
      const one = treatment({ content, kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } });
      for (const level of builder.levels(base, one)) {
        expect(level.codes).toEqual(flat(level.extent, depth, color).codes);
      }
    });
  });

  it('mirrors with its source, code by code', () => {
    holds(fc.tuple(rasters(smallExtents, 'noise'), kernels(LINEAR), wraps), 60, ([raster, kernel, wrap]) => {
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } });
      const levels = builder.levels(raster, one).map(mirrored);
      builder.levels(mirrored(raster), one).forEach((level, i) => {
        // The reference adds its taps from the left, so rounding may differ where a value lies on a boundary.
        if (builder.name === 'reference') expect(worstDifference(level.codes, levels[i].codes)).toBeLessThanOrEqual(1);
        else expect(level.codes).toEqual(levels[i].codes);
      });
    });
  });

  it('turns with its source, within one code', () => {
    holds(fc.tuple(rasters(smallExtents, 'noise'), kernels(LINEAR), wraps), 60, ([raster, kernel, wrap]) => {
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } });
      const levels = builder.levels(raster, one);
      builder.levels(turned(raster), { ...one, wrap: { x: wrap.y, y: wrap.x } }).forEach((level, i) => {
        expect(worstDifference(turned(level).codes, levels[i].codes)).toBeLessThanOrEqual(1);
      });
    });
  });

  it('filters each channel as if it stood alone', () => {
    const cases = fc.tuple(
      rasters(smallExtents, 'noise'),
      kernels(MINIFYING),
      wraps,
      oneOf(['color', 'data', 'height'] as const),
    );
    holds(cases, 60, ([raster, kernel, wrap, content]) => {
      const one = treatment({ content, kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use: 'data' } });
      const levels = builder.levels(raster, one);
      for (let c = 0; c < raster.channels; c++) {
        const alpha = raster.channels % 2 === 0 && c === raster.channels - 1;
        const alone = builder.levels(lone(raster, c), alpha ? { ...one, transfer: 'linear' } : one);
        expect(alone.map(({ codes }) => codes)).toEqual(levels.map((level) => lone(level, c).codes));
      }
    });
  });

  it('clips what overshoots only when it is stored: the next level comes from the unclipped level', () => {
    // A one-texel white line: Lanczos goes below black beside it. Clamped there, level 2 would be too bright.
    const line = flat({ width: 64, height: 1 }, 16, [0]);
    line.codes[31] = 65535;
    const one = treatment({ content: 'data', kernel: both('lanczos3'), wrap: { x: 'repeat', y: 'repeat' } });
    const sums = builder.levels(line, one).map(({ codes }) => Array.from(codes).reduce((sum, code) => sum + code, 0));
    // The last level is the mean of all that was carried, 65535 / 64, where nothing was lost; rounding is half a code.
    expect(Math.abs(sums[6] - 65535 / 64)).toBeLessThanOrEqual(0.5 + 1e-2);
  });

  it('derives every level from the base where the treatment says so', () => {
    holds(fc.tuple(rasters(smallExtents, 'middle'), kernels(LINEAR), wraps), 30, ([raster, kernel, wrap]) => {
      const one = treatment({
        kernel: { minify: kernel, magnify: kernel },
        wrap,
        alpha: { use: 'data' },
        derive: 'base',
      });
      const levels = builder.levels(raster, one);
      const last = levels[levels.length - 1];
      if (kernel.name === 'box') {
        // The last level of a box chain from the base is the plain mean, whatever the extent.
        const step = builder.levels(raster, { ...one, transfer: 'linear' });
        const sum = Array.from(raster.codes).reduce(
          (total, code, i) => total + (i % raster.channels === 0 ? code : 0),
          0,
        );
        const mean = sum / (raster.extent.width * raster.extent.height);
        expect(Math.abs(step[step.length - 1].codes[0] - mean)).toBeLessThanOrEqual(0.5 + 1e-2);
      }
      expect(last.extent).toEqual({ width: 1, height: 1 });
    });
  });
});

function worstDifference(a: ArrayLike<number>, b: ArrayLike<number>): number {
  expect(a.length).toBe(b.length);
  let worst = 0;
  for (let i = 0; i < a.length; i++) worst = Math.max(worst, Math.abs(a[i] - b[i]));
  return worst;
}
