import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Wrap } from '../../core/kernel/wrap.ts';
import { epx, epxBytes } from '../../core/resample/epx.ts';
import { scale2x } from '../reference/epx.ts';
import { cut, indexed, mirrored, pictures, straight, tiled, transposed, turned, words } from './rasters.ts';

const clamp = { x: 'clamp-to-edge', y: 'clamp-to-edge' } as const;
const both = (wrap: Wrap) => ({ x: wrap, y: wrap });

/** EPX as MacTech 15(6), 1999, gives it: parents A north, B east, C west, D south of P, and the rule that three equal parents
 *  leave P alone. The result: P1 P2 / P3 P4. */
function epxRule(a: number, b: number, c: number, d: number, p: number): number[] {
  const parents = [a, b, c, d];
  const mostEqual = Math.max(...parents.map((each) => parents.filter((other) => other === each).length));
  if (mostEqual >= 3) return [p, p, p, p];
  return [c === a ? a : p, a === b ? b : p, d === c ? c : p, b === d ? d : p];
}

test('2x is EPX on every cross of five colors', () => {
  const wrong: number[][] = [];
  for (let n = 0; n < 5 ** 5; n++) {
    const [a, b, c, d, p] = [0, 1, 2, 3, 4].map((place) => Math.floor(n / 5 ** place) % 5);
    // Corners hold a sixth color; 2x does not look at them.
    const scaled = epx(straight(3, 1, [9, a, 9, c, p, b, 9, d, 9]), 2, clamp);
    const middle = cut(scaled, 2, 2, { width: 2, height: 2 });
    if (Array.from(middle.codes).join() !== epxRule(a, b, c, d, p).join()) wrong.push([a, b, c, d, p]);
  }
  expect(wrong).toEqual([]);
});

describe('by hand', () => {
  const scaled = (factor: number, rows: readonly string[]): string[] => {
    const codes = rows.flatMap((row) => Array.from(row, Number));
    const { codes: result, extent } = epx(straight(rows[0].length, 1, codes), factor, clamp);
    return Array.from({ length: extent.height }, (_, y) =>
      result.subarray(y * extent.width, (y + 1) * extent.width).join(''),
    );
  };

  test('2x fills the corners beside a diagonal, and rounds its clamped ends', () => {
    expect(scaled(2, ['100', '010', '001'])).toEqual(['110000', '101000', '011100', '001110', '000101', '000011']);
  });

  test('3x', () => {
    // The four texels of a step: rules of E1, E3 (through E != C, E != G) and of corners, worked out on paper.
    expect(scaled(3, ['110', '100', '000']).slice(0, 3)).toEqual(['111111000', '111110000', '111110000']);
  });

  test('a single texel stays square', () => {
    expect(scaled(2, ['000', '010', '000'])).toEqual(['000000', '000000', '001100', '001100', '000000', '000000']);
    expect(scaled(3, ['000', '010', '000'])[4]).toBe('000111000');
  });
});

test('2x takes the texel that the reference takes', () => {
  fc.assert(
    fc.property(pictures({ most: 9 }), (raster) => {
      const source = words(raster);
      const expected = scale2x(raster.extent, (a, b) => source[a] === source[b]);
      expect(words(epx(raster, 2, clamp))).toEqual(Array.from(expected, (texel) => source[texel]));
    }),
    { numRuns: 200 },
  );
});

const factor = fc.constantFrom(2, 3, 4, 6);
const closed = fc.constantFrom<Wrap>('clamp-to-edge', 'repeat', 'mirror-repeat');

test('adds no color; mirrored and turned input give mirrored and turned output', () => {
  fc.assert(
    fc.property(pictures({ most: 6 }), factor, closed, (raster, times, wrap) => {
      const result = epx(raster, times, both(wrap));
      expect(result.extent).toEqual({ width: raster.extent.width * times, height: raster.extent.height * times });
      const colors = new Set(words(raster));
      expect(words(result).filter((color) => !colors.has(color))).toEqual([]);
      expect(epx(mirrored(raster), times, both(wrap))).toEqual(mirrored(result));
      expect(epx(turned(raster), times, both(wrap))).toEqual(turned(result));
    }),
  );
});

test('repeat equals the middle of a tiled image', () => {
  fc.assert(
    fc.property(pictures({ most: 6 }), factor, (raster, times) => {
      const result = epx(raster, times, both('repeat'));
      const { width, height } = result.extent;
      expect(cut(epx(tiled(raster), times, clamp), width, height, result.extent)).toEqual(result);
    }),
  );
});

test('wraps are by axis: transposed input with the wraps exchanged gives transposed output', () => {
  fc.assert(
    fc.property(pictures({ most: 6 }), factor, closed, closed, (raster, times, x, y) => {
      expect(epx(transposed(raster), times, { x: y, y: x })).toEqual(transposed(epx(raster, times, { x, y })));
    }),
  );
});

describe('alpha 0', () => {
  test('counts as one color whatever it hides', () => {
    const clear = [9, 0, 8, 0, 7, 0, 6, 0];
    // Gray and alpha; opaque 5 on the diagonal, clear texels that hide different codes.
    const hiding = straight(3, 2, [5, 255, ...clear, ...clear.slice(0, 6), 5, 255].slice(0, 18));
    const plain = straight(
      3,
      2,
      Array.from(hiding.codes, (code, k) => (hiding.codes[k | 1] === 0 ? 0 : code)),
    );
    const alphas = (codes: ArrayLike<number>) => Array.from(codes).filter((_, k) => k % 2 === 1);
    expect(alphas(epx(hiding, 2, clamp).codes)).toEqual(alphas(epx(plain, 2, clamp).codes));
  });

  test('is what the border holds', () => {
    // An opaque square in a clear frame, and the same with the border for a frame.
    const framed = straight(
      4,
      2,
      [0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 5, 255, 5, 255, 0, 0, 0, 0, 5, 255, 5, 255, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0],
    );
    const bare = straight(2, 2, [5, 255, 5, 255, 5, 255, 5, 255]);
    for (const times of [2, 3]) {
      const middle = cut(epx(framed, times, clamp), times, times, { width: 2 * times, height: 2 * times });
      expect(epx(bare, times, both('clamp-to-border'))).toEqual(middle);
    }
  });

  test('a palette gives its first clear entry for the border, and stays as it is where it has none', () => {
    const raster = indexed(2, [0, 0, 0, 0]);
    const rounded = epx(raster, 2, both('clamp-to-border'));
    expect(Array.from(rounded.indices)).toEqual([2, 0, 0, 2, 0, 0, 0, 0, 0, 0, 0, 0, 2, 0, 0, 2]);
    expect(rounded.palette).toBe(raster.palette);
    const opaque = { ...raster, alphaCount: 0, palette: Uint8Array.of(255, 0, 0, 255) };
    expect(Array.from(epx(opaque, 2, both('clamp-to-border')).indices)).toEqual(new Array(16).fill(0));
  });
});

test('products are twos before threes', () => {
  fc.assert(
    fc.property(pictures({ most: 5 }), (raster) => {
      expect(epx(raster, 6, clamp)).toEqual(epx(epx(raster, 2, clamp), 3, clamp));
      expect(epx(raster, 4, clamp)).toEqual(epx(epx(raster, 2, clamp), 2, clamp));
    }),
    { numRuns: 30 },
  );
});

test.each([0, 1, 5, 10, 1.5, -2, Number.NaN])('factor %d is a mistake', (times) => {
  expect(() => epx(straight(1, 1, [0]), times, clamp)).toThrow(RangeError);
});

test('bytes held, by hand', () => {
  // 2x: 12 a source texel, 4 a result texel. 6x: the doubled raster of 4 bytes a texel beside them.
  expect(epxBytes({ width: 10, height: 10 }, 2, 4)).toBe(100 * 12 + 400 * 4);
  expect(epxBytes({ width: 10, height: 10 }, 6, 4)).toBe(400 * 4 + 400 * 12 + 3600 * 4);
});
