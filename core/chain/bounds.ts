import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import { type Codes, type Extent, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { WrapPair } from './coverage.ts';

export type Bound = 'min' | 'max';

/** The least or largest code of each channel over every texel that a target texel's area touches, and one more on each
 *  side: never tighter than what a bilinear sampler of the finer level can return. Built from the previous bounds, it
 *  stays so down the chain. */
export function boundCodes(raster: StraightRaster, extent: Extent, wrap: WrapPair, bound: Bound): StraightRaster {
  const steps = boundSteps(raster, extent, wrap, bound);
  for (;;) {
    const { done, value } = steps.next();
    if (done === true) return value;
  }
}

/** The same in pieces of a few milliseconds, so that others can work between them, or it can be left. */
export function* boundSteps(
  raster: StraightRaster,
  extent: Extent,
  wrap: WrapPair,
  bound: Bound,
): Generator<undefined, StraightRaster> {
  const { channels, depth } = raster;
  const codes = newCodes(depth, extent.width * extent.height * channels);
  const columns = reachOf(raster.extent.width, extent.width, wrap.x);
  const rows = reachOf(raster.extent.height, extent.height, wrap.y);
  const stride = raster.extent.width * channels;
  const width = extent.width * channels;
  // Rows first: neighbors in memory are compared, and what is left to read across is one row.
  const found = newCodes(depth, stride);
  let left = CODES_AT_ONCE;
  for (let y = 0; y < extent.height; y++) {
    for (let i = rows.start[y]; i < rows.start[y + 1]; i++) {
      const row = rows.texels[i];
      const source = row < 0 ? null : raster.codes.subarray(row * stride, (row + 1) * stride);
      if (i > rows.start[y]) bindRow(found, source, bound);
      else if (source === null) found.fill(0);
      else found.set(source);
      left -= stride;
    }
    bindColumns(found, codes.subarray(y * width, (y + 1) * width), columns, channels, bound);
    if (left > 0) continue;
    yield;
    left = CODES_AT_ONCE;
  }
  return { kind: 'straight', extent, channels, depth, codes };
}

/** Codes that are compared between two pauses. */
const CODES_AT_ONCE = 1 << 20;

/** Texels of a row by what they are for: those of target j stand from `start[j]` up to `start[j + 1]`. */
interface Reach {
  readonly start: Int32Array;
  /** -1 for the border. */
  readonly texels: Int32Array;
}

function bindColumns(row: Codes, out: Codes, { start, texels }: Reach, channels: number, bound: Bound): void {
  const sign = bound === 'min' ? 0 : -1;
  for (let x = 0, at = 0; x + 1 < start.length; x++) {
    for (let channel = 0; channel < channels; channel++, at++) {
      let found = codeAt(row, texels[start[x]], channel, channels);
      for (let i = start[x] + 1; i < start[x + 1]; i++) {
        found = bounded(found, codeAt(row, texels[i], channel, channels), sign);
      }
      out[at] = found;
    }
  }
}

/** Border texels are transparent black. */
function codeAt(row: Codes, texel: number, channel: number, channels: number): number {
  return texel < 0 ? 0 : row[texel * channels + channel];
}

function bindRow(out: Codes, source: Codes | null, bound: Bound): void {
  if (source === null) {
    if (bound === 'min') out.fill(0);
    return;
  }
  const sign = bound === 'min' ? 0 : -1;
  for (let at = 0; at < out.length; at++) out[at] = bounded(out[at], source[at], sign);
}

/** The lesser of two codes with sign 0, the larger with sign -1; without a branch, which no processor foresees in noise. */
function bounded(one: number, other: number, sign: number): number {
  const distance = one - other;
  return other + (distance & ((distance >> 31) ^ sign));
}

/** Texels that each target's area touches, widened by one. */
function reachOf(from: number, to: number, wrap: Wrap): Reach {
  const start = new Int32Array(to + 1);
  const texels: number[] = [];
  for (let j = 0; j < to; j++) {
    const last = Math.ceil(((j + 1) * from) / to);
    for (let i = Math.floor((j * from) / to) - 1; i <= last; i++) texels.push(wrapIndex(i, from, wrap));
    start[j + 1] = texels.length;
  }
  return { start, texels: Int32Array.from(texels) };
}
