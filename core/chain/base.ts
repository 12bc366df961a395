import { type Codes, expandIndexed, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { ChainPlan } from './plan.ts';

/** Level 0 while its rows come in: the source's codes where they are asked for later. */
export class BaseImage {
  readonly #plan: ChainPlan;
  #samples: Codes | null = null;
  #filled = 0;

  constructor(plan: ChainPlan) {
    this.#plan = plan;
  }

  /** For a source that is in memory: it is kept as it is where nothing will be written to it, and its rows are not copied. */
  hold(whole: StraightRaster | IndexedRaster): void {
    if (this.#plan.fill === 'all' || this.#plan.indexed !== (whole.kind === 'indexed')) return;
    this.#samples = whole.kind === 'indexed' ? whole.indices : whole.codes;
    this.#filled = this.#samples.length;
  }

  /** The next row of the source, expanded, and its indices where it has a palette. */
  push(codes: Codes, indices: Uint8Array | null): void {
    if (!this.#plan.keepsBase) return;
    this.#samples ??= this.#newSamples();
    if (this.#filled === this.#samples.length) return;
    const row = this.#plan.indexed && indices !== null ? indices : codes;
    this.#samples.set(row, this.#filled);
    this.#filled += row.length;
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

  #newSamples(): Codes {
    const { extent, channels, depth } = this.#plan.head;
    const texels = extent.width * extent.height;
    return this.#plan.indexed ? new Uint8Array(texels) : newCodes(depth, texels * channels);
  }
}
