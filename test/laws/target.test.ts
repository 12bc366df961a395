import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { kernels, LINEAR, oneOf, rasters, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted, texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { cellPlace, scaledExtent } from '../reference/extent.ts';
import { resampleDoubles } from '../reference/resample.ts';
import { roundCode } from '../reference/transfer.ts';
import { engineTarget, straight } from './builders.ts';
import { holds } from './holds.ts';

describe('a scale', () => {
  it.each([
    // max(1, floor(s n + 1/2)) on each axis.
    [16, 9, 2, 32, 18],
    [25, 25, 1.5, 38, 38],
    [5, 3, 0.5, 3, 2],
    [1, 1, 0.1, 1, 1],
    [7, 100, 0.05, 1, 5],
  ])('of %i x %i by %f is %i x %i', (width, height, scale, wide, high) => {
    expect(scaledExtent({ width, height }, scale)).toEqual({ width: wide, height: high });
    const one = treatment({ content: 'data', kernel: both('box'), levels: 'none', targets: [{ name: 't', scale }] });
    expect(engineTarget(noiseRaster(1, { width, height }, 1, 8, 'noise'), one, 't').extent).toEqual({
      width: wide,
      height: high,
    });
  });

  it('is one resample from level 0, as the reference makes it, with the true ratio of each axis', () => {
    const data = rasters(smallExtents, 'noise', oneOf([1, 3] as const));
    holds(fc.tuple(data, smallExtents, kernels([...LINEAR, 'monotone']), wraps), 80, ([raster, to, kernel, wrap]) => {
      const magnifies = to.width >= raster.extent.width && to.height >= raster.extent.height;
      if (kernel.name === 'monotone' && !magnifies) return;
      const kept = kernel.name === 'monotone' ? both('box').minify : kernel;
      const targets = [{ name: 't', extent: [to.width, to.height] as const }];
      const one = treatment({
        content: 'data',
        kernel: { minify: kept, magnify: kernel },
        wrap,
        levels: 'none',
        targets,
      });
      const target = straight(engineTarget(raster, one, 't').raster);
      const { width, height } = raster.extent;
      const image = { width, height, channels: raster.channels, values: Float64Array.from(raster.codes) };
      const expected = resampleDoubles(image, to, one.kernel, wrap);
      const max = raster.depth === 8 ? 255 : 65535;
      target.codes.forEach((code, at) => {
        const exact = Math.min(max, Math.max(0, expected.values[at]));
        const near = raster.depth === 8 ? 1e-3 : 0.05;
        if (code !== roundCode(exact, 'linear')) expect(Math.abs(code - exact)).toBeLessThanOrEqual(0.5 + near);
      });
    });
  });
});

describe('a cell', () => {
  it('holds the picture scaled to fit, in its middle, and nothing round it', () => {
    holds(fc.tuple(seeds, smallExtents, smallExtents, kernels(LINEAR)), 60, ([seed, from, cell, kernel]) => {
      const raster = withAlpha(noiseRaster(seed, from, 4, 8, 'noise'), seed, 2, 5);
      const place = cellPlace(from, cell);
      const one = treatment({ kernel: { minify: kernel, magnify: kernel }, levels: 'none' });
      const inCell = engineTarget(raster, { ...one, targets: [{ name: 't', cell: [cell.width, cell.height] }] }, 't');
      const { width, height } = place.extent;
      const alone = engineTarget(raster, { ...one, targets: [{ name: 't', extent: [width, height] }] }, 't');
      const whole = straight(inCell.raster);
      expect(whole.extent).toEqual(cell);
      const part = painted(place.extent, 4, 8, (x, y) => texelAt(whole, place.x + x, place.y + y));
      expect(part.codes).toEqual(straight(alone.raster).codes);
      for (let y = 0; y < cell.height; y++) {
        for (let x = 0; x < cell.width; x++) {
          const inside = x >= place.x && x < place.x + width && y >= place.y && y < place.y + height;
          if (!inside) expect(texelAt(whole, x, y)[3]).toBe(0);
        }
      }
    });
  });

  it('stands half a texel left and up where it cannot be centered', () => {
    expect(cellPlace({ width: 2, height: 1 }, { width: 5, height: 4 })).toEqual({
      extent: { width: 5, height: 3 },
      x: 0,
      y: 0,
    });
  });
});
