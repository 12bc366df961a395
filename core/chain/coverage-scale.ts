import type { Depth } from '../raster/raster.ts';
import { sampleCount, type WrapPair } from './coverage.ts';
import { scaleCounts } from './scale-counts.ts';
import type { UnscaledAlpha } from './scaled-alpha.ts';

export interface CoverageScale {
  readonly scale: number;
  /** Coverage reached minus coverage wanted. */
  readonly residual: number;
  /** No scale can come nearer: alpha has too few distinct values. */
  readonly tie: boolean;
}

/** The scale of alpha with which this level covers what `wanted` says, by bisection on stored codes. */
export function findScale(
  alpha: UnscaledAlpha,
  depth: Depth,
  passing: number,
  wrap: WrapPair,
  wanted: number,
): CoverageScale {
  const samples = sampleCount(alpha.extent);
  const goal = wanted * samples;
  const counts = scaleCounts(alpha, depth, passing, wrap);
  const one = counts.countAt(1);
  let low = { scale: LEAST_SCALE, count: counts.countAt(LEAST_SCALE) };
  counts.raise();
  let high = { scale: MOST_SCALE, count: counts.countAt(MOST_SCALE) };
  counts.lower();
  const ends = low.count >= goal ? low : high.count <= goal ? high : null;
  if (ends !== null) low = high = ends;
  for (let step = 0; step < STEPS && low !== high; step++) {
    const scale = (low.scale + high.scale) / 2;
    const middle = { scale, count: counts.countAt(scale) };
    if (middle.count >= goal) {
      high = middle;
      counts.lower();
    } else {
      low = middle;
      counts.raise();
    }
  }
  const nearer = goal - low.count < high.count - goal ? low : high;
  // Many scales can give one coverage: alpha is left alone where 1 is one of them.
  const scale = one === nearer.count ? 1 : nearer.scale;
  return { scale, residual: (nearer.count - goal) / samples, tie: high.count - low.count > 1 };
}

const LEAST_SCALE = 1 / 4;
const MOST_SCALE = 16;
const STEPS = 24;
