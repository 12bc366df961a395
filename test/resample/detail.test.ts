import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Transfer } from '../../core/color/transfer.ts';
import { type Extent, maxCode, type StraightRaster } from '../../core/raster/raster.ts';
import { type DetailOptions, detail, detailBytes } from '../../core/resample/detail.ts';
import { areaTaps } from '../reference/axis.ts';
import { decodeSrgb, encodeSrgb } from '../reference/transfer.ts';
import { mirrored, pictures, straight, transposed } from './rasters.ts';

const one: Extent = { width: 1, height: 1 };

/** Color channels in `transfer`, weighed by an alpha channel where there is one. */
function options(raster: StraightRaster, lambda: number, transfer: Transfer = 'srgb'): DetailOptions {
  const alpha = raster.channels % 2 === 0 ? raster.channels - 1 : null;
  const transfers = Array.from({ length: raster.channels }, (_, c) => (c === alpha ? 'linear' : transfer));
  return { lambda, transfers, weighted: transfers.map((_, c) => c).filter((c) => c !== alpha), alpha };
}

/** The paper's steps in double precision, each as it is written: unrounded codes, those of colors times alpha. */
function reference(raster: StraightRaster, extent: Extent, { lambda, transfers, alpha }: DetailOptions): number[][] {
  const { channels, codes } = raster;
  const max = maxCode(raster.depth);
  const texel = (x: number, y: number): number[] =>
    Array.from(codes.subarray((y * raster.extent.width + x) * channels, (y * raster.extent.width + x + 1) * channels));
  const alphaOf = (amounts: readonly number[]): number => (alpha === null ? 1 : amounts[alpha] / max);
  const toLight = (color: readonly number[]): number[] =>
    color.map((code, c) => {
      const light = transfers[c] === 'srgb' ? decodeSrgb(code / max) : code;
      return c === alpha ? light : light * alphaOf(color);
    });
  const toCodes = (amounts: readonly number[]): number[] =>
    amounts.map((amount, c) => {
      const a = c === alpha ? 1 : alphaOf(amounts);
      if (a === 0) return 0;
      return (transfers[c] === 'srgb' ? encodeSrgb(amount / a) * max : amount / a) * a;
    });
  const mean = (parts: readonly (readonly [number, readonly number[]])[]): number[] => {
    const total = parts.reduce((sum, [weight]) => sum + weight, 0);
    return Array.from(transfers, (_, c) => parts.reduce((sum, [weight, each]) => sum + weight * each[c], 0) / total);
  };
  const patch = (jx: number, jy: number) =>
    areaTaps(raster.extent.height, extent.height, jy).flatMap((down) =>
      areaTaps(raster.extent.width, extent.width, jx).map(
        (across) => [down.weight * across.weight, texel(across.index, down.index)] as const,
      ),
    );
  const average = (jx: number, jy: number) => mean(patch(jx, jy).map(([weight, color]) => [weight, toLight(color)]));
  const guide = (jx: number, jy: number): number[] => {
    const parts: [number, number[]][] = [];
    for (const dy of [-1, 0, 1]) {
      for (const dx of [-1, 0, 1]) {
        const [x, y] = [jx + dx, jy + dy];
        if (x >= 0 && y >= 0 && x < extent.width && y < extent.height) {
          parts.push([(2 - Math.abs(dx)) * (2 - Math.abs(dy)), average(x, y)]);
        }
      }
    }
    return mean(parts);
  };
  return Array.from({ length: extent.width * extent.height }, (_, k) => {
    const [jx, jy] = [k % extent.width, Math.floor(k / extent.width)];
    const center = guide(jx, jy);
    const centerCodes = toCodes(center);
    const weighed = patch(jx, jy).map(([weight, color]) => {
      const seen = color.map((code, c) => (c === alpha ? code : code * alphaOf(color)));
      const distance = Math.hypot(...seen.map((code, c) => code - centerCodes[c])) / Math.sqrt(3 * max * max);
      return [weight * distance ** lambda, toLight(color)] as const;
    });
    return toCodes(weighed.some(([weight]) => weight > 0) ? mean(weighed) : center);
  });
}

const cases = pictures({ most: 9 }).chain((raster) =>
  fc.record({
    raster: fc.constant(raster),
    extent: fc.record({
      width: fc.integer({ min: 1, max: raster.extent.width }),
      height: fc.integer({ min: 1, max: raster.extent.height }),
    }),
    lambda: fc.constantFrom(0, 0.5, 1, 2),
    transfer: fc.constantFrom<Transfer>('srgb', 'linear'),
  }),
);

/** The result's codes, those of colors times alpha, as the reference gives them. */
function weighed(raster: StraightRaster, alpha: number | null): number[][] {
  const { channels, codes } = raster;
  return Array.from({ length: codes.length / channels }, (_, texel) => {
    const color = Array.from(codes.subarray(texel * channels, (texel + 1) * channels));
    const a = alpha === null ? 1 : color[alpha] / maxCode(raster.depth);
    return color.map((code, c) => (c === alpha ? code : code * a));
  });
}

test('is what the paper says, within the rounding of a code', () => {
  fc.assert(
    fc.property(cases, ({ raster, extent, lambda, transfer }) => {
      const how = options(raster, lambda, transfer);
      const result = weighed(detail(raster, extent, how), how.alpha);
      reference(raster, extent, how).forEach((expected, texel) => {
        expected.forEach((code, c) => {
          // Half a code of its own rounding, half of alpha's (which the color's code, up to alpha's own size, is multiplied by), and
          // decoding to float32: 2^-24 of 65535.
          const rounding = how.alpha !== null && c !== how.alpha ? 1 : 0.5;
          expect(Math.abs(result[texel][c] - code)).toBeLessThan(rounding + 0.02);
        });
      });
    }),
    { numRuns: 300 },
  );
});

describe('one white texel in a black patch of sixteen', () => {
  // Its own patch is all there is, so the guide is the mean g = 255/16: black lies g away, white 15 g. White then weighs
  // 15^lambda / (15^lambda + 15).
  const raster = straight(4, 1, [255, ...new Array(15).fill(0)]);

  test.each([
    [0, 255 / 16],
    [0.5, (255 * Math.sqrt(15)) / (Math.sqrt(15) + 15)],
    // Half of 255 exactly, which rounds to the even code.
    [1, 128],
    [2, (255 * 225) / (225 + 15)],
  ])('lambda %d', (lambda, exact) => {
    expect(detail(raster, one, options(raster, lambda, 'linear')).codes[0]).toBe(Math.round(exact));
  });
});

test('lambda 0 is the area average', () => {
  fc.assert(
    fc.property(cases, ({ raster, extent, transfer }) => {
      const { codes } = detail({ ...raster, channels: 1, extent: flat(raster) }, narrowed(raster, extent), {
        lambda: 0,
        transfers: [transfer],
        weighted: [],
        alpha: null,
      });
      const max = maxCode(raster.depth);
      const taps = areaTaps(flat(raster).width, narrowed(raster, extent).width, 0);
      const light = (code: number) => (transfer === 'srgb' ? decodeSrgb(code / max) : code);
      const mean = taps.reduce((sum, tap) => sum + tap.weight * light(raster.codes[tap.index]), 0);
      const exact = transfer === 'srgb' ? encodeSrgb(mean) * max : mean;
      expect(Math.abs(codes[0] - exact)).toBeLessThan(0.52);
    }),
  );
});

/** All samples of a raster as one row of gray. */
function flat(raster: StraightRaster): Extent {
  return { width: raster.codes.length, height: 1 };
}

function narrowed(raster: StraightRaster, extent: Extent): Extent {
  return { width: Math.min(extent.width, raster.codes.length), height: 1 };
}

test('a constant stays; equal extents keep it too', () => {
  const color = fc.array(fc.integer({ min: 0, max: 255 }), { minLength: 4, maxLength: 4 });
  fc.assert(
    fc.property(color, fc.constantFrom(0, 0.5, 1, 2), fc.integer({ min: 1, max: 5 }), (codes, lambda, to) => {
      const raster = straight(5, 4, new Array(25).fill(codes).flat());
      const result = detail(raster, { width: to, height: to }, options(raster, lambda));
      const expected = codes[3] === 0 ? [0, 0, 0, 0] : codes;
      expect(Array.from(result.codes)).toEqual(new Array(to * to).fill(expected).flat());
    }),
  );
});

test('color under alpha 0 changes nothing, and opaque alpha is as none', () => {
  const gray = fc.array(fc.integer({ min: 0, max: 255 }), { minLength: 16, maxLength: 16 });
  fc.assert(
    fc.property(gray, gray, fc.array(fc.boolean(), { minLength: 16, maxLength: 16 }), (seen, hidden, clear) => {
      const build = (under: readonly number[]) =>
        straight(
          4,
          2,
          seen.flatMap((code, k) => (clear[k] ? [under[k], 0] : [code, 255])),
        );
      const extent = { width: 2, height: 3 };
      const how = options(build(seen), 1);
      expect(detail(build(seen), extent, how)).toEqual(detail(build(hidden), extent, how));
      const bare = straight(4, 1, seen);
      const opaque = straight(
        4,
        2,
        seen.flatMap((code) => [code, 255]),
      );
      const colors = Array.from(detail(opaque, extent, how).codes).filter((_, k) => k % 2 === 0);
      expect(colors).toEqual(Array.from(detail(bare, extent, options(bare, 1)).codes));
    }),
  );
});

test('mirrored and transposed input differ by one code at most', () => {
  fc.assert(
    fc.property(cases, ({ raster, extent, lambda }) => {
      const how = options(raster, lambda);
      const result = detail(raster, extent, how);
      const across = { width: extent.height, height: extent.width };
      for (const [one, other] of [
        [detail(mirrored(raster), extent, how), mirrored(result)],
        [detail(transposed(raster), across, how), transposed(result)],
      ]) {
        expect(Array.from(one.codes).filter((code, k) => Math.abs(code - other.codes[k]) > 1)).toEqual([]);
      }
    }),
  );
});

test('mistakes', () => {
  const raster = straight(2, 1, [1, 2]);
  expect(() => detail(raster, one, options(raster, 0.75))).toThrow(
    /^Expected 0, 0\.5, 1, 2 for lambda but received 0\.75$/,
  );
  expect(() => detail(raster, { width: 3, height: 1 }, options(raster, 1))).toThrow(RangeError);
});

test('bytes held, by hand', () => {
  // Averages and guide, 8 bytes a sample.
  expect(detailBytes({ width: 4, height: 4 }, 3)).toBe(2 * 16 * 3 * 8);
});
