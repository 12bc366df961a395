import type { ImageUse } from '../manifest/manifest.ts';
import { type Codes, type Extent, newCodes, type Raster, type StraightRaster } from '../raster/raster.ts';
import { type Clipped, newClipped } from '../resample/clip.ts';
import type { Encoding } from '../resample/encoding.ts';
import type { RowCoder } from '../resample/engine.ts';
import { plainCoder } from './coder.ts';
import type { CoverageScale } from './coverage-scale.ts';
import { holdsColor } from './layout.ts';
import { type LightSum, lightOf, SUMS_A_ROW } from './light.ts';
import type { UnscaledAlpha } from './scaled-alpha.ts';

/** One finished level or target, with what was measured on the way. */
export interface ChainImage {
  readonly use: ImageUse;
  readonly level?: number;
  readonly target?: string;
  readonly extent: Extent;
  readonly raster: Raster;
  readonly coverage?: number;
  readonly coverageScale?: CoverageScale;
  readonly light?: LightSum;
  /** Mean length of the mean normals, 0..1. */
  readonly normalLength?: number;
  readonly clipped: Clipped;
}

/** An image that is made row by row: stored codes, and the planes and sums that later phases ask for. Rows may come in any
 *  order; sums are kept a row and added from the top. */
export class ImageInWork {
  readonly extent: Extent;
  readonly encoding: Encoding;
  readonly codes: Codes;
  readonly clipped: Clipped;
  /** Alpha before it is scaled, 65535 is 1; only where coverage is kept. */
  readonly alpha: UnscaledAlpha | null;
  /** Mean lengths of the normals, a float a texel; only where there are normals. */
  readonly lengths: Float32Array | null;
  readonly #coder: RowCoder;
  readonly #holdsColor: boolean;
  readonly #sums: Float64Array;

  /** `coder` stores the rows, where their engine has one. */
  constructor(
    extent: Extent,
    encoding: Encoding,
    planes: { readonly alpha: 'kept' | 'dropped' },
    coder: RowCoder | null = null,
  ) {
    const texels = extent.width * extent.height;
    this.extent = extent;
    this.encoding = encoding;
    this.codes = newCodes(encoding.depth, texels * encoding.layout.channels);
    this.clipped = newClipped(encoding.layout.channels);
    this.alpha = planes.alpha === 'kept' ? { extent, values: new Uint16Array(texels) } : null;
    this.lengths = encoding.layout.normals.length > 0 ? new Float32Array(texels) : null;
    this.#coder = coder ?? plainCoder(encoding);
    this.#holdsColor = holdsColor(encoding.layout);
    this.#sums = new Float64Array(extent.height * SUMS_A_ROW);
  }

  /** Takes a finished float row. `lengths` is given where they were measured apart; otherwise they are this row's own. */
  take(y: number, floats: Float32Array, lengths: Float32Array | null): void {
    const { width } = this.extent;
    const { layout } = this.encoding;
    const coder = this.#coder;
    const own = this.lengths?.subarray(y * width, (y + 1) * width) ?? null;
    if (own !== null) {
      if (lengths === null) coder.measureLengths(floats, own);
      else own.set(lengths);
    }
    const offset = y * width * layout.channels;
    coder.encode(floats, this.codes, offset, this.clipped, own ?? lengths);
    if (this.alpha !== null) coder.keepAlpha(floats, this.alpha.values.subarray(y * width, (y + 1) * width));
    if (!this.#holdsColor) return;
    coder.measure(floats, this.codes, offset, this.#sums, y * SUMS_A_ROW);
  }

  straight(): StraightRaster {
    const { extent, encoding, codes } = this;
    return { kind: 'straight', extent, channels: encoding.layout.channels, depth: encoding.depth, codes };
  }

  light(): LightSum {
    const { width, height } = this.extent;
    const total = new Float64Array(SUMS_A_ROW);
    for (let at = 0; at < this.#sums.length; at++) total[at % SUMS_A_ROW] += this.#sums[at];
    return lightOf(this.encoding.layout, total, width * height);
  }

  normalLength(): number | undefined {
    if (this.lengths === null) return undefined;
    const { width, height } = this.extent;
    let total = 0;
    for (let y = 0; y < height; y++) {
      let row = 0;
      for (let x = 0; x < width; x++) row += Math.min(1, this.lengths[y * width + x]);
      total += row;
    }
    return total / (width * height);
  }
}
