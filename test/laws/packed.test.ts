import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { kernels, LINEAR, oneOf, rasters, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { lone, painted, texelAt } from '../fixtures/picture.ts';
import { treatment } from '../fixtures/treatment.ts';
import { engineLevels } from './builders.ts';
import { holds } from './holds.ts';

const packed = rasters(smallExtents, 'noise', oneOf([4] as const));

it('filters each channel of a packed file as the same channel alone', () => {
  holds(fc.tuple(packed, kernels(LINEAR), wraps), 60, ([raster, kernel, wrap]) => {
    const one = treatment({ content: 'data', kernel: { minify: kernel, magnify: kernel }, wrap });
    const levels = engineLevels(
      buildChain(raster, {
        ...one,
        channels: { r: 'color', g: 'data', b: 'height', a: 'data' },
        transfer: ['srgb', 'linear', 'linear', 'linear'],
      }),
    );
    (['srgb', 'linear', 'linear', 'linear'] as const).forEach((transfer, c) => {
      const content = c === 0 ? 'color' : 'data';
      const alone = engineLevels(buildChain(lone(raster, c), { ...one, content, transfer }));
      expect(levels.map((level) => lone(level, c).codes)).toEqual(alone.map(({ codes }) => codes));
    });
  });
});

it('filters packed normals as the same channels of a normal map', () => {
  holds(fc.tuple(packed, kernels(LINEAR), wraps), 40, ([raster, kernel, wrap]) => {
    const one = treatment({ content: 'data', kernel: { minify: kernel, magnify: kernel }, wrap });
    const levels = engineLevels(buildChain(raster, { ...one, channels: { rgb: 'normal', a: 'data' } }));
    const normals = painted(raster.extent, 3, raster.depth, (x, y) => texelAt(raster, x, y).slice(0, 3));
    const alone = engineLevels(buildChain(normals, { ...one, content: 'normal' }));
    const height = engineLevels(buildChain(lone(raster, 3), one));
    levels.forEach((level, i) => {
      const front = painted(level.extent, 3, level.depth, (x, y) => texelAt(level, x, y).slice(0, 3));
      expect(front.codes).toEqual(alone[i].codes);
      expect(lone(level, 3).codes).toEqual(height[i].codes);
    });
  });
});

it('changes nothing in a channel when another changes', () => {
  holds(fc.tuple(packed, packed, kernels(LINEAR)), 30, ([raster, other, kernel]) => {
    const one = treatment({ content: 'data', kernel: { minify: kernel, magnify: kernel }, alpha: { use: 'data' } });
    const mixed = painted(raster.extent, 4, raster.depth, (x, y) => {
      const codes = texelAt(raster, x, y);
      const from = (y * raster.extent.width + x) % (other.codes.length - 4);
      return [codes[0], other.codes[from] % 256, other.codes[from + 1] % 256, other.codes[from + 2] % 256];
    });
    const red = (levels: ReturnType<typeof engineLevels>): unknown => levels.map((level) => lone(level, 0).codes);
    expect(red(engineLevels(buildChain(mixed, one)))).toEqual(red(engineLevels(buildChain(raster, one))));
  });
});
