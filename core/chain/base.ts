import { type Codes, expandIndexed, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';
import { floatChannels } from '../resample/decode.ts';
import { decodingOf } from './decoding.ts';
import type { ChainPlan } from './plan.ts';

/** Level 0 while its rows come in: the source's codes where they are asked for later, and the sums of its kernel light. */
export class BaseImage {
  /** Sum of each float channel over all texels, rows added from the top. */
  readonly sums: Float64Array;
  readonly #plan: ChainPlan;
  readonly #samples: Codes | null;
  #filled = 0;

  constructor(plan: ChainPlan) {
    const { extent, channels, depth } = plan.head;
    const texels = extent.width * extent.height;
    this.#plan = plan;
    this.sums = new Float64Array(floatChannels(decodingOf(plan.layout)));
    if (!plan.keepsBase) this.#samples = null;
    else this.#samples = plan.indexed ? new Uint8Array(texels) : newCodes(depth, texels * channels);
  }

  /** The next row of the source, expanded, and its indices where it has a palette. */
  push(codes: Codes, indices: Uint8Array | null): void {
    if (this.#samples === null) return;
    const row = this.#plan.indexed && indices !== null ? indices : codes;
    this.#samples.set(row, this.#filled);
    this.#filled += row.length;
  }

  /** The float row of the source. */
  sum(floats: Float32Array): void {
    const channels = this.sums.length;
    for (let channel = 0; channel < channels; channel++) {
      let row = 0;
      for (let at = channel; at < floats.length; at += channels) row += floats[at];
      this.sums[channel] += row;
    }
  }

  /** The whole source, with indices where the plan keeps them. RangeError where the plan does not hold it. */
  raster(palette: IndexedRaster | null): StraightRaster | IndexedRaster {
    const { extent, channels, depth } = this.#plan.head;
    if (this.#samples === null) throw new RangeError('Expected a plan that keeps its base');
    if (this.#plan.indexed && palette !== null) return { ...palette, extent, indices: this.#samples as Uint8Array };
    return { kind: 'straight', extent, channels, depth, codes: this.#samples };
  }

  /** Rows of codes from the top, for a pass that begins after the source has come in. */
  *rows(palette: IndexedRaster | null): Iterable<Codes> {
    const whole = this.raster(palette);
    const { codes, extent, channels } = whole.kind === 'indexed' ? expandIndexed(whole) : whole;
    const length = extent.width * channels;
    for (let y = 0; y < extent.height; y++) yield codes.subarray(y * length, (y + 1) * length);
  }
}
