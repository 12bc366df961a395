import type { Depth, Extent } from '../raster/raster.ts';
import { isSampled, SAMPLED_TEXELS, type WrapPair } from './coverage.ts';
import { neighbors, passingSamples, SAMPLES } from './samples.ts';
import { leastPassing, scaledCode, type UnscaledAlpha } from './scaled-alpha.ts';

/** How many samples pass at a scale of alpha. The more it is scaled, the more pass: what a sample does at both ends of a range it does
 *  between them, and a search that narrows its range looks at ever fewer. */
export interface ScaleCounts {
  /** `scale` lies within the range, and is its new end where `raise` or `lower` follows. */
  countAt(scale: number): number;
  /** No scale below the last one will be asked about. */
  raise(): void;
  /** No scale above the last one will be asked about. */
  lower(): void;
}

/** A scale's code passes from `passing` on. Counts what `measureCoverage` counts. */
export function scaleCounts(alpha: UnscaledAlpha, depth: Depth, passing: number, wrap: WrapPair): ScaleCounts {
  return isSampled(alpha.extent)
    ? new SampledCounts(alpha, depth, passing, wrap)
    : new TexelCounts(alpha, depth, passing);
}

/** Bytes that the counts of the largest of some levels take. */
export function scaleCountsBytes(largest: number): number {
  return Math.min(largest, SAMPLED_TEXELS) * 13 + 65537 * 4;
}

/** Texels, from how many there are of each value or more. */
class TexelCounts implements ScaleCounts {
  readonly #depth: Depth;
  readonly #passing: number;
  readonly #orMore = new Uint32Array(65537);

  constructor({ values }: UnscaledAlpha, depth: Depth, passing: number) {
    this.#depth = depth;
    this.#passing = passing;
    for (const value of values) this.#orMore[value]++;
    for (let value = 65535; value >= 0; value--) this.#orMore[value] += this.#orMore[value + 1];
  }

  countAt(scale: number): number {
    return this.#orMore[leastPassing(this.#passing, scale, this.#depth)];
  }

  raise(): void {}

  lower(): void {}
}

/** Sixteen samples a texel. A texel is open as long as it does not count the same at both ends of the range. */
class SampledCounts implements ScaleCounts {
  readonly #depth: Depth;
  readonly #passing: number;
  /** Values with a frame of wrapped ones around them; the border is 0. */
  readonly #values: Uint16Array;
  readonly #stride: number;
  /** The least and the greatest value of a texel's three by three: where both pass or neither does, so do all samples. */
  readonly #least: Uint16Array;
  readonly #most: Uint16Array;
  /** Places of the open texels among the values, and how many samples of each pass at both ends and at the last scale. */
  readonly #open: Uint32Array;
  readonly #low: Uint8Array;
  readonly #high: Uint8Array;
  readonly #last: Uint8Array;
  #count: number;
  /** Samples that pass, of texels that are no longer open. */
  #settled = 0;
  readonly #around = new Int32Array(9);

  constructor(alpha: UnscaledAlpha, depth: Depth, passing: number, wrap: WrapPair) {
    const { extent } = alpha;
    this.#depth = depth;
    this.#passing = passing;
    this.#stride = extent.width + 2;
    this.#values = framed(alpha, wrap);
    this.#least = spread(this.#values, extent, Math.min);
    this.#most = spread(this.#values, extent, Math.max);
    this.#count = extent.width * extent.height;
    this.#open = new Uint32Array(this.#count);
    for (let y = 0, at = 0; y < extent.height; y++) {
      for (let x = 0; x < extent.width; x++, at++) this.#open[at] = (y + 1) * this.#stride + x + 1;
    }
    this.#low = new Uint8Array(this.#count);
    this.#high = new Uint8Array(this.#count).fill(SAMPLES);
    this.#last = new Uint8Array(this.#count);
  }

  countAt(scale: number): number {
    const from = leastPassing(this.#passing, scale, this.#depth);
    let count = this.#settled;
    for (let i = 0; i < this.#count; i++) {
      const at = this.#open[i];
      const own = this.#least[at] >= from ? SAMPLES : this.#most[at] < from ? 0 : this.#samplesAt(at, scale);
      this.#last[i] = own;
      count += own;
    }
    return count;
  }

  raise(): void {
    this.#low.set(this.#last);
    this.#settle();
  }

  lower(): void {
    this.#high.set(this.#last);
    this.#settle();
  }

  #settle(): void {
    let kept = 0;
    for (let i = 0; i < this.#count; i++) {
      if (this.#low[i] === this.#high[i]) {
        this.#settled += this.#low[i];
        continue;
      }
      this.#open[kept] = this.#open[i];
      this.#low[kept] = this.#low[i];
      this.#high[kept] = this.#high[i];
      kept++;
    }
    this.#count = kept;
  }

  #samplesAt(at: number, scale: number): number {
    const around = this.#around;
    for (let dy = 0, i = 0; dy < 3; dy++) {
      const row = at + (dy - 1) * this.#stride - 1;
      for (let dx = 0; dx < 3; dx++, i++) around[i] = scaledCode(this.#values[row + dx], scale, this.#depth);
    }
    return passingSamples(around, this.#passing);
  }
}

function framed({ extent, values }: UnscaledAlpha, wrap: WrapPair): Uint16Array {
  const columns = neighbors(extent.width, wrap.x);
  const rows = neighbors(extent.height, wrap.y);
  const whole = new Uint16Array(columns.length * rows.length);
  for (let y = 0, at = 0; y < rows.length; y++) {
    for (let x = 0; x < columns.length; x++, at++) {
      if (columns[x] >= 0 && rows[y] >= 0) whole[at] = values[rows[y] * extent.width + columns[x]];
    }
  }
  return whole;
}

/** One value of each texel's three by three, in their frame, which itself keeps what is in no texel. */
function spread(values: Uint16Array, { width, height }: Extent, of: (a: number, b: number) => number): Uint16Array {
  const stride = width + 2;
  const along = values.slice();
  const ends = (height + 2) * stride - 1;
  for (let at = 1; at < ends; at++) along[at] = of(of(values[at - 1], values[at]), values[at + 1]);
  const across = along.slice();
  for (let at = stride + 1; at < ends - stride; at++) {
    across[at] = of(of(along[at - stride], along[at]), along[at + stride]);
  }
  return across;
}
