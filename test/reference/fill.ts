import type { Codes, Extent } from '../../core/raster/raster.ts';
import { pointTap } from './axis.ts';

export interface CodeLevel {
  readonly extent: Extent;
  /** The last channel is alpha. */
  readonly channels: number;
  readonly codes: Codes;
}

/** Gives color to texels of alpha code 0 from the texel over them in the next coarser level, the last level first
 *  (the push of Gortler et al. 1996, "The Lumigraph"). `first` is the first level that may change. Levels in place. */
export function fillLevels(levels: readonly CodeLevel[], first: number): void {
  for (let level = levels.length - 2; level >= first; level--) {
    const fine = levels[level];
    const coarse = levels[level + 1];
    for (let y = 0; y < fine.extent.height; y++) {
      for (let x = 0; x < fine.extent.width; x++) {
        const at = (y * fine.extent.width + x) * fine.channels;
        if (fine.codes[at + fine.channels - 1] !== 0) continue;
        const over = overTexel(fine.extent, coarse.extent, x, y) * fine.channels;
        for (let c = 0; c < fine.channels - 1; c++) fine.codes[at + c] = coarse.codes[over + c];
      }
    }
  }
}

/** Index of the coarser level's texel under the center of the finer one's. */
export function overTexel(fine: Extent, coarse: Extent, x: number, y: number): number {
  const overX = pointTap(coarse.width, fine.width, x)[0].index;
  const overY = pointTap(coarse.height, fine.height, y)[0].index;
  return overY * coarse.width + overX;
}
