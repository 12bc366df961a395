import { type Codes, expandIndexed, type IndexedRaster, type StraightRaster } from '../raster/raster.ts';
import type { Engine, RowsRun } from '../resample/engine.ts';
import { plainEngine } from '../resample/plain.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { BaseImage } from './base.ts';
import { type BaseFacts, baseFacts, withoutBase } from './base-facts.ts';
import { draftImages } from './draft.ts';
import { finishImages } from './finish.ts';
import { type ChainImage, ImageInWork } from './image.ts';
import type { ChainHead } from './layout.ts';
import {
  type ChainPlan,
  type Light,
  lengthPassOf,
  type PlannedLevel,
  type PlannedTarget,
  passOf,
  pictureExtent,
  planChain,
} from './plan.ts';
import { buildSheet } from './sheet.ts';
import { encodingOf } from './store.ts';

/** All that a treatment makes of one image. Level 0 comes first. */
export interface Chain {
  readonly images: readonly ChainImage[];
  readonly notes: readonly string[];
  /** Mean lengths of the normals of each image but level 0, in the order of `images`; empty where there are no normals. */
  readonly lengths: ReadonlyMap<PlannedLevel | PlannedTarget, Float32Array>;
  readonly plan: ChainPlan;
  /** What is known of level 0 where it was not kept, and so is not among the images; else null. */
  readonly base: BaseFacts | null;
}

export interface ChainOptions {
  /** `dropped`: nobody asks for the codes of level 0. They are kept all the same where the chain needs them. */
  readonly base?: 'kept' | 'dropped';
  readonly engine?: Engine;
  readonly light?: Light;
  /** The gamma that the file's tag names, where it is obeyed. */
  readonly gamma?: number;
  /** Mean normal lengths that this image's roughness takes up, by level and target. */
  readonly lengthsOf?: (image: PlannedLevel | PlannedTarget) => Float32Array | null;
}

/** Builds every level and target of an image in memory. Level 0 may share its codes with the source. Throws Refusal where the treatment does not fit the image. */
export function buildChain(
  source: StraightRaster | IndexedRaster,
  treatment: Treatment,
  options: ChainOptions = {},
): Chain {
  if (treatment.grid !== null) return buildSheet(source, treatment, options);
  const run = new ChainRun(headOf(source, options.gamma), treatment, options);
  if (source.kind === 'indexed') run.setPalette(source);
  run.hold(source);
  const { width, height } = source.extent;
  const samples = source.kind === 'indexed' ? source.indices : source.codes;
  const row = source.kind === 'indexed' ? width : width * source.channels;
  for (let y = 0; y < height; y++) run.push(samples.subarray(y * row, (y + 1) * row));
  return run.finish();
}

export function headOf(source: StraightRaster | IndexedRaster, gamma?: number): ChainHead {
  const tag = gamma === undefined ? {} : { gamma };
  if (source.kind === 'straight') {
    return { extent: source.extent, channels: source.channels, depth: source.depth, indexed: false, ...tag };
  }
  const channels = source.alphaCount > 0 ? 4 : 3;
  return { extent: source.extent, channels, depth: 8, indexed: gamma === undefined, ...tag };
}

/** A chain that takes its source row by row. */
export class ChainRun {
  readonly plan: ChainPlan;
  readonly #options: ChainOptions;
  readonly #base: BaseImage;
  readonly #works = new Map<PlannedLevel | PlannedTarget, ImageInWork>();
  readonly #run: RowsRun | null;
  #palette: IndexedRaster | null = null;

  constructor(head: ChainHead, treatment: Treatment, options: ChainOptions = {}) {
    this.#options = options;
    const plan = planChain(head, treatment, options.light);
    this.plan = options.base === 'dropped' ? withoutBase(plan) : plan;
    this.#base = new BaseImage(this.plan);
    // Where lengths are measured apart, they must be there before the first row of the chain.
    this.#run = this.plan.lengthPass ? null : this.#openPass(() => null);
  }

  /** For an indexed source: its palette. Rows then hold indices. */
  setPalette(source: IndexedRaster): void {
    this.#palette = source;
  }

  /** For a source that is in memory: rows are pushed as well, and not copied. */
  hold(source: StraightRaster | IndexedRaster): void {
    this.#base.hold(source);
  }

  /** Rows of the source from the top, each once. */
  push(codes: Codes): void {
    if (this.#palette === null) {
      this.#base.push(codes, null);
      this.#run?.push(codes);
      return;
    }
    const indices = codes as Uint8Array;
    const row = { ...this.#palette, extent: { width: indices.length, height: 1 }, indices };
    const expanded = expandIndexed(row).codes;
    this.#base.push(expanded, indices);
    this.#run?.push(expanded);
  }

  finish(): Chain {
    const run = this.#run ?? this.#replay();
    const { plan } = this;
    const source = plan.keepsBase ? this.#base.raster(this.#palette) : null;
    const images = finishImages(plan, draftImages(plan, source, this.#works), run);
    const lengths = new Map<PlannedLevel | PlannedTarget, Float32Array>();
    for (const [image, work] of this.#works) if (work.lengths !== null) lengths.set(image, work.lengths);
    const base = plan.keepsBase || !plan.levels[0].shipped ? null : baseFacts(plan, run.sums());
    return { images, notes: plan.notes, lengths, plan, base };
  }

  #openPass(lengthsOf: (image: PlannedLevel | PlannedTarget, y: number) => Float32Array | null): RowsRun {
    const { plan } = this;
    const { pass, nodes } = passOf(plan);
    const encoding = encodingOf(plan);
    const outer = this.#options.lengthsOf;
    const alpha = plan.keepsCoverage ? 'kept' : 'dropped';
    const engine = this.#options.engine ?? plainEngine;
    const run = engine.open(pass, (node, y, floats) => {
      if (node === 0) return;
      const image = nodes[node - 1];
      const work = this.#works.get(image);
      if (work === undefined) return;
      const given = outer?.(image);
      const { width } = work.extent;
      work.take(y, floats, given?.subarray(y * width, (y + 1) * width) ?? lengthsOf(image, y));
    });
    for (const image of nodes) {
      if (!isStored(plan, image)) continue;
      this.#works.set(image, new ImageInWork(pictureExtent(image), encoding, { alpha }, run.coder));
    }
    return run;
  }

  /** Measures lengths from the kept base, then runs the chain over it. */
  #replay(): RowsRun {
    const { plan } = this;
    const { nodes } = passOf(plan);
    const encoding = encodingOf(plan);
    const planes = new Map<PlannedLevel | PlannedTarget, ImageInWork>();
    const engine = this.#options.engine ?? plainEngine;
    const measuring = engine.open(lengthPassOf(plan), (node, y, floats) => {
      if (node > 0) planes.get(nodes[node - 1])!.take(y, floats, null);
    });
    for (const image of nodes) {
      planes.set(image, new ImageInWork(pictureExtent(image), encoding, { alpha: 'dropped' }, measuring.coder));
    }
    for (const row of this.#base.rows(this.#palette)) measuring.push(row);
    const run = this.#openPass((image, y) => {
      const plane = planes.get(image)!;
      return plane.lengths!.subarray(y * plane.extent.width, (y + 1) * plane.extent.width);
    });
    for (const row of this.#base.rows(this.#palette)) run.push(row);
    return run;
  }
}

/** Levels finer than the first that ships are only gone through where nothing takes up their codes or lengths: to store them is much of a
 *  chain's work. */
function isStored({ treatment, layout, targets, fill }: ChainPlan, image: PlannedLevel | PlannedTarget): boolean {
  const { levels, height } = treatment;
  if (!('level' in image) || levels === 'none' || image.shipped || image.level > levels.first) return true;
  return layout.normals.length > 0 || height.minmax || (fill !== 'none' && targets.length > 0);
}
