import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { Refusal } from '../../core/problem.ts';
import { expandIndexed, type IndexedRaster, type StraightRaster } from '../../core/raster/raster.ts';
import type { ChannelContent, Target, Treatment } from '../../core/treatment/treatment.ts';
import { AREA, channelCounts, depths, oneOf, seeds, WEIGHTS } from '../fixtures/arbitrary.ts';
import { noiseRaster, numbers, withAlpha } from '../fixtures/noise.ts';
import { kernel, treatment } from '../fixtures/treatment.ts';
import { holds } from './holds.ts';

// Whatever the settings, an image is built whole or refused in words.

const side = fc.integer({ min: 1, max: 17 });
const wrap = oneOf(['clamp-to-edge', 'repeat', 'mirror-repeat', 'clamp-to-border'] as const);
const minify = oneOf([...WEIGHTS, ...AREA, 'nearest', 'majority', 'detail']).map((name) => kernel(name));
const magnify = oneOf([...WEIGHTS, ...AREA, 'nearest', 'epx', 'monotone']).map((name) => kernel(name));
const target: fc.Arbitrary<Target> = fc.oneof(
  oneOf([0.5, 2, 3, 1.5, 1]).map((scale) => ({ name: `${scale}x`, scale })),
  fc.tuple(side, side).map(([width, height]) => ({ name: 'extent', extent: [width, height] as const })),
  fc.tuple(side, side).map(([width, height]) => ({ name: 'cell', cell: [width, height] as const })),
);
const groups: fc.Arbitrary<Record<string, ChannelContent> | null> = oneOf([
  null,
  null,
  { rg: 'normal', b: 'roughness', a: 'data' },
  { rgb: 'normal', a: 'roughness' },
  { rgb: 'color', a: 'height' },
  { r: 'height' },
] as const);

const treatments: fc.Arbitrary<Treatment> = fc
  .record({
    content: oneOf(['color', 'normal', 'height', 'data'] as const),
    channels: groups,
    transfer: oneOf(['srgb', 'linear', ['linear', 'srgb', 'linear', 'linear']] as const),
    light: oneOf(['linear', 'code'] as const),
    alpha: fc.record({
      use: oneOf(['opacity', 'mask', 'data', 'none'] as const),
      cutoff: oneOf([0, 0.3, 0.5, 1]),
      test: oneOf(['>=', '>'] as const),
      keepCoverage: fc.boolean(),
      store: oneOf(['straight', 'straight', 'premultiplied'] as const),
      weight: fc.boolean(),
    }),
    fill: oneOf(['none', 'hidden', 'all'] as const),
    kernel: fc.record({ minify, magnify }),
    derive: oneOf(['previous', 'base'] as const),
    wrap: fc.record({ x: wrap, y: wrap }),
    levels: fc.oneof(
      fc.constant('none' as const),
      fc.record({ first: fc.integer({ min: 0, max: 6 }), last: oneOf([null, 2, 4]) }),
    ),
    targets: fc.array(target, { maxLength: 2 }),
    grid: oneOf([null, null, { cell: [4, 4], gutter: 0 }, { cell: [2, 4], gutter: 1 }] as const),
    depth: oneOf(['same', 8, 16] as const),
    normal: fc.record({ count: oneOf([2, 3] as const), base: oneOf(['keep', 'renormalise'] as const) }),
    height: fc.record({ minmax: fc.boolean() }),
  })
  .map((overrides) => treatment(overrides));

const sources: fc.Arbitrary<StraightRaster | IndexedRaster> = fc
  .tuple(seeds, side, side, channelCounts, depths, oneOf([false, false, true]))
  .map(([seed, width, height, channels, depth, indexed]) => {
    const extent = { width: width > 12 ? 8 : width, height: height > 12 ? 8 : height };
    if (indexed) return withPalette(seed, extent);
    const raster = noiseRaster(seed, extent, channels, depth, 'noise');
    return channels % 2 === 0 ? withAlpha(raster, seed, 4, 3) : raster;
  });

it('builds every image whole, or refuses in words', () => {
  let built = 0;
  holds(fc.tuple(sources, treatments), 1500, ([source, one]) => {
    const before = source.kind === 'indexed' ? source.indices.slice() : source.codes.slice();
    try {
      const { images } = buildChain(source, one);
      built++;
      expect(images.length).toBeGreaterThan(0);
      for (const { raster, extent, clipped, coverage, normalLength } of images) {
        expect(raster.extent).toEqual(extent);
        const straight = raster.kind === 'indexed' ? expandIndexed(raster) : raster;
        expect(straight.codes.length).toBe(extent.width * extent.height * straight.channels);
        expect(straight.depth).toBe(one.depth === 'same' ? (source.kind === 'indexed' ? 8 : source.depth) : one.depth);
        expect(clipped.below.length).toBe(straight.channels);
        if (coverage !== undefined) expect(coverage >= 0 && coverage <= 1).toBe(true);
        if (normalLength !== undefined) expect(normalLength >= 0 && normalLength <= 1 + 1e-6).toBe(true);
      }
      expect(source.kind === 'indexed' ? source.indices : source.codes).toEqual(before);
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
    }
  });
  expect(built).toBeGreaterThan(300);
});

function withPalette(seed: number, extent: StraightRaster['extent']): IndexedRaster {
  const next = numbers(seed);
  const palette = Uint8Array.from({ length: 16 * 4 }, () => next() % 256);
  const alphaCount = next() % 2 === 0 ? 0 : 4;
  for (let entry = 0; entry < 16; entry++) if (entry >= alphaCount) palette[entry * 4 + 3] = 255;
  if (alphaCount > 0) palette[3] = 0;
  const indices = Uint8Array.from({ length: extent.width * extent.height }, () => next() % 16);
  return { kind: 'indexed', extent, indexBits: 4, indices, palette, alphaCount };
}
