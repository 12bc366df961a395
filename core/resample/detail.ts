import { roundedCode, srgbEncoder } from '../color/encoder.ts';
import { decodeTable, encodeSrgb, type Transfer } from '../color/transfer.ts';
import { type Extent, maxCode, newCodes, type StraightRaster } from '../raster/raster.ts';
import { buildFootprints, checkSmaller, type Footprints } from './footprint.ts';

export interface DetailOptions {
  /** 0, 1/2, 1 or 2. 0 is the plain area average; the more, the more a texel counts that differs from its surroundings. */
  readonly lambda: number;
  /** One a channel: `srgb` averages in linear light, `linear` averages the codes as they are. */
  readonly transfers: readonly Transfer[];
  /** Channels that alpha weighs. */
  readonly weighted: readonly number[];
  /** The channel that weighs them, itself linear; null where nothing is weighed. */
  readonly alpha: number | null;
}

/** Detail-preserving downscale: an area average in which a source texel weighs ||texel - guide||^lambda more, the guide
 *  being the area-averaged image smoothed by [1 2 1; 2 4 2; 1 2 1] / 16, cut and renormalised at the edges. Averages are taken in
 *  the light that `transfers` name, distances between codes, of weighted channels times alpha, so that no color under alpha 0
 *  counts. Where every texel equals the guide, the guide is the result. Colors are 0 where alpha is. In double precision
 *  throughout. Throws RangeError for another lambda and where the target is larger than the source.
 *  [Weber16] */
export function detail(raster: StraightRaster, extent: Extent, options: DetailOptions): StraightRaster {
  checkSmaller(raster.extent, extent);
  const power = powers.get(options.lambda);
  if (power === undefined) throw new RangeError(`Expected 0, 0.5, 1, 2 for lambda but received ${options.lambda}`);
  const { channels } = raster;
  const light = new Light(raster, options);
  const across = buildFootprints(raster.extent.width, extent.width);
  const down = buildFootprints(raster.extent.height, extent.height);
  const guide = smoothed(averages(light, across, down), extent, channels);
  const codes = newCodes(raster.depth, extent.width * extent.height * channels);
  const guideCodes = new Float64Array(channels);
  const sum = new Float64Array(channels);
  for (let jy = 0; jy < extent.height; jy++) {
    for (let jx = 0; jx < extent.width; jx++) {
      const target = (jy * extent.width + jx) * channels;
      light.codesOf(guide, target, guideCodes);
      sum.fill(0);
      let total = 0;
      for (let ky = 0; ky < down.count[jy]; ky++) {
        const row = (down.first[jy] + ky) * raster.extent.width;
        for (let kx = 0; kx < across.count[jx]; kx++) {
          const texel = row + across.first[jx] + kx;
          const overlap = down.overlap[down.start[jy] + ky] * across.overlap[across.start[jx] + kx];
          const weight = overlap * power(light.squaredDistance(texel, guideCodes));
          total += weight;
          light.add(texel, weight, sum);
        }
      }
      for (let c = 0; c < channels; c++) sum[c] = total > 0 ? sum[c] / total : guide[target + c];
      light.write(sum, codes, target);
    }
  }
  return { ...raster, extent, codes };
}

/** Bytes that `detail` holds beside its source and result. */
export function detailBytes(target: Extent, channels: number): number {
  return target.width * target.height * channels * 8 * 2;
}

/** d^lambda from d^2, for the lambdas that square roots reach. */
const powers: ReadonlyMap<number, (squared: number) => number> = new Map<number, (squared: number) => number>([
  [0, () => 1],
  [0.5, (squared) => Math.sqrt(Math.sqrt(squared))],
  [1, (squared) => Math.sqrt(squared)],
  [2, (squared) => squared],
]);

/** The averages of all target texels, premultiplied where alpha weighs. */
function averages(light: Light, across: Footprints, down: Footprints): Float64Array {
  const { channels, width } = light;
  const result = new Float64Array(across.to * down.to * channels);
  const area = across.from * down.from;
  for (let jy = 0; jy < down.to; jy++) {
    for (let jx = 0; jx < across.to; jx++) {
      const target = (jy * across.to + jx) * channels;
      const sum = result.subarray(target, target + channels);
      for (let ky = 0; ky < down.count[jy]; ky++) {
        const row = (down.first[jy] + ky) * width;
        const rowOverlap = down.overlap[down.start[jy] + ky];
        for (let kx = 0; kx < across.count[jx]; kx++) {
          light.add(row + across.first[jx] + kx, rowOverlap * across.overlap[across.start[jx] + kx], sum);
        }
      }
      for (let c = 0; c < channels; c++) sum[c] /= area;
    }
  }
  return result;
}

/** Each texel with its neighbors by [1 2 1; 2 4 2; 1 2 1], those inside alone. */
function smoothed(image: Float64Array, { width, height }: Extent, channels: number): Float64Array {
  const result = new Float64Array(image.length);
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const target = (y * width + x) * channels;
      let total = 0;
      for (let v = Math.max(0, y - 1); v <= Math.min(height - 1, y + 1); v++) {
        for (let u = Math.max(0, x - 1); u <= Math.min(width - 1, x + 1); u++) {
          const weight = (u === x ? 2 : 1) * (v === y ? 2 : 1);
          total += weight;
          for (let c = 0; c < channels; c++) result[target + c] += weight * image[(v * width + u) * channels + c];
        }
      }
      for (let c = 0; c < channels; c++) result[target + c] /= total;
    }
  }
  return result;
}

/** The source's texels as amounts of light that may be added (linear light 0..1 or codes, times alpha 0..1 where it weighs),
 *  and the way back to codes. */
class Light {
  readonly channels: number;
  readonly width: number;
  readonly #raster: StraightRaster;
  readonly #max: 255 | 65535;
  readonly #tables: readonly Float32Array[];
  readonly #isWeighted: readonly boolean[];
  readonly #isSrgb: readonly boolean[];
  readonly #alpha: number | null;

  constructor(raster: StraightRaster, { transfers, weighted, alpha }: DetailOptions) {
    this.channels = raster.channels;
    this.width = raster.extent.width;
    this.#raster = raster;
    this.#max = maxCode(raster.depth);
    this.#tables = transfers.map((transfer) => decodeTable(raster.depth, transfer));
    this.#isWeighted = transfers.map((_, channel) => alpha !== null && weighted.includes(channel));
    this.#isSrgb = transfers.map((transfer) => transfer === 'srgb');
    this.#alpha = alpha;
  }

  add(texel: number, weight: number, sum: Float64Array): void {
    const { codes } = this.#raster;
    const place = texel * this.channels;
    const alpha = this.#alpha === null ? 1 : codes[place + this.#alpha] / this.#max;
    for (let c = 0; c < this.channels; c++) {
      sum[c] += weight * this.#tables[c][codes[place + c]] * (this.#isWeighted[c] ? alpha : 1);
    }
  }

  /** Unrounded codes of the amounts at `place`, those of weighted channels times alpha. */
  codesOf(amounts: Float64Array, place: number, result: Float64Array): void {
    const alpha = this.#alpha === null ? 1 : amounts[place + this.#alpha] / this.#max;
    for (let c = 0; c < this.channels; c++) {
      const isWeighted = this.#isWeighted[c];
      const straight = isWeighted && alpha > 0 ? amounts[place + c] / alpha : amounts[place + c];
      result[c] = (this.#isSrgb[c] ? encodeSrgb(straight) * this.#max : straight) * (isWeighted ? alpha : 1);
    }
  }

  /** From a source texel to what `codesOf` gave, over all channels, in codes squared. */
  squaredDistance(texel: number, guide: Float64Array): number {
    const { codes } = this.#raster;
    const place = texel * this.channels;
    const alpha = this.#alpha === null ? 1 : codes[place + this.#alpha] / this.#max;
    let sum = 0;
    for (let c = 0; c < this.channels; c++) {
      const difference = codes[place + c] * (this.#isWeighted[c] ? alpha : 1) - guide[c];
      sum += difference * difference;
    }
    return sum;
  }

  write(amounts: Float64Array, codes: { [index: number]: number }, place: number): void {
    const alpha = this.#alpha === null ? 1 : amounts[this.#alpha] / this.#max;
    for (let c = 0; c < this.channels; c++) {
      const isWeighted = this.#isWeighted[c];
      const straight = isWeighted ? (alpha > 0 ? amounts[c] / alpha : 0) : amounts[c];
      codes[place + c] = this.#isSrgb[c]
        ? srgbEncoder(this.#raster.depth).codeOf(straight)
        : roundedCode(straight, this.#max);
    }
  }
}
