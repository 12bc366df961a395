import { wrapIndex } from '../kernel/wrap.ts';
import type { Extent, StraightRaster } from '../raster/raster.ts';
import { decodeRow, floatChannels } from '../resample/decode.ts';
import type { Decoding } from '../resample/engine.ts';
import { buildSlopes, slopeAt, slopeRows } from '../resample/slopes.ts';
import type { WrapPair } from './coverage.ts';

type FourRows = readonly [Float32Array, Float32Array, Float32Array, Float32Array];

/** Magnifies by the monotone cubic, x then y, and hands over float rows from the top. Axes that keep their extent are
 *  copied. */
export function magnifySlopes(
  raster: StraightRaster,
  extent: Extent,
  decoding: Decoding,
  wrap: WrapPair,
  sink: (y: number, floats: Float32Array) => void,
): void {
  const channels = floatChannels(decoding);
  const rows = new RowCache(raster, extent.width, decoding, wrap);
  if (extent.height === raster.extent.height) {
    for (let y = 0; y < extent.height; y++) sink(y, rows.row(y));
    return;
  }
  const slopes = buildSlopes(raster.extent.height, extent.height);
  const out = new Float32Array(extent.width * channels);
  for (let y = 0; y < extent.height; y++) {
    const left = slopes.left[y];
    const four = [-1, 0, 1, 2].map((k) => rows.row(left + k)) as unknown as FourRows;
    slopeRows(slopes, y, four, out);
    sink(y, out);
  }
}

/** Source rows, decoded and magnified along x; the last four asked for are kept. */
class RowCache {
  readonly #raster: StraightRaster;
  readonly #width: number;
  readonly #decoding: Decoding;
  readonly #wrap: WrapPair;
  readonly #kept = new Map<number, Float32Array>();
  readonly #border: Float32Array;

  constructor(raster: StraightRaster, width: number, decoding: Decoding, wrap: WrapPair) {
    this.#raster = raster;
    this.#width = width;
    this.#decoding = decoding;
    this.#wrap = wrap;
    this.#border = new Float32Array(width * floatChannels(decoding));
  }

  row(index: number): Float32Array {
    const y = wrapIndex(index, this.#raster.extent.height, this.#wrap.y);
    if (y < 0) return this.#border;
    let row = this.#kept.get(y);
    if (row === undefined) {
      row = this.#make(y);
      if (this.#kept.size >= 8) this.#kept.delete(this.#kept.keys().next().value!);
      this.#kept.set(y, row);
    }
    return row;
  }

  #make(y: number): Float32Array {
    const { extent, channels: stored, codes } = this.#raster;
    const channels = floatChannels(this.#decoding);
    const source = new Float32Array(extent.width * channels);
    const start = y * extent.width * stored;
    decodeRow(this.#decoding, codes.subarray(start, start + extent.width * stored), source);
    if (this.#width === extent.width) return source;
    const slopes = buildSlopes(extent.width, this.#width);
    const row = new Float32Array(this.#width * channels);
    for (let x = 0; x < this.#width; x++) {
      const at = [-1, 0, 1, 2].map((k) => wrapIndex(slopes.left[x] + k, extent.width, this.#wrap.x));
      for (let channel = 0; channel < channels; channel++) {
        const [a, b, c, d] = at.map((texel) => (texel < 0 ? 0 : source[texel * channels + channel]));
        row[x * channels + channel] = slopeAt(slopes, x, a, b, c, d);
      }
    }
    return row;
  }
}
