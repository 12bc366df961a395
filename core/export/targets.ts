import { planSheet } from '../chain/grid.ts';
import { levelCount, levelExtent, targetPlace } from '../chain/levels.ts';
import type { SourceHeader } from '../codec/source.ts';
import type { PrintImage } from '../proof/want.ts';
import type { Extent } from '../raster/raster.ts';
import type { Target, Treatment } from '../treatment/treatment.ts';
import type { Look } from './look.ts';

/** An image of a texture that stands on the sheet. */
export interface SheetTarget {
  readonly kind: 'level' | 'target' | 'typed';
  /** `level 3`, `48x48`, `badge`. */
  readonly label: string;
  readonly image: Exclude<PrintImage, { readonly lod: number }>;
  readonly extent: Extent;
}

/** Levels that are shipped, then the targets of the settings, then those that were typed. Where no levels are shipped level 0 is
 *  there all the same: the source. Throws Refusal for a grid that does not fit. */
export function targetsOf(
  { extent }: SourceHeader,
  treatment: Treatment,
  typed: readonly Target[],
): readonly SheetTarget[] {
  const last = lastLevel(extent, treatment);
  const { levels } = treatment;
  const first = levels === 'none' ? 0 : Math.min(levels.first, last);
  const end = levels === 'none' ? 0 : Math.min(levels.last ?? last, last);
  const shipped = Array.from({ length: end - first + 1 }, (_, i): SheetTarget => {
    const level = first + i;
    const label = levels === 'none' ? 'source' : `level ${level}`;
    return { kind: 'level', label, image: { level }, extent: levelExtent(extent, level) };
  });
  const placed =
    (kind: 'target' | 'typed') =>
    (target: Target): SheetTarget => {
      return { kind, label: target.name, image: { target }, extent: targetPlace(extent, target).whole };
    };
  return [...shipped, ...treatment.targets.map(placed('target')), ...typed.map(placed('typed'))];
}

/** The last level that the texture has, or that its grid allows. */
export function lastLevel(base: Extent, treatment: Treatment): number {
  return (treatment.grid === null ? levelCount(base) : planSheet(base, treatment.grid).levels) - 1;
}

/** What the kernels are compared at: where the page's sight stands, else the first level that fits a usual frame, else the first
 *  target. */
export function sightOf(
  targets: readonly SheetTarget[],
  look: Look,
  base: Extent,
): {
  readonly label: string;
  readonly image: PrintImage;
  readonly extent: Extent;
  readonly target: SheetTarget | null;
} {
  const { sight } = look;
  if (sight?.kind === 'lod') {
    const of = (texels: number): number => Math.max(1, Math.round(texels * halved(sight.lod)));
    const extent = { width: of(base.width), height: of(base.height) };
    return {
      label: `between levels, ${Number(sight.lod.toFixed(2))}`,
      image: { lod: sight.lod, extent },
      extent,
      target: null,
    };
  }
  if (sight?.kind === 'level') {
    const { level } = sight;
    const found = targets.find(({ image }) => 'level' in image && image.level === level);
    if (found !== undefined) return { ...found, target: found };
    if (level < levelCount(base)) {
      return { label: `level ${level}`, image: { level }, extent: levelExtent(base, level), target: null };
    }
  }
  const named =
    sight?.kind === 'target' ? targets.find((each) => each.kind !== 'level' && each.label === sight.name) : undefined;
  const levels = targets.filter(({ kind }) => kind === 'level');
  const fit = levels.slice(1).find(({ extent }) => Math.max(extent.width, extent.height) <= FIRST_SIDE);
  const others = targets.filter(({ kind }) => kind !== 'level');
  const found = named ?? (levels.length > 1 ? fit : others[0]) ?? targets[0];
  return { ...found, target: found };
}

/** Longest side of the level that kernels are compared at; at level 0 they are all the same. */
const FIRST_SIDE = 128;

/** 2^-lod by products alone: the power of a fraction differs between engines. */
function halved(lod: number): number {
  let scale = 1;
  let rest = lod;
  for (; rest >= 1; rest--) scale /= 2;
  for (let bit = 0.5, root = Math.SQRT1_2; bit >= 2 ** -12; bit /= 2, root = Math.sqrt(root)) {
    if (rest >= bit) {
      scale *= root;
      rest -= bit;
    }
  }
  return scale;
}
