import { wrapIndex } from '../kernel/wrap.ts';
import type { Extent, IndexedRaster, StraightRaster } from '../raster/raster.ts';
import type { Wrap } from '../treatment/treatment.ts';
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

function scaledOnce<R extends StraightRaster | IndexedRaster>(
  raster: R,
  factor: 2 | 3,
  wrap: { readonly x: Wrap; readonly y: Wrap },
): R {
  const { width, height } = raster.extent;
  const extent: Extent = { width: width * factor, height: height * factor };
  const texels = new Int32Array(extent.width * extent.height);
  const same = sameColor(raster);
  const block = factor === 2 ? scale2x : scale3x;
  const columns = Int32Array.from({ length: width + 2 }, (_, i) => wrapIndex(i - 1, width, wrap.x));
  const around = new Int32Array(9);
  const result = new Int32Array(factor * factor);
  const borders = holdsBorder(raster);
  for (let y = 0; y < height; y++) {
    const rows = [wrapIndex(y - 1, height, wrap.y), y, wrapIndex(y + 1, height, wrap.y)];
    for (let x = 0; x < width; x++) {
      for (let k = 0; k < 9; k++) {
        const row = rows[(k - (k % 3)) / 3];
        const column = columns[x + (k % 3)];
        around[k] = row < 0 || column < 0 ? BORDER : row * width + column;
      }
      block(around, same, result);
      for (let k = 0; k < result.length; k++) {
        const texel = result[k] === BORDER && !borders ? around[4] : result[k];
        const line = y * factor + (k - (k % factor)) / factor;
        texels[line * extent.width + x * factor + (k % factor)] = texel;
      }
    }
  }
  return pickTexels(raster, extent, texels);
}

type Same = (one: number, other: number) => boolean;

/** The texels around E:   A B C      the result:   0 1
 *                          D E F                    2 3
 *                          G H I
 *  EPX's rule that three equal neighbors leave E alone is the test of B, H and of D, F.  [Mazzoleni01, Scale2x] */
function scale2x([, b, , d, e, f, , h]: Int32Array, same: Same, result: Int32Array): void {
  if (same(b, h) || same(d, f)) {
    result.fill(e);
    return;
  }
  result[0] = same(d, b) ? d : e;
  result[1] = same(f, b) ? f : e;
  result[2] = same(d, h) ? d : e;
  result[3] = same(f, h) ? f : e;
}

/** As scale2x; the result is 0 1 2 / 3 4 5 / 6 7 8.  [Mazzoleni01, Scale3x] */
function scale3x([a, b, c, d, e, f, g, h, i]: Int32Array, same: Same, result: Int32Array): void {
  result.fill(e);
  if (same(b, h) || same(d, f)) return;
  const db = same(d, b);
  const bf = same(b, f);
  const dh = same(d, h);
  const hf = same(h, f);
  if (db) result[0] = d;
  if ((db && !same(e, c)) || (bf && !same(e, a))) result[1] = b;
  if (bf) result[2] = f;
  if ((db && !same(e, g)) || (dh && !same(e, a))) result[3] = d;
  if ((bf && !same(e, i)) || (hf && !same(e, c))) result[5] = f;
  if (dh) result[6] = d;
  if ((dh && !same(e, i)) || (hf && !same(e, g))) result[7] = h;
  if (hf) result[8] = f;
}

/** Whether two texels look the same: equal codes, or both of alpha 0. The border is of alpha 0. */
function sameColor(raster: StraightRaster | IndexedRaster): Same {
  const isIndexed = raster.kind === 'indexed';
  const channels = isIndexed ? 4 : raster.channels;
  const codes = isIndexed ? raster.palette : raster.codes;
  const place = isIndexed ? (texel: number) => raster.indices[texel] * 4 : (texel: number) => texel * channels;
  const isClear = (texel: number) =>
    texel === BORDER || (channels % 2 === 0 && codes[place(texel) + channels - 1] === 0);
  return (one, other) => {
    if (one === other) return true;
    if (isClear(one) || isClear(other)) return isClear(one) && isClear(other);
    const left = place(one);
    const right = place(other);
    for (let channel = 0; channel < channels; channel++) {
      if (codes[left + channel] !== codes[right + channel]) return false;
    }
    return true;
  };
}
