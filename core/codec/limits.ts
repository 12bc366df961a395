import { refuse } from '../problem.ts';
import type { Extent } from '../raster/raster.ts';

/** Texels an axis may have. A chain of 16384 has 15 levels; larger images pass what a raster of ours can hold at once. */
export const EXTENT_LIMITS = { min: 1, max: 16384 } as const;

/** Refuses an extent that a header states and the house does not read. */
export function checkExtent(extent: Extent): void {
  const { min, max } = EXTENT_LIMITS;
  const { width, height } = extent;
  if (width < min || width > max || height < min || height > max) {
    refuse('extent-out-of-range', { width, height, min, max });
  }
}
