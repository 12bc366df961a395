import { encodePng } from '../codec/png/encode.ts';
import type { Cancel, Ports } from '../port.ts';
import type { Picture } from '../proof/want.ts';
import type { Extent, StraightRaster } from '../raster/raster.ts';
import { ReviewBench } from './bench.ts';
import type { Review } from './review.ts';
import type { SizeReview } from './sizes.ts';
import { isSeen } from './visible.ts';
import { HIDDEN_MARK, type PairSide } from './want.ts';

/** Before, after and difference at one size, as PNG files. */
export interface ReviewPictures {
  readonly image: SizeReview['image'];
  readonly extent: Extent;
  readonly before: Uint8Array | null;
  readonly after: Uint8Array | null;
  /** Gray: black is equal, and the lighter the further apart, 0.02 in OKLab a quarter of the way; blue is color under alpha 0. */
  readonly difference: Uint8Array | null;
}

/** The size at which a change is best looked at: where its worst harm is, else the first at which it is seen; of sizes above
 *  `SHOWN_SIDE` the first that is not. Null where there are no sizes. */
export function tellingSize({ sizes, impact }: Review): SizeReview['image'] | null {
  const fits = sizes.filter(({ extent }) => Math.max(extent.width, extent.height) <= SHOWN_SIDE);
  const worst = [...impact.harms].sort((a, b) => b.severity - a.severity).find(({ image }) => image !== null)?.image;
  const harmed = fits.find(({ image }) => worst !== undefined && JSON.stringify(image) === JSON.stringify(worst));
  return (harmed ?? fits.find((size) => isSeen(size) === true) ?? fits[0])?.image ?? null;
}

/** Texels of a side that a report shows at most. */
export const SHOWN_SIDE = 512;

/** Pictures of a pair at one size, the prints as a build stores them. Throws Refusal, Cancelled. */
export async function reviewPictures(
  before: PairSide,
  after: PairSide,
  image: SizeReview['image'],
  ports: Ports,
  cancel: Cancel,
  options: { readonly memoryBytes: number },
): Promise<ReviewPictures | null> {
  const answer = await new ReviewBench(before, after, ports, options).answer({ kind: 'pair', image }, cancel);
  if (answer.kind !== 'pair') return null;
  const file = (picture: Picture | undefined) =>
    picture === undefined ? null : encodePng(rasterOf(picture), ports.deflate, ports.filters);
  const extent = (answer.before ?? answer.after)?.picture.extent;
  if (extent === undefined) return null;
  return {
    image,
    extent,
    before: await file(answer.before?.picture),
    after: await file(answer.after?.picture),
    difference: answer.marks && (await encodePng(grayOf(answer.marks, extent), ports.deflate, ports.filters)),
  };
}

function rasterOf({ extent, channels, depth, codes }: Picture): StraightRaster {
  return { kind: 'straight', extent, channels, depth, codes };
}

function grayOf(marks: Uint8Array, extent: Extent): StraightRaster {
  const codes = new Uint8Array(marks.length * 3);
  for (const [texel, mark] of marks.entries()) {
    if (mark === HIDDEN_MARK) codes.set(HIDDEN_COLOR, texel * 3);
    // Square roots lift small distances: 5 of 250, what is just seen, to 64 of 255 or so with the floor below.
    else if (mark > 0) codes.fill(Math.round(32 + 223 * Math.sqrt(mark / 254)), texel * 3, texel * 3 + 3);
  }
  return { kind: 'straight', extent, channels: 3, depth: 8, codes };
}

const HIDDEN_COLOR = [40, 70, 160];
