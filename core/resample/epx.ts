import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import { type Extent, expandIndexed, type IndexedRaster, type StraightRaster } from '../raster/raster.ts';
import { BORDER, holdsBorder, pickTexels } from './pick.ts';

/** Pixel art magnified by `factor`, a product of twos and threes: twos first, each by EPX (which equals Scale2x), then
 *  threes by Scale3x. Every result texel is a texel of the source; all texels of alpha 0 count as one color. Neighbors outside
 *  are read by `wrap`; the border is clear. Throws RangeError for another factor, 1 included.
 *  [MacTech99, EPX; Mazzoleni01, Scale2x and Scale3x] */
export function epx<R extends StraightRaster | IndexedRaster>(
  raster: R,
  factor: number,
  wrap: { readonly x: Wrap; readonly y: Wrap },
): R {
  const step = factor % 2 === 0 ? 2 : 3;
  if (!Number.isInteger(factor) || factor < 2 || factor % step !== 0) {
    throw new RangeError(`Expected a product of twos and threes for factor but received ${factor}`);
  }
  const scaled = scaledOnce(raster, step, wrap);
  return factor === step ? scaled : epx(scaled, factor / step, wrap);
}

/** Bytes that `epx` holds beside its source and result, for a raster of that many bytes a texel. */
export function epxBytes(source: Extent, factor: number, bytesPerTexel: number): number {
  const before = factor / (factor % 3 === 0 ? 3 : 2);
  const texels = source.width * source.height;
  const between = before === 1 ? 0 : texels * before * before * bytesPerTexel;
  return between + texels * before * before * COLOR_BYTES + texels * factor * factor * 4;
}

/** The two numbers of a color, and an expanded palette entry. */
const COLOR_BYTES = 12;

function scaledOnce<R extends StraightRaster | IndexedRaster>(
  raster: R,
  factor: 2 | 3,
  wrap: { readonly x: Wrap; readonly y: Wrap },
): R {
  const { width, height } = raster.extent;
  const extent: Extent = { width: width * factor, height: height * factor };
  const texels = new Int32Array(extent.width * extent.height);
  const colors = new Colors(raster);
  const block = factor === 2 ? scale2x : scale3x;
  const columns = Int32Array.from({ length: width + 2 }, (_, i) => wrapIndex(i - 1, width, wrap.x));
  const around = new Int32Array(9);
  const result = new Int32Array(factor * factor);
  const borders = holdsBorder(raster);
  for (let y = 0; y < height; y++) {
    const rows = [wrapIndex(y - 1, height, wrap.y), y, wrapIndex(y + 1, height, wrap.y)];
    for (let x = 0; x < width; x++) {
      for (let v = 0; v < 3; v++) {
        for (let u = 0; u < 3; u++) {
          around[3 * v + u] = rows[v] < 0 || columns[x + u] < 0 ? BORDER : rows[v] * width + columns[x + u];
        }
      }
      block(around, colors, result);
      for (let v = 0; v < factor; v++) {
        const start = (y * factor + v) * extent.width + x * factor;
        for (let u = 0; u < factor; u++) {
          const texel = result[v * factor + u];
          texels[start + u] = texel === BORDER && !borders ? around[4] : texel;
        }
      }
    }
  }
  return pickTexels(raster, extent, texels);
}

/** The texels around E:   A B C      the result:   0 1
 *                          D E F                    2 3
 *                          G H I
 *  EPX's rule that three equal neighbors leave E alone is the test of B, H and of D, F.  [Mazzoleni01, Scale2x] */
function scale2x(around: Int32Array, colors: Colors, result: Int32Array): void {
  // By index: destructuring a typed array would run its iterator for every texel.
  const b = around[1];
  const d = around[3];
  const e = around[4];
  const f = around[5];
  const h = around[7];
  result.fill(e);
  if (colors.same(b, h) || colors.same(d, f)) return;
  if (colors.same(d, b)) result[0] = d;
  if (colors.same(f, b)) result[1] = f;
  if (colors.same(d, h)) result[2] = d;
  if (colors.same(f, h)) result[3] = f;
}

/** As scale2x; the result is 0 1 2 / 3 4 5 / 6 7 8.  [Mazzoleni01, Scale3x] */
function scale3x(around: Int32Array, colors: Colors, result: Int32Array): void {
  const b = around[1];
  const d = around[3];
  const e = around[4];
  const f = around[5];
  const h = around[7];
  result.fill(e);
  if (colors.same(b, h) || colors.same(d, f)) return;
  const db = colors.same(d, b);
  const bf = colors.same(b, f);
  const dh = colors.same(d, h);
  const hf = colors.same(h, f);
  const likeA = colors.same(e, around[0]);
  const likeC = colors.same(e, around[2]);
  const likeG = colors.same(e, around[6]);
  const likeI = colors.same(e, around[8]);
  if (db) result[0] = d;
  if ((db && !likeC) || (bf && !likeA)) result[1] = b;
  if (bf) result[2] = f;
  if ((db && !likeG) || (dh && !likeA)) result[3] = d;
  if ((bf && !likeI) || (hf && !likeC)) result[5] = f;
  if (dh) result[6] = d;
  if ((dh && !likeI) || (hf && !likeG)) result[7] = h;
  if (hf) result[8] = f;
}

/** Which texels look the same: those of equal codes, and all of alpha 0, the border among them. A color is two numbers, 32 bits
 *  each, at texel + 1: first and second channel, third channel and alpha. Both are 0 where alpha is, and there alone. */
class Colors {
  readonly #high: Uint32Array;
  readonly #low: Uint32Array;

  constructor(raster: StraightRaster | IndexedRaster) {
    const { channels, codes } = raster.kind === 'indexed' ? expandIndexed(raster) : raster;
    const count = codes.length / channels;
    const hasAlpha = channels % 2 === 0;
    this.#high = new Uint32Array(count + 1);
    this.#low = new Uint32Array(count + 1);
    for (let texel = 0; texel < count; texel++) {
      const at = texel * channels;
      const alpha = hasAlpha ? codes[at + channels - 1] : 1;
      if (alpha === 0) continue;
      const isGray = channels < 3;
      this.#high[texel + 1] = isGray ? codes[at] : codes[at] * 65536 + codes[at + 1];
      this.#low[texel + 1] = isGray ? alpha : codes[at + 2] * 65536 + alpha;
    }
  }

  same(one: number, other: number): boolean {
    return this.#high[one + 1] === this.#high[other + 1] && this.#low[one + 1] === this.#low[other + 1];
  }
}
