import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { kernels, LINEAR, oneOf, rasters, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { painted, texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import type { Doubles } from '../reference/doubles.ts';
import { nextBounds } from '../reference/height.ts';
import { engineLevels } from './builders.ts';
import { holds } from './holds.ts';

const heights = rasters(smallExtents, 'noise', oneOf([1] as const));

it('bounds every source texel below each texel of the min and max chains', () => {
  holds(fc.tuple(heights, wraps), 60, ([raster, wrap]) => {
    const chain = buildChain(raster, treatment({ content: 'height', wrap, height: { minmax: true } }));
    const [low, high] = (['min', 'max'] as const).map((use) => engineLevels(chain, use));
    expect(low.length).toBe(engineLevels(chain).length - 1);
    low.forEach((least, i) => {
      const { width, height } = least.extent;
      for (let y = 0; y < raster.extent.height; y++) {
        for (let x = 0; x < raster.extent.width; x++) {
          // Every texel of the level whose area meets this source texel's.
          const across = touched(x, raster.extent.width, width);
          const down = touched(y, raster.extent.height, height);
          const [code] = texelAt(raster, x, y);
          for (const v of down) {
            for (const u of across) {
              const [bottom, top] = [texelAt(least, u, v)[0], texelAt(high[i], u, v)[0]];
              if (bottom > code || top < code) expect.fail(`${code} outside ${bottom}..${top} of level ${i + 1}`);
            }
          }
        }
      }
    });
  });
});

it('builds bounds as the reference does: box weights and one texel each side, from the previous bounds', () => {
  holds(fc.tuple(heights, wraps), 60, ([raster, wrap]) => {
    const chain = buildChain(raster, treatment({ content: 'height', wrap, height: { minmax: true } }));
    for (const use of ['min', 'max'] as const) {
      const { width, height } = raster.extent;
      let bounds: Doubles = { width, height, channels: 1, values: Float64Array.from(raster.codes) };
      for (const level of engineLevels(chain, use)) {
        bounds = nextBounds(bounds, level.extent, wrap, use === 'min' ? Math.min : Math.max);
        expect(Array.from(level.codes)).toEqual(Array.from(bounds.values));
      }
    }
  });
});

it('keeps fractions of 8-bit heights at 16 bits', () => {
  // A slope of one code in 16 texels: at 16 bits, level 1 has steps of 257 / 8 codes; at 8 bits it has none of them.
  const slope = painted({ width: 64, height: 1 }, 1, 8, (x) => [100 + Math.floor(x / 16)]);
  const one = treatment({ content: 'height', kernel: both('triangle'), depth: 16 });
  const levels = engineLevels(buildChain(slope, one));
  expect(levels.map(({ depth }) => depth)).toEqual(levels.map(() => 16));
  expect(levels[0].codes[20]).toBe(101 * 257);
  expect(Array.from(levels[3].codes).some((code) => code % 257 !== 0)).toBe(true);
});

it('filters heights as plain numbers', () => {
  holds(fc.tuple(heights, kernels(LINEAR), wraps), 30, ([raster, kernel, wrap]) => {
    const one = { kernel: { minify: kernel, magnify: kernel }, wrap };
    const height = engineLevels(buildChain(raster, treatment({ ...one, content: 'height' })));
    const data = engineLevels(buildChain(raster, treatment({ ...one, content: 'data' })));
    expect(height.map(({ codes }) => codes)).toEqual(data.map(({ codes }) => codes));
  });
});

function touched(i: number, from: number, to: number): number[] {
  return Array.from({ length: to }, (_, j) => j).filter((j) => i * to < (j + 1) * from && (i + 1) * to > j * from);
}
