import { containerLayout } from '../build/outputs.ts';
import { peakOf, planBuild, type TexturePlan } from '../build/plan.ts';
import { factsOf } from '../build/source.ts';
import { buildChain, type Chain } from '../chain/chain.ts';
import { passingCode } from '../chain/coverage.ts';
import type { ChainImage } from '../chain/image.ts';
import { decodeImage } from '../codec/decode.ts';
import { openImage } from '../codec/open.ts';
import type { ImageSource, SourceHeader } from '../codec/source.ts';
import { obeyedGamma } from '../codec/tag.ts';
import { type Cancel, Cancelled, type PngTools, type Ports } from '../port.ts';
import { refuse } from '../problem.ts';
import { pictureOf } from '../proof/picture.ts';
import { gpuBytes } from '../raster/gpu-format.ts';
import { expandIndexed, type IndexedRaster, type StraightRaster } from '../raster/raster.ts';
import { plainEngine } from '../resample/plain.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { Seen } from './difference.ts';

/** One side of a review: a file and what its settings say of it. */
export interface ReviewSide {
  /** What the file is called; its extension tells the format. */
  readonly path: string;
  readonly bytes: Uint8Array;
  readonly treatment: Treatment;
}

/** A side whose file has been decoded and whose chain is built, as a build does it. */
export interface Subject {
  readonly side: ReviewSide;
  readonly header: SourceHeader;
  readonly raster: StraightRaster | IndexedRaster;
  readonly chain: Chain;
  /** Bytes that the shipped levels take on the GPU, as the texture's KTX2 holds them. */
  readonly memoryBytes: number;
}

/** What can be said of a side before it is decoded. */
export interface OpenedSide {
  readonly side: ReviewSide;
  readonly image: ImageSource;
  readonly plan: TexturePlan;
  readonly memoryBytes: number;
  /** Bytes that decoding it and building its chain hold at their worst. */
  readonly peakBytes: number;
}

/** Opens a side; its structure is checked and nothing decoded. Throws Refusal for what a build would refuse. */
export function openSide(side: ReviewSide, ports: Pick<Ports, 'inflate' | 'engine' | keyof PngTools>): OpenedSide {
  const image = openImage(side.bytes, side.path, ports.inflate, ports);
  const facts = factsOf(image, side.bytes.length);
  const plan = planBuild(side.path, facts, side.treatment, ports.engine ?? plainEngine);
  const { width, height } = facts.extent;
  // The decoded raster stands beside the chain's own.
  const raster = width * height * facts.channels * (facts.depth / 8);
  return { side, image, plan, memoryBytes: memoryOf(plan), peakBytes: peakOf(facts, plan) + raster };
}

/** Decodes a side and builds its chain. Throws Refusal, Cancelled. */
export async function makeSubject(opened: OpenedSide, ports: Ports, cancel: Cancel): Promise<Subject> {
  const { side, image, memoryBytes } = opened;
  if (cancel.cancelled) throw new Cancelled();
  const raster = await decodeImage(image);
  if (cancel.cancelled) throw new Cancelled();
  return {
    side,
    header: image.header,
    raster,
    chain: chainOf(raster, image.header, side.treatment, ports),
    memoryBytes,
  };
}

/** The chain of a decoded file by a treatment. */
export function chainOf(
  raster: StraightRaster | IndexedRaster,
  header: SourceHeader,
  treatment: Treatment,
  { engine }: Pick<Ports, 'engine'>,
): Chain {
  const gamma = treatment.colorChunks === 'obey' ? obeyedGamma(header.colorChunks) : null;
  return buildChain(raster, treatment, {
    ...(engine === undefined ? {} : { engine }),
    ...(gamma === null ? {} : { gamma }),
  });
}

/** Levels and targets that are shipped, the finest level first. */
export function imagesOf(chain: Chain): readonly ChainImage[] {
  return chain.images.filter((image) => image.use === 'image');
}

/** Whether the first image of the chain is the source, texel by texel and in the same memory. */
export function holdsSource({ chain, raster }: Pick<Subject, 'raster' | 'chain'>): boolean {
  const [first] = imagesOf(chain);
  if (first?.level !== 0) return false;
  const samples = (each: Subject['raster'] | ChainImage['raster']) =>
    each.kind === 'indexed' ? each.indices : each.codes;
  return samples(first.raster) === samples(raster);
}

/** An image of the chain as it is compared. */
export function seenImage(chain: Chain, { raster }: ChainImage): Seen {
  return withTest(chain, pictureOf(chain.plan, raster));
}

/** The source itself as it is compared, before any treatment. */
export function seenSource(subject: Pick<Subject, 'raster' | 'chain'>): Seen {
  const { raster, chain } = subject;
  return withTest(chain, pictureOf(chain.plan, raster.kind === 'indexed' ? expandIndexed(raster) : raster));
}

export function withTest({ plan }: Chain, picture: Seen['picture']): Seen {
  const { alpha } = plan.treatment;
  const isMask = alpha.use === 'mask' && picture.meaning.alpha !== null;
  return { picture, passing: isMask ? passingCode(alpha, picture.depth) : null };
}

/** Refuses what would hold more than is allowed. */
export function checkPeak(bytes: number, limit: number): void {
  if (bytes > limit) refuse('too-much-memory', { bytes, limit });
}

function memoryOf(plan: TexturePlan): number {
  const levels = plan.outputs.images.filter((image) => image.use === 'image' && image.level !== undefined);
  const { format } = containerLayout(plan.chain, 'image', plan.head.channels, plan.chain.depth);
  const bytes = (format.channels * format.depth) / 8;
  return gpuBytes(
    levels.map(({ extent }) => [extent.width, extent.height] as const),
    { width: 1, height: 1, bytes },
  );
}
