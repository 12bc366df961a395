import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { depths, kernels, LINEAR, oneOf, POSITIVE, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { flat, lone, painted, picture, texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { overTexel } from '../reference/fill.ts';
import { builders } from './builders.ts';
import { holds } from './holds.ts';

describe.each(builders)('$name', (builder) => {
  it('weighs color by alpha: transparent red beside opaque blue is half-transparent blue', () => {
    const pair = picture({ width: 2, height: 1 }, 4, 8, [255, 0, 0, 0, 0, 0, 255, 255]);
    // Alpha is 127.5 and rounds to the even code.
    expect(Array.from(builder.levels(pair, treatment({ kernel: both('box') }))[1].codes)).toEqual([0, 0, 255, 128]);
  });

  it('filters straight colors where the treatment says so', () => {
    const pair = picture({ width: 2, height: 1 }, 4, 8, [255, 0, 0, 0, 0, 0, 255, 255]);
    const straight = treatment({ kernel: both('box'), alpha: { weight: false } });
    expect(Array.from(builder.levels(pair, straight)[1].codes)).toEqual([188, 0, 188, 128]);
  });

  it('keeps color at low alpha', () => {
    // A library that premultiplies in 8 bits brings (200, 100, 50, 3) back as (170, 85, 0, 3).
    holds(fc.tuple(smallExtents, kernels(LINEAR), wraps), 30, ([extent, kernel, wrap]) => {
      const faint = flat(extent, 8, [200, 100, 50, 3]);
      for (const level of builder.levels(faint, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap }))) {
        expect(level.codes).toEqual(flat(level.extent, 8, [200, 100, 50, 3]).codes);
      }
    });
  });

  it('filters alpha itself as a plain linear channel', () => {
    const cases = fc.tuple(seeds, smallExtents, depths, kernels(LINEAR), wraps);
    holds(cases, 40, ([seed, extent, depth, kernel, wrap]) => {
      const image = withAlpha(noiseRaster(seed, extent, 4, depth, 'noise'), seed, 4, 3);
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap });
      const alone = builder.levels(lone(image, 3), { ...one, content: 'data', transfer: 'linear' });
      const alphas = builder.levels(image, one).map((level) => lone(level, 3).codes);
      expect(alphas).toEqual(alone.map(({ codes }) => codes));
    });
  });

  it('commutes with drawing over a constant backdrop', () => {
    const cases = fc.tuple(seeds, smallExtents, kernels(POSITIVE), wraps, fc.integer({ min: 0, max: 65535 }));
    holds(cases, 50, ([seed, extent, kernel, wrap, backdrop]) => {
      // Linear 16-bit codes; kernels that stay in range, so nothing is clipped.
      const image = withAlpha(noiseRaster(seed, extent, 4, 16, 'noise'), seed, 4, 3);
      const one = treatment({ transfer: 'linear', kernel: { minify: kernel, magnify: kernel }, wrap });
      const drawnLast = builder.levels(image, one).map((level) => over(level, backdrop));
      const drawnFirst = builder.levels(over(image, backdrop), { ...one, alpha: { ...one.alpha, use: 'none' } });
      drawnFirst.forEach((level, i) => {
        if (i === 0) return;
        // Rounding in codes: color and alpha of the level at most 1/2 + 1/2, both compositions 1/2 each.
        for (let at = 0; at < level.codes.length; at++) {
          expect(Math.abs(level.codes[at] - drawnLast[i].codes[at])).toBeLessThanOrEqual(2);
        }
      });
    });
  });

  it('gives texels of alpha 0 the color over them, so that none is black', () => {
    const cases = fc.tuple(seeds, smallExtents, depths, kernels(LINEAR), wraps, oneOf(['hidden', 'all'] as const));
    holds(cases, 60, ([seed, extent, depth, kernel, wrap, fill]) => {
      const image = withAlpha(noiseRaster(seed, extent, 4, depth, 'middle'), seed, 8, 1);
      const levels = builder.levels(image, treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, fill }));
      levels.forEach((level, i) => {
        if (i === levels.length - 1 || (i === 0 && fill === 'hidden')) return;
        const coarse = levels[i + 1];
        for (let texel = 0; texel < level.extent.width * level.extent.height; texel++) {
          const [x, y] = [texel % level.extent.width, Math.floor(texel / level.extent.width)];
          const codes = texelAt(level, x, y);
          if (codes[3] !== 0) continue;
          const at = overTexel(level.extent, coarse.extent, x, y);
          const above = texelAt(coarse, at % coarse.extent.width, Math.floor(at / coarse.extent.width));
          expect(codes.slice(0, 3)).toEqual(above.slice(0, 3));
        }
      });
      if (image.codes.some((code, i) => i % 4 === 3 && code !== 0) && ['box', 'triangle'].includes(kernel.name)) {
        // Visible colors lie between 30 % and 70 %: black under alpha 0 could only come from nowhere.
        for (const level of levels.slice(1)) {
          for (let at = 0; at < level.codes.length; at += 4) expect(level.codes[at]).toBeGreaterThan(0);
        }
      }
    });
  });

  it('writes an alpha that nobody reads as opaque, and weighs nothing by it', () => {
    const pair = picture({ width: 2, height: 1 }, 4, 8, [255, 0, 0, 0, 0, 0, 255, 255]);
    const [, level] = builder.levels(pair, treatment({ kernel: both('box'), alpha: { use: 'none' } }));
    expect(Array.from(level.codes)).toEqual([188, 0, 188, 255]);
  });

  it('leaves the hidden colors of level 0 alone unless it is told to fill all', () => {
    const image = painted({ width: 4, height: 4 }, 4, 8, (x, y) => (x + y === 0 ? [200, 100, 50, 255] : [9, 8, 7, 0]));
    const one = treatment({ kernel: both('box') });
    expect(builder.levels(image, one)[0].codes).toEqual(image.codes);
    const all = builder.levels(image, { ...one, fill: 'all' })[0];
    for (let texel = 0; texel < 16; texel++) {
      const alpha = texel === 0 ? 255 : 0;
      expect(Array.from(all.codes.subarray(texel * 4, texel * 4 + 4))).toEqual([200, 100, 50, alpha]);
    }
  });

  it('writes black under alpha 0 where the whole image is transparent, or where fill is off', () => {
    const clear = flat({ width: 5, height: 3 }, 8, [9, 8, 7, 0]);
    for (const level of builder.levels(clear, treatment({ kernel: both('box') })).slice(1)) {
      expect(level.codes.every((code) => code === 0)).toBe(true);
    }
    const corner = painted({ width: 4, height: 4 }, 4, 8, (x, y) => (x + y === 0 ? [200, 100, 50, 255] : [9, 8, 7, 0]));
    const unfilled = builder.levels(corner, treatment({ kernel: both('box'), fill: 'none' }))[1];
    expect(Array.from(unfilled.codes)).toEqual([200, 100, 50, 64, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0]);
  });
});

/** Drawn over an opaque gray backdrop, in linear codes: co = cs as + cb (1 - as) (Porter and Duff 1984). */
function over(image: StraightRaster, backdrop: number): StraightRaster {
  return painted(image.extent, 3, image.depth, (x, y) => {
    const codes = texelAt(image, x, y);
    const alpha = codes[3] / 65535;
    return codes.slice(0, 3).map((code) => Math.round(code * alpha + backdrop * (1 - alpha)));
  });
}
