import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import { type Codes, type Extent, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { WrapPair } from './coverage.ts';

export type Bound = 'min' | 'max';

/** The least or largest code of each channel over every texel that a target texel's area touches, and one more on each
 *  side: never tighter than what a bilinear sampler of the finer level can return. Built from the previous bounds, it
 *  stays so down the chain. */
export function boundCodes(raster: StraightRaster, extent: Extent, wrap: WrapPair, bound: Bound): StraightRaster {
  const { channels, depth } = raster;
  const narrow: Extent = { width: extent.width, height: raster.extent.height };
  const along = newCodes(depth, narrow.width * narrow.height * channels);
  const columns = reachOf(raster.extent.width, extent.width, wrap.x);
  const stride = raster.extent.width * channels;
  for (let y = 0, at = 0; y < narrow.height; y++) {
    for (let x = 0; x < extent.width; x++) {
      const [start, end] = [columns.start[x], columns.start[x + 1]];
      for (let channel = 0; channel < channels; channel++, at++) {
        const row = y * stride + channel;
        let found = codeAt(raster.codes, row, columns.texels[start], channels);
        for (let i = start + 1; i < end; i++) {
          const code = codeAt(raster.codes, row, columns.texels[i], channels);
          if (bound === 'min' ? code < found : code > found) found = code;
        }
        along[at] = found;
      }
    }
  }
  const codes = newCodes(depth, extent.width * extent.height * channels);
  const rows = reachOf(raster.extent.height, extent.height, wrap.y);
  const width = extent.width * channels;
  for (let y = 0; y < extent.height; y++) {
    const out = codes.subarray(y * width, (y + 1) * width);
    for (let i = rows.start[y]; i < rows.start[y + 1]; i++) {
      const row = rows.texels[i];
      const source = row < 0 ? null : along.subarray(row * width, (row + 1) * width);
      if (i === rows.start[y]) out.set(source ?? out);
      else bindRow(out, source, bound);
    }
  }
  return { kind: 'straight', extent, channels, depth, codes };
}

/** Border texels are transparent black. */
function codeAt(codes: Codes, row: number, texel: number, channels: number): number {
  return texel < 0 ? 0 : codes[row + texel * channels];
}

function bindRow(out: Codes, source: Codes | null, bound: Bound): void {
  if (source === null) {
    if (bound === 'min') out.fill(0);
    return;
  }
  if (bound === 'min') {
    for (let at = 0; at < out.length; at++) if (source[at] < out[at]) out[at] = source[at];
  } else {
    for (let at = 0; at < out.length; at++) if (source[at] > out[at]) out[at] = source[at];
  }
}

/** Texels that each target's area touches, widened by one: those of target j stand at `start[j]` up to `start[j + 1]`, -1 for the
 *  border. */
function reachOf(from: number, to: number, wrap: Wrap): { readonly start: Int32Array; readonly texels: Int32Array } {
  const start = new Int32Array(to + 1);
  const texels: number[] = [];
  for (let j = 0; j < to; j++) {
    const last = Math.ceil(((j + 1) * from) / to);
    for (let i = Math.floor((j * from) / to) - 1; i <= last; i++) texels.push(wrapIndex(i, from, wrap));
    start[j + 1] = texels.length;
  }
  return { start, texels: Int32Array.from(texels) };
}
