import { expandIndexed, maxCode, type Raster, type StraightRaster } from '../raster/raster.ts';
import { type Clipped, newClipped } from '../resample/clip.ts';
import type { RowsRun } from '../resample/engine.ts';
import { boundCodes } from './bounds.ts';
import { placeInCell } from './cell.ts';
import type { CoverageScale } from './coverage-scale.ts';
import type { Draft } from './draft.ts';
import { fillFrom, fillWith } from './fill.ts';
import { type ChainImage, ImageInWork } from './image.ts';
import { holdsColor } from './layout.ts';
import { isLightInFloats, type LightSum, lightOfCodes, lightOfSums } from './light.ts';
import { coverageOf, keepCoverage } from './mask.ts';
import { type ChainPlan, pictureExtent } from './plan.ts';
import { encodingOf } from './store.ts';

/** The level phase: coverage, then fill from the last level upward, then targets into their cells, then bounds. `run` made
 *  the rows. */
export function finishImages(
  plan: ChainPlan,
  drafts: { readonly levels: readonly (Draft | null)[]; readonly targets: readonly Draft[] },
  run: Pick<RowsRun, 'sums'>,
): readonly ChainImage[] {
  const kept = plan.keepsCoverage ? keepAll(plan, drafts) : null;
  if (plan.fill !== 'none') fillAll(plan, drafts, run.sums());
  const images: ChainImage[] = [];
  for (const draft of drafts.levels) {
    if (draft !== null && 'shipped' in draft.planned && draft.planned.shipped)
      images.push(imageOf(plan, draft, kept, run));
  }
  for (const draft of drafts.targets) images.push(imageOf(plan, draft, kept, run));
  return plan.treatment.height.minmax ? [...images, ...boundsOf(plan, drafts.levels)] : images;
}

/** Coverage of level 0, and how every other image came to it. */
interface KeptCoverage {
  readonly wanted: number;
  readonly scales: ReadonlyMap<Draft, CoverageScale>;
}

function keepAll(
  plan: ChainPlan,
  { levels, targets }: { readonly levels: readonly (Draft | null)[]; readonly targets: readonly Draft[] },
): KeptCoverage {
  const wanted = coverageOf(plan, levels[0]!.raster as StraightRaster);
  const scales = new Map<Draft, CoverageScale>();
  for (const draft of [...levels.slice(1), ...targets]) {
    if (draft !== null) scales.set(draft, keepCoverage(plan, draft.raster as StraightRaster, draft.work, wanted));
  }
  return { wanted, scales };
}

function fillAll(
  plan: ChainPlan,
  { levels, targets }: { readonly levels: readonly (Draft | null)[]; readonly targets: readonly Draft[] },
  sums: Float64Array,
): void {
  const alpha = plan.layout.alpha!;
  const wants = (draft: Draft): boolean => plan.fill === 'all' || !draft.moved;
  const mean = meanTexel(plan, sums);
  for (let level = levels.length - 1; level >= 0; level--) {
    const draft = levels[level];
    if (draft === null || !wants(draft) || draft.raster.kind !== 'straight') continue;
    const coarser = levels[level + 1]?.raster;
    if (coarser === undefined) fillWith(draft.raster, mean, alpha);
    else fillFrom(draft.raster, straightOf(coarser), alpha);
  }
  for (const draft of targets) {
    if (!wants(draft) || draft.raster.kind !== 'straight') continue;
    const { width, height } = draft.raster.extent;
    const coarser = levels.find(
      (each, level) =>
        level > 0 &&
        each !== null &&
        pictureExtent(each.planned).width <= width &&
        pictureExtent(each.planned).height <= height,
    );
    if (coarser) fillFrom(draft.raster, straightOf(coarser.raster), alpha);
    else fillWith(draft.raster, mean, alpha);
  }
}

/** The mean color of level 0, weighed by alpha; black where the whole image is transparent. */
function meanTexel(plan: ChainPlan, sums: Float64Array): StraightRaster {
  const texels = plan.head.extent.width * plan.head.extent.height;
  const work = new ImageInWork({ width: 1, height: 1 }, encodingOf(plan), { alpha: 'dropped' });
  work.take(
    0,
    Float32Array.from(sums, (sum) => sum / texels),
    null,
  );
  return work.straight();
}

function imageOf(plan: ChainPlan, draft: Draft, kept: KeptCoverage | null, run: Pick<RowsRun, 'sums'>): ChainImage {
  const { planned, work, raster } = draft;
  const { layout, treatment } = plan;
  const scale = kept?.scales.get(draft);
  const coverage = (): number =>
    kept !== null && scale === undefined ? kept.wanted : coverageOf(plan, straightOf(raster));
  const measured = 'level' in planned && planned.level === 0 ? sumsLight(plan, run.sums()) : null;
  const light = work?.light() ?? measured ?? codesLight(plan, raster);
  const placed = 'place' in planned ? placeInCell(raster, planned.place, layout.alpha) : raster;
  const normalLength = layout.normals.length === 0 ? undefined : (work?.normalLength() ?? 1);
  return {
    use: 'image',
    ...('level' in planned ? { level: planned.level } : { target: planned.target.name }),
    extent: placed.extent,
    raster: placed,
    ...(layout.alpha !== null && treatment.alpha.use === 'mask' && { coverage: coverage() }),
    ...(scale !== undefined && { coverageScale: scale }),
    ...(treatment.content === 'color' && holdsColor(layout) && { light }),
    ...(normalLength !== undefined && { normalLength }),
    clipped: clippedOf(work, placed, layout.channels),
  };
}

/** Counts of what was stored: an alpha that the cell gave is never clipped. */
function clippedOf(work: ImageInWork | null, raster: Raster, channels: number): Clipped {
  const clipped = work?.clipped ?? newClipped(channels);
  if (raster.kind === 'indexed' || raster.channels === channels) return clipped;
  return { below: [...clipped.below, 0], above: [...clipped.above, 0] };
}

/** Luminance of level 0 from the sums of what it was decoded to; null where they are no light. */
export function sumsLight({ layout, head }: ChainPlan, sums: Float64Array): LightSum | null {
  return isLightInFloats(layout) ? lightOfSums(layout, sums, head.extent.width * head.extent.height) : null;
}

/** Luminance of codes that were moved, weighed by the alpha they carry. */
function codesLight(plan: ChainPlan, raster: Raster): LightSum {
  const straight = straightOf(raster);
  const { alpha } = plan.layout;
  const max = maxCode(straight.depth);
  const texels = straight.extent.width * straight.extent.height;
  return lightOfCodes(encodingOf(plan), straight.codes, texels, (texel) =>
    alpha === null ? 1 : straight.codes[texel * straight.channels + alpha] / max,
  );
}

function boundsOf(plan: ChainPlan, levels: readonly (Draft | null)[]): ChainImage[] {
  const { wrap } = plan.treatment;
  const images: ChainImage[] = [];
  for (const use of ['min', 'max'] as const) {
    let raster = straightOf(levels[0]!.raster);
    for (const draft of levels.slice(1)) {
      const { level, extent, shipped } = draft!.planned as ChainPlan['levels'][number];
      raster = boundCodes(raster, extent, wrap, use);
      if (shipped) images.push({ use, level, extent, raster, clipped: newClipped(raster.channels) });
    }
  }
  return images;
}

function straightOf(raster: Raster): StraightRaster {
  if (raster.kind === 'indexed') return expandIndexed(raster);
  return { ...raster, kind: 'straight' };
}
