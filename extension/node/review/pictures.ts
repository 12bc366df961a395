import type { Cancel } from '../../../core/port.ts';
import { Refusal } from '../../../core/problem.ts';
import { type ReviewPictures, reviewPictures, SHOWN_SIDE, tellingSize } from '../../../core/review/pictures.ts';
import type { Review } from '../../../core/review/review.ts';
import type { PairSide } from '../../../core/review/want.ts';
import type { Versions } from '../git/versions.ts';
import { nodePorts } from '../ports.ts';
import type { Judged } from './judge.ts';
import type { ReviewEntry, ReviewVersion } from './list.ts';

/** Pictures of the first entries of a list, as many as a report can hold; null for one that has none. What cannot be shown was said
 *  by its review. Throws Cancelled. */
export async function picturesOf(
  judged: readonly Judged[],
  tools: { readonly versions: Versions; readonly memoryBytes: number; readonly cancel: Cancel },
): Promise<readonly (ReviewPictures | null)[]> {
  const pictures: (ReviewPictures | null)[] = [];
  for (const each of judged.slice(0, MOST_PICTURED)) pictures.push(await pictureOf(each, tools));
  return pictures;
}

/** Up to three pictures of 512x512 each: a page of some 100 MB at the very worst, and of a few in practice. */
const MOST_PICTURED = 50;

async function pictureOf(
  { entry, review, impact }: Judged,
  { versions, memoryBytes, cancel }: Parameters<typeof picturesOf>[1],
): Promise<ReviewPictures | null> {
  const image = review === null || impact.score === 0 ? null : (tellingSize(review) ?? sizeOfOne(entry, review));
  if (image === null) return null;
  try {
    const before = await sideOf(entry.before, entry.oldPath, versions, memoryBytes);
    const after = await sideOf(entry.after, entry.path, versions, memoryBytes);
    return await reviewPictures(before, after, image, nodePorts, cancel, { memoryBytes });
  } catch (error) {
    if (error instanceof Refusal) return null;
    throw error;
  }
}

/** Of a version that is alone, the first shipped level that a report can show. */
function sizeOfOne({ before, after }: ReviewEntry, review: Review): { readonly level: number } | null {
  const extent = (review.after ?? review.before)?.extent;
  const levels = (after ?? before)?.treatment?.levels;
  if (extent === undefined || levels === undefined || levels === 'none') return null;
  let level = levels.first;
  while (Math.max(extent.width, extent.height) >> level > SHOWN_SIDE) level++;
  return levels.last === null || level <= levels.last ? { level } : null;
}

async function sideOf(
  version: ReviewVersion | null,
  path: string,
  versions: Versions,
  memoryBytes: number,
): Promise<PairSide> {
  if (version === null || version.treatment === null) return { kind: 'none' };
  const bytes = await versions.content(version.file, memoryBytes);
  return { kind: 'file', path, bytes: new Uint8Array(bytes).buffer as ArrayBuffer, treatment: version.treatment };
}
