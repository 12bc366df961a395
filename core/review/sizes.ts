import type { ChainImage } from '../chain/image.ts';
import { seenPicture } from '../proof/sample.ts';
import type { Picture } from '../proof/want.ts';
import type { Extent } from '../raster/raster.ts';
import { comparePictures, type Difference, type Seen } from './difference.ts';
import { imagesOf, type Subject, seenImage, withTest } from './subject.ts';

/** What was measured on the image that one side shows at a size. */
export interface SizeFigures {
  /** The image that is shown: its own extent, which another size is magnified or minified from. */
  readonly extent: Extent;
  /** Share of samples that pass the cutoff; null where alpha is no mask. */
  readonly coverage: number | null;
  /** Alpha-weighted mean of linear luminance, 0..1; null where there is no light. */
  readonly luminance: number | null;
  /** Mean length of the mean normals, 0..1; null where there are none. */
  readonly normalLength: number | null;
}

/** Before and after at one size. */
export interface SizeReview {
  /** The level of the side with more texels, or the target's name. */
  readonly image: { readonly level: number } | { readonly target: string };
  readonly extent: Extent;
  /** Null where this side has nothing for it: a target that the settings do not name. */
  readonly before: SizeFigures | null;
  readonly after: SizeFigures | null;
  /** Null where a side is. */
  readonly difference: Difference | null;
}

/** A size of a review and the picture of each side at it, of one extent. */
export interface SizePair {
  readonly image: SizeReview['image'];
  readonly extent: Extent;
  readonly before: Shown | null;
  readonly after: Shown | null;
}

export interface Shown {
  readonly figures: SizeFigures;
  readonly seen: () => Seen;
}

/** Every size at which either side is seen: the levels of the side with more texels (of `before` where equal), finest first,
 *  then targets by name. A side without an image of that extent shows what a sampler shows of its levels: a file saved
 *  at half size is magnified at the first, and at the second its level 0 stands for the other's level 1. */
export function pairSizes(before: Subject, after: Subject): readonly SizePair[] {
  const first = areaOf(after.header.extent) > areaOf(before.header.extent) ? after : before;
  const levels = imagesOf(first.chain)
    .filter((image) => image.level !== undefined)
    .map(({ level, extent }) => ({
      image: { level: level! },
      extent,
      before: showLevel(before, extent),
      after: showLevel(after, extent),
    }));
  const names = new Set([before, after].flatMap(({ chain }) => imagesOf(chain).flatMap(({ target }) => target ?? [])));
  const targets = [...names].map((name): SizePair => {
    const [one, other] = [targetOf(before, name), targetOf(after, name)];
    const extent = largest([one, other].flatMap((each) => each?.extent ?? []));
    return {
      image: { target: name },
      extent,
      before: showTarget(before, one, extent),
      after: showTarget(after, other, extent),
    };
  });
  return [...levels, ...targets];
}

/** Measures a pair. */
export function reviewSize({ image, extent, before, after }: SizePair): SizeReview {
  const difference = before === null || after === null ? null : comparePictures(before.seen(), after.seen());
  return { image, extent, before: before?.figures ?? null, after: after?.figures ?? null, difference };
}

/** The level of that extent, else what a trilinear sampler makes of the levels there are. */
function showLevel(subject: Subject, extent: Extent): Shown | null {
  const levels = imagesOf(subject.chain).filter((image) => image.level !== undefined);
  if (levels.length === 0) return null;
  const exact = levels.find((level) => sameExtent(level.extent, extent));
  if (exact !== undefined) return { figures: figuresOf(exact), seen: () => seenImage(subject.chain, exact) };
  const finer = levels.filter((level) => areaOf(level.extent) >= areaOf(extent)).at(-1) ?? levels[0];
  const coarser = levels[Math.min(levels.indexOf(finer) + 1, levels.length - 1)];
  return {
    figures: figuresOf(finer),
    seen: () => {
      const [near, far] = [finer, coarser].map((level) => seenImage(subject.chain, level).picture);
      const share = lodShare(finer.extent, coarser.extent, extent);
      return withTest(subject.chain, seenPicture(near, far, share, extent, subject.side.treatment.wrap));
    },
  };
}

/** How far between two levels a size lies, 0..1, by lengths: level n is half of level n - 1. */
function lodShare(finer: Extent, coarser: Extent, extent: Extent): number {
  const length = ({ width, height }: Extent): number => Math.max(width, height);
  const [near, far, wanted] = [length(finer), length(coarser), length(extent)];
  if (near === far || wanted >= near) return 0;
  return Math.min(1, (near - wanted) / (near - far));
}

function targetOf(subject: Subject, name: string): ChainImage | undefined {
  return imagesOf(subject.chain).find((image) => image.target === name);
}

function showTarget(subject: Subject, image: ChainImage | undefined, extent: Extent): Shown | null {
  if (image === undefined) return null;
  return {
    figures: figuresOf(image),
    seen: () => {
      const seen = seenImage(subject.chain, image);
      if (sameExtent(image.extent, extent)) return seen;
      return withTest(subject.chain, magnified(seen.picture, extent, subject));
    },
  };
}

function magnified(picture: Picture, extent: Extent, { side }: Subject): Picture {
  return seenPicture(picture, picture, 0, extent, side.treatment.wrap);
}

function figuresOf({ extent, coverage, light, normalLength }: ChainImage): SizeFigures {
  return {
    extent,
    coverage: coverage ?? null,
    luminance: light === undefined ? null : light.weight > 0 ? light.light / light.weight : 0,
    normalLength: normalLength ?? null,
  };
}

function largest(extents: readonly Extent[]): Extent {
  return extents.reduce((most, each) => (areaOf(each) > areaOf(most) ? each : most));
}

function sameExtent(one: Extent, other: Extent): boolean {
  return one.width === other.width && one.height === other.height;
}

function areaOf({ width, height }: Extent): number {
  return width * height;
}
