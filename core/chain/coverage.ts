import type { Wrap } from '../kernel/wrap.ts';
import { type Codes, type Depth, type Extent, maxCode } from '../raster/raster.ts';
import type { AlphaTreatment } from '../treatment/treatment.ts';
import { neighbors, passingSamples, SAMPLES } from './samples.ts';

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
  return isSampled(extent) ? texels * SAMPLES : texels;
}

/** Whether coverage of the extent is counted on samples, and not on texels. */
export function isSampled({ width, height }: Extent): boolean {
  return width * height <= SAMPLED_TEXELS;
}

export const SAMPLED_TEXELS = 65536;

function countPassing(plane: AlphaPlane, passing: number, wrap: WrapPair): number {
  return isSampled(plane.extent) ? countSamples(plane, passing, wrap) : countTexels(plane, passing);
}

function countTexels(plane: AlphaPlane, passing: number): number {
  const { codes, stride, start } = plane;
  let count = 0;
  for (let i = start; i < codes.length; i += stride) if (codes[i] >= passing) count++;
  return count;
}

/** A mean of codes that all pass is no less than the passing code, and one of codes that all fail no more than the code before it:
 *  only texels along an edge of the mask are sampled, the rest is known. */
function countSamples(plane: AlphaPlane, passing: number, wrap: WrapPair): number {
  const { width, height } = plane.extent;
  const columns = neighbors(width, wrap.x);
  const rows = neighbors(height, wrap.y);
  const passes = passingTexels(plane, passing);
  const beyond = passing <= 0 ? 1 : 0;
  // Of each column from -1 to width, how many of its texels in the row, the one above and the one below pass.
  const stacks = new Uint8Array(width + 2);
  const around = new Int32Array(9);
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
        count += SAMPLES;
        continue;
      }
      for (let dy = 0, at = 0; dy < 3; dy++) {
        for (let dx = 0; dx < 3; dx++, at++) {
          const column = columns[x + dx];
          const row = rows[y + dy];
          around[at] = column < 0 || row < 0 ? 0 : plane.codes[plane.start + (row * width + column) * plane.stride];
        }
      }
      count += passingSamples(around, passing);
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
