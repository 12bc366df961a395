import type { Wrap } from '../../core/kernel/wrap.ts';
import type { Extent } from '../../core/raster/raster.ts';
import type { AlphaTreatment } from '../../core/treatment/treatment.ts';
import { wrapIndex } from './wrap.ts';

/** Levels up to this many texels are sampled; larger ones are counted. */
const SAMPLED_TEXELS = 65_536;

/** The lowest code that passes. glTF 2.0 (MASK) passes at the cutoff itself. */
export function passingCode({ cutoff, test }: Pick<AlphaTreatment, 'cutoff' | 'test'>, max: number): number {
  return test === '>=' ? Math.ceil(cutoff * max) : Math.floor(cutoff * max) + 1;
}

export interface AlphaPlane {
  readonly extent: Extent;
  readonly codes: ArrayLike<number>;
  readonly wrap: { readonly x: Wrap; readonly y: Wrap };
}

/** Share of samples that pass, as a bilinear sampler sees the stored codes. */
export function coverageOf(plane: AlphaPlane, passing: number): number {
  const { width, height } = plane.extent;
  return width * height > SAMPLED_TEXELS ? countedCoverage(plane, passing) : sampledCoverage(plane, passing);
}

export function countedCoverage({ codes }: AlphaPlane, passing: number): number {
  let hits = 0;
  for (let i = 0; i < codes.length; i++) hits += codes[i] >= passing ? 1 : 0;
  return hits / codes.length;
}

/** 4 by 4 samples a texel at (k + 1/2)/4, against half a code below the passing one. */
export function sampledCoverage({ extent, codes, wrap }: AlphaPlane, passing: number): number {
  const read = (x: number, y: number): number => {
    const u = wrapIndex(x, extent.width, wrap.x);
    const v = wrapIndex(y, extent.height, wrap.y);
    return u === null || v === null ? 0 : codes[v * extent.width + u];
  };
  let hits = 0;
  for (let sy = 0; sy < extent.height * 4; sy++) {
    for (let sx = 0; sx < extent.width * 4; sx++) {
      const u = (sx + 0.5) / 4 - 0.5;
      const v = (sy + 0.5) / 4 - 0.5;
      const x = Math.floor(u);
      const y = Math.floor(v);
      const top = read(x, y) * (x + 1 - u) + read(x + 1, y) * (u - x);
      const bottom = read(x, y + 1) * (x + 1 - u) + read(x + 1, y + 1) * (u - x);
      hits += top * (y + 1 - v) + bottom * (v - y) >= passing - 0.5 ? 1 : 0;
    }
  }
  return hits / (extent.width * extent.height * 16);
}

export interface CoverageSearch {
  readonly scale: number;
  readonly coverage: number;
  /** Coverage on the two sides of the last bracket. */
  readonly bracket: readonly [number, number];
}

/** The scale of alpha that brings coverage nearest to `wanted`; equal distances go to more coverage. */
export function searchScale(measure: (scale: number) => number, wanted: number): CoverageSearch {
  let low = 1 / 4;
  let high = 16;
  for (let step = 0; step < 24; step++) {
    const middle = (low + high) / 2;
    if (measure(middle) < wanted) low = middle;
    else high = middle;
  }
  const less = measure(low);
  const more = measure(high);
  const takeMore = Math.abs(more - wanted) <= Math.abs(wanted - less);
  return { scale: takeMore ? high : low, coverage: takeMore ? more : less, bracket: [less, more] };
}
