import { refuse } from '../problem.ts';
import type { Extent } from '../raster/raster.ts';
import type { Target, Treatment } from '../treatment/treatment.ts';
import { levelCount, scaledExtent } from './levels.ts';

type Grid = NonNullable<Treatment['grid']>;

/** A sheet's cells: each `cell` texels with `gutter` texels on every side.
 *
 *    | gutter | cell | gutter || gutter | cell | gutter || ...
 */
export interface SheetPlan {
  readonly cell: Extent;
  readonly gutter: number;
  readonly columns: number;
  readonly rows: number;
  /** Levels at which cells and gutters are whole texels, level 0 included. */
  readonly levels: number;
  /** Why there are no more levels. */
  readonly end: string;
}

/** Throws Refusal where cells leave a remainder of the sheet. */
export function planSheet(sheet: Extent, grid: Grid): SheetPlan {
  const { gutter } = grid;
  const cell: Extent = { width: grid.cell[0], height: grid.cell[1] };
  const pitch: Extent = { width: cell.width + 2 * gutter, height: cell.height + 2 * gutter };
  const rest: Extent = { width: sheet.width % pitch.width, height: sheet.height % pitch.height };
  if (rest.width + rest.height > 0) {
    refuse('grid-remainder', { extent: say(sheet), cell: say(cell), gutter, rest: say(rest) });
  }
  const levels = wholeLevels([cell.width, cell.height, gutter]);
  const what = gutter > 0 ? ` and gutters of ${gutter}` : '';
  const end =
    levels < levelCount(cell)
      ? `The chain stops at level ${levels - 1}: cells of ${say(cell)}${what} are no whole texels below it.`
      : `The chain stops at level ${levels - 1}, where a cell is one texel wide or high.`;
  return { cell, gutter, columns: sheet.width / pitch.width, rows: sheet.height / pitch.height, levels, end };
}

/** What a build has to say of a sheet: why its levels end, where the settings ask for all there are. */
export function sheetNotes({ levels, end }: SheetPlan, treatment: Treatment): readonly string[] {
  const asked = treatment.levels;
  return asked === 'none' || (asked.last !== null && asked.last < levels) ? [] : [end];
}

/** Extent of the whole sheet as a target. Throws Refusal unless it is a scale that keeps cells and gutters whole texels. */
export function targetExtent(plan: SheetPlan, target: Target): Extent {
  if (!('scale' in target)) return refuse('grid-scale', { target: target.name });
  const { scale } = target;
  const [width, height, gutter] = [plan.cell.width, plan.cell.height, plan.gutter].map((texels) => texels * scale);
  if (![width, height, gutter].every(Number.isInteger)) refuse('grid-target', { target: target.name, width, height });
  return sheetExtent(plan, scaledExtent(plan.cell, scale), gutter);
}

export function sheetExtent(plan: SheetPlan, cell: Extent, gutter: number): Extent {
  return {
    width: plan.columns * (cell.width + 2 * gutter),
    height: plan.rows * (cell.height + 2 * gutter),
  };
}

/** How often all of these halve into whole numbers of at least 1 (0 halves for ever), counted with level 0. */
function wholeLevels(texels: readonly number[]): number {
  let levels = 1;
  while (texels.every((count) => count % 2 ** levels === 0)) levels++;
  return levels;
}

function say(extent: Extent): string {
  return `${extent.width}x${extent.height}`;
}
