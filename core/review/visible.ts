import { JUST_SEEN } from './lab.ts';
import type { SizeReview } from './sizes.ts';

/** Whether the change is seen at this size: some texel is at least `JUST_SEEN` from what it was, or coverage moved by a hundredth of all
 *  samples, which is where the edges of a mask went, between its texels. Null where one side is missing. */
export function isSeen(size: SizeReview): boolean | null {
  const { difference } = size;
  if (difference === null) return null;
  return difference.worst >= JUST_SEEN || coverageMove(size) >= LEAST_COVERAGE_MOVE;
}

/** Share of the size that is seen to differ, 0..1. */
export function seenShare(size: SizeReview): number {
  return Math.max(size.difference?.seen ?? 0, coverageMove(size));
}

function coverageMove({ before, after }: SizeReview): number {
  const [was, is] = [before?.coverage ?? null, after?.coverage ?? null];
  return was === null || is === null ? 0 : Math.abs(is - was);
}

/** Common practice. */
const LEAST_COVERAGE_MOVE = 0.01;

/** In words, where a change is seen: `level 0 only`, `levels 0-3`, `every size`, `no size`; empty where nothing was compared. */
export function seenAt(sizes: readonly SizeReview[]): string {
  const compared = sizes.filter((size) => isSeen(size) !== null);
  if (compared.length === 0) return '';
  const seen = compared.filter((size) => isSeen(size) === true);
  if (seen.length === 0) return 'no size';
  if (seen.length === compared.length && seen.length > 1) return 'every size';
  const levels = seen.flatMap(({ image }) => ('level' in image ? image.level : []));
  const targets = seen.flatMap(({ image }) => ('target' in image ? image.target : []));
  const runs = runsOf(levels).map(([first, last]) => (first === last ? `${first}` : `${first}-${last}`));
  const word = levels.length === 1 ? 'level' : 'levels';
  const parts = [...(runs.length === 0 ? [] : [`${word} ${runs.join(', ')}`]), ...targets];
  return `${parts.join(', ')} only`;
}

/** `level 3`, or a target's name. */
export function sayImage(image: SizeReview['image']): string {
  return 'level' in image ? `level ${image.level}` : image.target;
}

function runsOf(levels: readonly number[]): [first: number, last: number][] {
  const runs: [number, number][] = [];
  for (const level of levels) {
    const run = runs.at(-1);
    if (run !== undefined && run[1] === level - 1) run[1] = level;
    else runs.push([level, level]);
  }
  return runs;
}
