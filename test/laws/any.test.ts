import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { Refusal } from '../../core/problem.ts';
import { expandIndexed } from '../../core/raster/raster.ts';
import { sources, treatments } from '../fixtures/any.ts';
import { holds } from './holds.ts';

// Whatever the settings, an image is built whole or refused in words.

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
