import { luminance } from '../color/luminance.ts';
import { decodeTable } from '../color/transfer.ts';
import type { ImageUse } from '../manifest/manifest.ts';
import { type Codes, type Extent, maxCode, newCodes, type Raster, type StraightRaster } from '../raster/raster.ts';
import { type Clipped, newClipped } from './clip.ts';
import type { CoverageScale, UnscaledAlpha } from './coverage.ts';
import { type Encoding, encodeRow } from './encode.ts';
import { frontChannels, holdsColor } from './layout.ts';

/** One finished level or target, with what was measured on the way. */
export interface ChainImage {
  readonly use: ImageUse;
  readonly level?: number;
  readonly target?: string;
  readonly extent: Extent;
  readonly raster: Raster;
  readonly coverage?: number;
  readonly coverageScale?: CoverageScale;
  /** Sums of luminance times alpha, and of alpha, over all texels; the mean is their quotient. */
  readonly light?: LightSum;
  /** Mean length of the mean normals, 0..1. */
  readonly normalLength?: number;
  readonly clipped: Clipped;
}

export interface LightSum {
  readonly light: number;
  readonly weight: number;
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
  readonly #light: Float64Array;
  readonly #weight: Float64Array;

  constructor(extent: Extent, encoding: Encoding, planes: { readonly alpha: 'kept' | 'dropped' }) {
    const texels = extent.width * extent.height;
    this.extent = extent;
    this.encoding = encoding;
    this.codes = newCodes(encoding.depth, texels * encoding.layout.channels);
    this.clipped = newClipped(encoding.layout.channels);
    this.alpha = planes.alpha === 'kept' ? { extent, values: new Uint16Array(texels) } : null;
    this.lengths = encoding.layout.normals.length > 0 ? new Float32Array(texels) : null;
    this.#light = new Float64Array(extent.height);
    this.#weight = new Float64Array(extent.height);
  }

  /** Takes a finished float row. `lengths` is given where they were measured apart; otherwise they are this row's own. */
  take(y: number, floats: Float32Array, lengths: Float32Array | null): void {
    const { width } = this.extent;
    const { layout } = this.encoding;
    const own = this.lengths?.subarray(y * width, (y + 1) * width) ?? null;
    if (own !== null) {
      if (lengths === null) measureLengths(this.encoding, floats, own);
      else own.set(lengths);
    }
    encodeRow(this.encoding, floats, this.codes, y * width * layout.channels, this.clipped, own ?? lengths);
    if (this.alpha !== null) keepAlpha(this.encoding, floats, this.alpha.values.subarray(y * width, (y + 1) * width));
    if (holdsColor(layout)) this.#measureLight(y, floats);
  }

  straight(): StraightRaster {
    const { extent, encoding, codes } = this;
    return { kind: 'straight', extent, channels: encoding.layout.channels, depth: encoding.depth, codes };
  }

  light(): LightSum {
    const sum = (rows: Float64Array): number => rows.reduce((total, row) => total + row, 0);
    return { light: sum(this.#light), weight: sum(this.#weight) };
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

  #measureLight(y: number, floats: Float32Array): void {
    const { layout, floatChannels } = this.encoding;
    const row = sumLight(
      this.encoding,
      this.codes.subarray(y * this.extent.width * layout.channels),
      this.extent.width,
      (x) =>
        layout.alpha === null ? 1 : clampedShare(floats[x * floatChannels + layout.alpha], maxCode(layout.depth)),
    );
    this.#light[y] = row.light;
    this.#weight[y] = row.weight;
  }
}

/** Luminance of stored codes, weighed by `weightOf` each texel. */
export function sumLight(encoding: Encoding, codes: Codes, texels: number, weightOf: (x: number) => number): LightSum {
  const { layout, depth } = encoding;
  const { channels } = layout;
  const tables = layout.roles.slice(0, frontChannels(channels)).map((role) => {
    const coded = encoding.light === 'coded' && role.kind === 'color' && role.stored === 'srgb';
    return { table: decodeTable(depth, coded ? 'srgb' : 'linear'), whole: coded ? 1 : maxCode(depth) };
  });
  const [red, green = red, blue = red] = tables;
  const [r, g, b] = tables.length === 1 ? [0, 0, 0] : [0, 1, 2];
  const premultiplied = encoding.store === 'premultiplied' && layout.alpha !== null;
  let light = 0;
  let weight = 0;
  for (let x = 0, at = 0; x < texels; x++, at += channels) {
    const y = luminance(
      red.table[codes[at + r]] / red.whole,
      green.table[codes[at + g]] / green.whole,
      blue.table[codes[at + b]] / blue.whole,
    );
    const share = weightOf(x);
    light += premultiplied ? y : y * share;
    weight += share;
  }
  return { light, weight };
}

function clampedShare(value: number, max: number): number {
  return Math.min(1, Math.max(0, value / max));
}

function keepAlpha(encoding: Encoding, floats: Float32Array, values: Uint16Array): void {
  const { layout, floatChannels } = encoding;
  const alpha = layout.alpha!;
  const max = maxCode(layout.depth);
  for (let x = 0; x < values.length; x++) {
    values[x] = Math.floor(clampedShare(floats[x * floatChannels + alpha], max) * 65535 + 0.5);
  }
}

/** Length of the mean normal over each texel, alpha taken out again where it weighs normals. */
function measureLengths(encoding: Encoding, floats: Float32Array, lengths: Float32Array): void {
  const { layout, floatChannels: stride } = encoding;
  const [group] = layout.normals;
  const divider = layout.weighted.includes(group.x) ? layout.alpha : null;
  for (let x = 0; x < lengths.length; x++) {
    const at = x * stride;
    const [nx, ny, nz] = [floats[at + group.x], floats[at + group.y], floats[at + group.z]];
    const length = Math.sqrt(nx * nx + ny * ny + nz * nz);
    const whole = divider === null ? 1 : floats[at + divider];
    lengths[x] = whole > 0 ? length / whole : 0;
  }
}
