import { wrapIndex } from '../kernel/wrap.ts';
import { type Extent, expandIndexed, type IndexedRaster, type Raster, type StraightRaster } from '../raster/raster.ts';
import { blankLike, cutRegion, pasteRegion } from '../raster/region.ts';
import { addClipped, newClipped } from '../resample/clip.ts';
import type { Treatment } from '../treatment/treatment.ts';
import { buildChain, type Chain, type ChainOptions, headOf } from './chain.ts';
import type { WrapPair } from './coverage.ts';
import { planSheet, type SheetPlan, sheetExtent, sheetNotes, targetExtent } from './grid.ts';
import type { ChainImage } from './image.ts';
import { type ChainPlan, planChain } from './plan.ts';
import { storeCodes } from './store.ts';

/** Builds a sheet: each cell is filtered alone, with the treatment's wrap, and put back in its place; gutters are made anew
 *  from the cell's own texels. Level 0 is the source as it is. Throws Refusal as `buildChain` and `planSheet`. */
export function buildSheet(source: StraightRaster | IndexedRaster, treatment: Treatment, options: ChainOptions): Chain {
  const sheet = planSheet(source.extent, treatment.grid!);
  const alone = cellTreatment(treatment, sheet);
  const cells: Chain[] = [];
  for (let row = 0; row < sheet.rows; row++) {
    for (let column = 0; column < sheet.columns; column++) {
      const { left, top } = cellPlace(column, row, sheet.cell, sheet.gutter);
      cells.push(buildChain(cutRegion(source, left, top, sheet.cell), alone, options));
    }
  }
  const plan = planChain(headOf(source, options.gamma), { ...alone, targets: [] }, options.light);
  const images = cells[0].images.map((first, index) => {
    const parts = cells.map((cell) => cell.images[index]);
    return first.level === 0 ? wholeImage(plan, source, sheet, parts) : assemble(sheet, treatment, parts);
  });
  const notes = [...cells[0].notes, ...sheetNotes(sheet, treatment)];
  return { images, notes, lengths: new Map(), plan, base: null };
}

/** The treatment of one cell: its chain ends where the sheet's does. */
export function cellTreatment(treatment: Treatment, sheet: SheetPlan): Treatment {
  for (const target of treatment.targets) targetExtent(sheet, target);
  const { levels } = treatment;
  if (levels === 'none') return { ...treatment, grid: null };
  const last = Math.min(levels.last ?? sheet.levels - 1, sheet.levels - 1);
  return { ...treatment, grid: null, levels: { first: Math.min(levels.first, last), last } };
}

/** Level 0: the source as it is stored, with what the cells changed in it. Gutters stay the source's own. */
function wholeImage(
  plan: ChainPlan,
  source: StraightRaster | IndexedRaster,
  sheet: SheetPlan,
  parts: readonly ChainImage[],
): ChainImage {
  const [first] = parts;
  const whole: Raster =
    source.kind === 'indexed' && first.raster.kind === 'indexed'
      ? { ...source, indices: source.indices.slice() }
      : storeCodes(plan, source.kind === 'indexed' ? expandIndexed(source) : source, plan.treatment.normal.base);
  const raster = whole.kind === 'straight' ? { ...whole, codes: whole.codes.slice() } : whole;
  parts.forEach((part, index) => {
    const { left, top } = cellPlace(index % sheet.columns, Math.floor(index / sheet.columns), sheet.cell, sheet.gutter);
    pasteRaster(raster, part.raster, left, top);
  });
  return { ...first, ...joined(parts), extent: source.extent, raster };
}

function assemble(sheet: SheetPlan, treatment: Treatment, parts: readonly ChainImage[]): ChainImage {
  const [first] = parts;
  const cell = first.extent;
  const gutter = (sheet.gutter * cell.width) / sheet.cell.width;
  const extent = sheetExtent(sheet, cell, gutter);
  const raster = blankRaster(first.raster, extent);
  parts.forEach((part, index) => {
    const { left, top } = cellPlace(index % sheet.columns, Math.floor(index / sheet.columns), cell, gutter);
    pasteRaster(raster, withGutter(part.raster, gutter, treatment.wrap), left - gutter, top - gutter);
  });
  return { ...first, ...joined(parts), extent, raster };
}

/** Sums of all cells, and means of what is a mean: cells are of one extent. */
function joined(parts: readonly ChainImage[]): Partial<ChainImage> {
  const [first] = parts;
  const clipped = newClipped(first.clipped.below.length);
  for (const part of parts) addClipped(clipped, part.clipped);
  const mean = (of: (part: ChainImage) => number): number =>
    parts.reduce((sum, part) => sum + of(part), 0) / parts.length;
  const sum = (of: (part: ChainImage) => number): number => parts.reduce((total, part) => total + of(part), 0);
  return {
    clipped,
    ...(first.coverage !== undefined && { coverage: mean((part) => part.coverage!) }),
    ...(first.light && {
      light: { light: sum((part) => part.light!.light), weight: sum((part) => part.light!.weight) },
    }),
    ...(first.normalLength !== undefined && { normalLength: mean((part) => part.normalLength!) }),
    ...(first.coverageScale && {
      coverageScale: {
        scale: mean((part) => part.coverageScale!.scale),
        residual: mean((part) => part.coverageScale!.residual),
        tie: parts.some((part) => part.coverageScale!.tie),
      },
    }),
  };
}

function cellPlace(column: number, row: number, cell: Extent, gutter: number): { left: number; top: number } {
  return {
    left: column * (cell.width + 2 * gutter) + gutter,
    top: row * (cell.height + 2 * gutter) + gutter,
  };
}

function blankRaster(like: Raster, extent: Extent): Raster {
  return like.kind === 'premultiplied'
    ? { ...blankLike({ ...like, kind: 'straight' }, extent), kind: 'premultiplied' }
    : blankLike(like, extent);
}

function pasteRaster(whole: Raster, part: Raster, left: number, top: number): void {
  if (whole.kind === 'indexed' && part.kind === 'indexed') pasteRegion(whole, part, left, top);
  else if (whole.kind !== 'indexed' && part.kind !== 'indexed') {
    pasteRegion({ ...whole, kind: 'straight' }, { ...part, kind: 'straight' }, left, top);
  }
}

/** The cell with its gutter: what the wrap mode reads outside it; the edge texel where that is the border. */
function withGutter(raster: Raster, gutter: number, wrap: WrapPair): Raster {
  if (gutter === 0) return raster;
  const { width, height } = raster.extent;
  const extent: Extent = { width: width + 2 * gutter, height: height + 2 * gutter };
  const out = blankRaster(raster, extent);
  const [from, to] = [raster, out].map((each) => (each.kind === 'indexed' ? each.indices : each.codes));
  const channels = raster.kind === 'indexed' ? 1 : raster.channels;
  const read = (i: number, count: number, mode: WrapPair['x']): number =>
    wrapIndex(i, count, mode === 'clamp-to-border' ? 'clamp-to-edge' : mode);
  let at = 0;
  for (let y = 0; y < extent.height; y++) {
    const row = read(y - gutter, height, wrap.y) * width;
    for (let x = 0; x < extent.width; x++) {
      const source = (row + read(x - gutter, width, wrap.x)) * channels;
      for (let channel = 0; channel < channels; channel++) to[at++] = from[source + channel];
    }
  }
  return out;
}
