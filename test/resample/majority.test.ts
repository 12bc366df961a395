import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Extent } from '../../core/raster/raster.ts';
import { majority, majorityBytes } from '../../core/resample/majority.ts';
import { majorityTexel } from '../reference/majority.ts';
import { indexed, mirrored, pictures, straight, transposed, words } from './rasters.ts';

/** A picture and an extent no larger. */
const cases = pictures({ most: 12, clear: 'hides colors' }).chain((raster) =>
  fc.record({
    raster: fc.constant(raster),
    extent: fc.record({
      width: fc.integer({ min: 1, max: raster.extent.width }),
      height: fc.integer({ min: 1, max: raster.extent.height }),
    }),
  }),
);

const one: Extent = { width: 1, height: 1 };

describe('by hand', () => {
  test.each([
    ['the most frequent code wins', 3, [5, 9, 5, 5, 9, 9, 9, 5, 5], one, [5]],
    // 5 to 2: the first target covers texels 0 and 1 whole and half of 2. 8 has 2 + 1 of 5 parts, 9 has 2.
    ['parts of texels count as parts', 5, [8, 9, 8, 9, 9], { width: 2, height: 1 }, [8, 9]],
    // Center at 1.5: texels 1 and 2 are nearest, both 4.
    ['a tie goes to the color nearest the center', 4, [9, 4, 4, 9], one, [4]],
    ['then to the lowest', 2, [9, 4], one, [4]],
  ])('%s', (_, width, codes, extent, expected) => {
    expect(Array.from(majority(straight(width, 1, codes), extent).codes)).toEqual(expected);
  });

  test('all texels of alpha 0 vote as one, and the one nearest the center gives its hidden codes', () => {
    // Gray and alpha: opaque 7 twice, clear texels that hide 1, 2, 3.
    const raster = straight(5, 2, [7, 255, 1, 0, 2, 0, 3, 0, 7, 255]);
    expect(Array.from(majority(raster, one).codes)).toEqual([2, 0]);
  });

  test('without alpha the last channel is a color like the others', () => {
    const raster = straight(5, 3, [7, 7, 7, 1, 1, 0, 2, 2, 0, 3, 3, 0, 7, 7, 7]);
    expect(Array.from(majority(raster, one).codes)).toEqual([7, 7, 7]);
  });

  test('an index is kept, and palette entries of equal color vote together', () => {
    const result = majority(indexed(5, [0, 2, 3, 2, 0]), one);
    expect(result).toEqual({ ...indexed(1, [3]), extent: one });
    const twin = { ...indexed(5, [1, 0, 2, 1, 1]), palette: Uint8Array.of(9, 9, 9, 255, 5, 5, 5, 255, 9, 9, 9, 255) };
    expect(majority({ ...twin, alphaCount: 0 }, one).indices[0]).toBe(1);
    expect(majority({ ...twin, indices: Uint8Array.of(1, 0, 2, 1, 0), alphaCount: 0 }, one).indices[0]).toBe(2);
  });
});

test('takes the texel that the reference takes', () => {
  fc.assert(
    fc.property(cases, ({ raster, extent }) => {
      const expected = Array.from({ length: extent.width * extent.height }, (_, k) =>
        majorityTexel(raster, extent, k % extent.width, Math.floor(k / extent.width)),
      );
      const source = words(raster);
      expect(words(majority(raster, extent))).toEqual(expected.map((texel) => source[texel]));
    }),
    { numRuns: 300 },
  );
});

test('adds no color; mirrored and transposed input give mirrored and transposed output; equal extents copy', () => {
  fc.assert(
    fc.property(cases, ({ raster, extent }) => {
      const result = majority(raster, extent);
      const colors = new Set(words(raster));
      expect(words(result).filter((color) => !colors.has(color))).toEqual([]);
      expect(majority(mirrored(raster), extent)).toEqual(mirrored(result));
      const turned = { width: extent.height, height: extent.width };
      expect(majority(transposed(raster), turned)).toEqual(transposed(result));
      expect(majority(raster, raster.extent)).toEqual(raster);
    }),
  );
});

test('thousands of colors in one texel', () => {
  // Every 16-bit code once, but the last twice.
  const codes = Array.from({ length: 4096 }, (_, k) => (k === 17 ? 4095 : k));
  expect(majority(straight(64, 1, codes, 16), one).codes[0]).toBe(4095);
});

test('a larger extent is a mistake', () => {
  expect(() => majority(straight(2, 1, [1, 2]), { width: 3, height: 1 })).toThrow(
    /^Expected integer 1\.\.2 for target\.width but received 3$/,
  );
  expect(() => majority(straight(2, 1, [1, 2]), { width: 1, height: 0 })).toThrow(RangeError);
});

test('bytes held, by hand', () => {
  // A winner of 4 bytes a target texel, 4 bytes a source texel for an expanded palette, 72 a texel of the one footprint of 64.
  expect(majorityBytes({ width: 8, height: 8 }, one)).toBe(4 + 64 * 4 + 64 * 72);
});
