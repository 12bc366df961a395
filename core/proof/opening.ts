import { planSheet } from '../chain/grid.ts';
import { levelCount, levelExtent, targetPlace } from '../chain/levels.ts';
import type { SourceHeader } from '../codec/source.ts';
import type { Extent } from '../raster/raster.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { PrintImage } from './want.ts';

/** An image that a build can make: no view between levels. */
export type BuiltImage = Exclude<PrintImage, { readonly lod: number }>;

/** Where a proof is to be opened: at a level, at a target of the settings, or, with neither, where it opens by itself. */
export interface Opening {
  readonly level: number | null;
  readonly target: string | null;
}

/** The last level that a texture has, or that a sheet's grid allows. */
export function lastLevelOf(base: Extent, treatment: Treatment): number {
  if (treatment.grid === null) return levelCount(base) - 1;
  try {
    return planSheet(base, treatment.grid).levels - 1;
  } catch {
    // A grid that does not fit is a problem of its own, which every print says.
    return levelCount(base) - 1;
  }
}

/** The first level that fits a usual frame, so that a proof opens on something that can be judged. */
export function openingLevel(base: Extent, treatment: Treatment): number {
  const last = lastLevelOf(base, treatment);
  for (let level = 0; level <= last; level++) {
    const { width, height } = levelExtent(base, level);
    if (Math.max(width, height) <= FRAME_SIDE) return level;
  }
  return 0;
}

/** Texels of a side that fit a usual frame. */
const FRAME_SIDE = 128;

/** The image to print first: the one that is asked for, or the finest level of at most `mostBytes` of codes where it holds
 *  more. Targets that the settings do not name are not known here. */
export function firstImage(
  header: SourceHeader,
  treatment: Treatment,
  opening: Opening,
  mostBytes: number,
): BuiltImage {
  const base = header.extent;
  const fits = ({ width, height }: Extent): boolean => width * height * texelBytes(header, treatment) <= mostBytes;
  const target = treatment.targets.find(({ name }) => name === opening.target);
  if (target !== undefined && fits(targetPlace(base, target).whole)) return { target };
  const last = lastLevelOf(base, treatment);
  const asked = target === undefined ? (opening.level ?? openingLevel(base, treatment)) : 0;
  let level = Math.min(last, Math.max(0, asked));
  while (level < last && !fits(levelExtent(base, level))) level++;
  return { level };
}

/** Bytes of a texel at most: a cell may add an alpha. */
function texelBytes({ channels, depth }: SourceHeader, treatment: Treatment): number {
  const deep = treatment.depth === 'same' ? depth : treatment.depth;
  return (channels + (channels % 2)) * (deep / 8);
}
