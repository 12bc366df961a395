import { roundedCode } from '../color/encoder.ts';
import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import { type Codes, type Depth, type Extent, maxCode } from '../raster/raster.ts';
import type { AlphaTreatment } from '../treatment/treatment.ts';

// Coverage is the share of samples whose alpha passes the test, measured on stored codes as a sampler sees them: a mask is
// magnified with bilinear filtering before it is tested, so counting texels alone overstates thin shapes.  [Castano10]

/** A plane of alpha codes: every `stride`-th code from `start`. */
export interface AlphaPlane {
  readonly extent: Extent;
  readonly depth: Depth;
  readonly codes: Codes;
  readonly stride: number;
  readonly start: number;
}

export type WrapPair = { readonly x: Wrap; readonly y: Wrap };

/** The least code that passes: ceil(cutoff max) for `>=`, floor(cutoff max) + 1 for `>`.  [glTF2, alphaCutoff] */
export function passingCode(alpha: AlphaTreatment, depth: Depth): number {
  const edge = alpha.cutoff * maxCode(depth);
  return alpha.test === '>=' ? Math.ceil(edge) : Math.floor(edge) + 1;
}

/** Share of samples that pass, 0..1. */
export function measureCoverage(plane: AlphaPlane, passing: number, wrap: WrapPair): number {
  return countPassing(plane, passing, wrap) / sampleCount(plane.extent);
}

/** Samples that coverage is counted on: 16 bilinear ones a texel on small levels, texels on large ones, where the two
 *  agree and 16 times the work buys nothing. */
export function sampleCount(extent: Extent): number {
  const texels = extent.width * extent.height;
  return texels <= SAMPLED_TEXELS ? texels * 16 : texels;
}

const SAMPLED_TEXELS = 65536;

export function countPassing(plane: AlphaPlane, passing: number, wrap: WrapPair): number {
  const { width, height } = plane.extent;
  return width * height <= SAMPLED_TEXELS ? countSamples(plane, passing, wrap) : countTexels(plane, passing);
}

function countTexels(plane: AlphaPlane, passing: number): number {
  const { codes, stride, start } = plane;
  let count = 0;
  for (let i = start; i < codes.length; i += stride) if (codes[i] >= passing) count++;
  return count;
}

/** Samples at (i + 1/2) / 4 of each texel, so -3/8, -1/8, 1/8, 3/8 from its center: weights are eighths, sums integers over
 *  64, and a sample passes from passing - 1/2 on. A mean of codes that all pass is no less than the passing code, and one of codes
 *  that all fail no more than the code before it: only texels along an edge of the mask are sampled, the rest is known. */
function countSamples(plane: AlphaPlane, passing: number, wrap: WrapPair): number {
  const { width, height } = plane.extent;
  const threshold = 64 * passing - 32;
  const columns = neighbors(width, wrap.x);
  const rows = neighbors(height, wrap.y);
  const passes = passingTexels(plane, passing);
  const beyond = passing <= 0 ? 1 : 0;
  // Of each column from -1 to width, how many of its texels in the row, the one above and the one below pass.
  const stacks = new Uint8Array(width + 2);
  let count = 0;
  for (let y = 0; y < height; y++) {
    stacks.fill(0);
    for (let dy = 0; dy < 3; dy++) {
      const row = rows[y + dy];
      for (let x = 0; x < width + 2; x++) {
        const column = columns[x];
        stacks[x] += column < 0 || row < 0 ? beyond : passes[row * width + column];
      }
    }
    for (let x = 0; x < width; x++) {
      const nine = stacks[x] + stacks[x + 1] + stacks[x + 2];
      if (nine === 0) continue;
      if (nine === 9) {
        count += 16;
        continue;
      }
      const at = (dx: number, dy: number): number => {
        const column = columns[x + dx + 1];
        const row = rows[y + dy + 1];
        return column < 0 || row < 0 ? 0 : plane.codes[plane.start + (row * width + column) * plane.stride];
      };
      count += passingQuarter(at(0, 0), at(-1, 0), at(0, -1), at(-1, -1), threshold);
      count += passingQuarter(at(0, 0), at(1, 0), at(0, -1), at(1, -1), threshold);
      count += passingQuarter(at(0, 0), at(-1, 0), at(0, 1), at(-1, 1), threshold);
      count += passingQuarter(at(0, 0), at(1, 0), at(0, 1), at(1, 1), threshold);
    }
  }
  return count;
}

/** 1 for each texel that passes. */
function passingTexels({ extent, codes, start, stride }: AlphaPlane, passing: number): Uint8Array {
  const passes = new Uint8Array(extent.width * extent.height);
  for (let i = 0, at = start; i < passes.length; i++, at += stride) if (codes[at] >= passing) passes[i] = 1;
  return passes;
}

/** The four samples of a texel that lie toward one diagonal neighbor: 1/8 or 3/8 of the way on each axis. */
function passingQuarter(own: number, aside: number, above: number, corner: number, threshold: number): number {
  let count = 0;
  for (let v = 1; v <= 3; v += 2) {
    for (let u = 1; u <= 3; u += 2) {
      const near = own * (8 - u) + aside * u;
      const far = above * (8 - u) + corner * u;
      if (near * (8 - v) + far * v >= threshold) count++;
    }
  }
  return count;
}

/** Wrapped indices of -1..count. */
function neighbors(count: number, wrap: Wrap): Int32Array {
  return Int32Array.from({ length: count + 2 }, (_, i) => wrapIndex(i - 1, count, wrap));
}

/** Alpha before it is stored: 65535 is 1. */
export interface UnscaledAlpha {
  readonly extent: Extent;
  readonly values: Uint16Array;
}

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
  const counter = scaledCounter(alpha, depth, passing, wrap);
  const goal = wanted * samples;
  let low = { scale: LEAST_SCALE, count: counter(LEAST_SCALE) };
  let high = { scale: MOST_SCALE, count: counter(MOST_SCALE) };
  const ends = low.count >= goal ? low : high.count <= goal ? high : null;
  if (ends !== null) low = high = ends;
  for (let step = 0; step < STEPS && low !== high; step++) {
    const scale = (low.scale + high.scale) / 2;
    const middle = { scale, count: counter(scale) };
    if (middle.count >= goal) high = middle;
    else low = middle;
  }
  const nearer = goal - low.count < high.count - goal ? low : high;
  // Many scales can give one coverage: alpha is left alone where 1 is one of them.
  const one = counter(1);
  const scale = one === nearer.count ? 1 : nearer.scale;
  return { scale, residual: (nearer.count - goal) / samples, tie: high.count - low.count > 1 };
}

const LEAST_SCALE = 1 / 4;
const MOST_SCALE = 16;
const STEPS = 24;

/** The code that `value` of 65535 is stored as when alpha is scaled. */
export function scaledCode(value: number, scale: number, depth: Depth): number {
  const max = maxCode(depth);
  return roundedCode(Math.min(1, (scale * value) / 65535) * max, max);
}

/** Counts passing samples for a scale. What each of the distinct alphas is stored as is found once a scale; large levels are counted
 *  from a histogram of them. */
function scaledCounter(alpha: UnscaledAlpha, depth: Depth, passing: number, wrap: WrapPair): (scale: number) => number {
  const { extent, values } = alpha;
  const histogram = new Uint32Array(65536);
  for (const value of values) histogram[value]++;
  const distinct = Uint16Array.from({ length: 65536 }, (_, value) => value).filter((value) => histogram[value] > 0);
  if (values.length > SAMPLED_TEXELS) {
    return (scale) => {
      let count = 0;
      for (let i = distinct.length - 1; i >= 0 && scaledCode(distinct[i], scale, depth) >= passing; i--)
        count += histogram[distinct[i]];
      return count;
    };
  }
  const codes = depth === 8 ? new Uint8Array(values.length) : new Uint16Array(values.length);
  const stored = new Uint16Array(65536);
  return (scale) => {
    for (const value of distinct) stored[value] = scaledCode(value, scale, depth);
    for (let i = 0; i < values.length; i++) codes[i] = stored[values[i]];
    return countPassing({ extent, depth, codes, stride: 1, start: 0 }, passing, wrap);
  };
}
