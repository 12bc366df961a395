import { wrapIndex } from '../kernel/wrap.ts';
import { type Extent, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { WrapPair } from './coverage.ts';

export type Bound = 'min' | 'max';

/** The least or largest code of each channel over every texel that a target texel's area touches, and one more on each
 *  side: never tighter than what a bilinear sampler of the finer level can return. Built from the previous bounds, it
 *  stays so down the chain. */
export function boundCodes(raster: StraightRaster, extent: Extent, wrap: WrapPair, bound: Bound): StraightRaster {
  const { channels, depth } = raster;
  const narrow: Extent = { width: extent.width, height: raster.extent.height };
  const along = newCodes(depth, narrow.width * narrow.height * channels);
  const pick = bound === 'min' ? Math.min : Math.max;
  const columns = reachOf(raster.extent.width, extent.width);
  for (let y = 0; y < narrow.height; y++) {
    const row = y * raster.extent.width * channels;
    for (let x = 0; x < extent.width; x++) {
      for (let channel = 0; channel < channels; channel++) {
        let found = -1;
        for (let i = columns.first[x]; i <= columns.last[x]; i++) {
          const column = wrapIndex(i, raster.extent.width, wrap.x);
          const code = column < 0 ? 0 : raster.codes[row + column * channels + channel];
          found = found < 0 ? code : pick(found, code);
        }
        along[(y * extent.width + x) * channels + channel] = found;
      }
    }
  }
  const codes = newCodes(depth, extent.width * extent.height * channels);
  const rows = reachOf(raster.extent.height, extent.height);
  const width = extent.width * channels;
  for (let y = 0; y < extent.height; y++) {
    for (let sample = 0; sample < width; sample++) {
      let found = -1;
      for (let i = rows.first[y]; i <= rows.last[y]; i++) {
        const row = wrapIndex(i, raster.extent.height, wrap.y);
        const code = row < 0 ? 0 : along[row * width + sample];
        found = found < 0 ? code : pick(found, code);
      }
      codes[y * width + sample] = found;
    }
  }
  return { kind: 'straight', extent, channels, depth, codes };
}

/** First and last texel of each target's area, widened by one. */
function reachOf(from: number, to: number): { readonly first: Int32Array; readonly last: Int32Array } {
  return {
    first: Int32Array.from({ length: to }, (_, j) => Math.floor((j * from) / to) - 1),
    last: Int32Array.from({ length: to }, (_, j) => Math.ceil(((j + 1) * from) / to)),
  };
}
