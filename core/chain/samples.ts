import { type Wrap, wrapIndex } from '../kernel/wrap.ts';

// A sampler's view of a mask: each texel is read at (i + 1/2) / 4 of both axes, so -3/8, -1/8, 1/8, 3/8 from its center, between it
// and its neighbors. Weights are eighths, sums integers over 64, and a sample passes from passing - 1/2 on.

/** Samples of a texel. */
export const SAMPLES = 16;

/** How many samples of a texel pass. `around` holds the codes of the texel's three by three, row by row. */
export function passingSamples(around: Int32Array, passing: number): number {
  const least = 64 * passing - 32;
  const own = around[4];
  return (
    passingQuarter(own, around[3], around[1], around[0], least) +
    passingQuarter(own, around[5], around[1], around[2], least) +
    passingQuarter(own, around[3], around[7], around[6], least) +
    passingQuarter(own, around[5], around[7], around[8], least)
  );
}

/** The four samples of a texel that lie toward one diagonal neighbor: 1/8 or 3/8 of the way on each axis. */
function passingQuarter(own: number, aside: number, above: number, corner: number, least: number): number {
  const near = 7 * own + aside;
  const far = 7 * above + corner;
  const nearAside = 5 * own + 3 * aside;
  const farAside = 5 * above + 3 * corner;
  return (
    reaches(7 * near + far, least) +
    reaches(5 * near + 3 * far, least) +
    reaches(7 * nearAside + farAside, least) +
    reaches(5 * nearAside + 3 * farAside, least)
  );
}

/** 1 or 0, without a branch: along an edge no processor guesses which. */
function reaches(sum: number, least: number): number {
  return ((sum - least) >>> 31) ^ 1;
}

/** Wrapped indices of -1..count. */
export function neighbors(count: number, wrap: Wrap): Int32Array {
  return Int32Array.from({ length: count + 2 }, (_, i) => wrapIndex(i - 1, count, wrap));
}
