import type { Transfer } from '../color/transfer.ts';
import type { IndexedRaster, Raster, StraightRaster } from '../raster/raster.ts';
import { detail } from '../resample/detail.ts';
import type { Layout } from '../resample/encoding.ts';
import { epx } from '../resample/epx.ts';
import { majority } from '../resample/majority.ts';
import { moveCodes } from '../resample/nearest.ts';
import { decodingOf } from './decoding.ts';
import { ImageInWork } from './image.ts';
import { magnifySlopes } from './magnify.ts';
import { type Method, movesCodes } from './method.ts';
import { type ChainPlan, type PlannedLevel, type PlannedTarget, pictureExtent } from './plan.ts';
import { encodingOf, storeCodes, untagged } from './store.ts';

/** A level or target on its way: stored codes before coverage, fill and placing. */
export interface Draft {
  readonly planned: PlannedLevel | PlannedTarget;
  readonly raster: Raster;
  /** Where it was made from float rows. */
  readonly work: ImageInWork | null;
  /** Whether its colors under alpha 0 are the source's own. */
  readonly moved: boolean;
}

/** Makes every image of the plan: those from rows are in `works` already, the rest are made from the source's codes. */
export function draftImages(
  plan: ChainPlan,
  source: StraightRaster | IndexedRaster | null,
  works: ReadonlyMap<PlannedLevel | PlannedTarget, ImageInWork>,
): { readonly levels: readonly (Draft | null)[]; readonly targets: readonly Draft[] } {
  // Detail measures distances between sRGB codes, so a source of another gamma is recoded for it.
  if (plan.layout.gamma !== null && source?.kind === 'straight' && usesDetail(plan)) {
    const layout = { ...plan.layout, gamma: null };
    return draftImages({ ...plan, layout }, untagged(plan, source), works);
  }
  const levels: (Draft | null)[] = [];
  let finer = source;
  for (const level of plan.levels) {
    if (level.method === null) {
      levels.push(source === null ? null : { ...baseDraft(plan, source), planned: level });
      continue;
    }
    if (level.method.kind === 'rows' && !works.has(level)) {
      levels.push(null);
      finer = null;
      continue;
    }
    const made = makeDraft(plan, level, level.method, plan.treatment.derive === 'previous' ? finer : source, works);
    levels.push(made.draft);
    finer = made.codes;
  }
  const targets = plan.targets.map((target) => makeDraft(plan, target, target.method, source, works).draft);
  return { levels, targets };
}

function usesDetail({ levels, targets }: ChainPlan): boolean {
  return [...levels, ...targets].some(({ method }) => method?.kind === 'footprint' && method.kernel === 'detail');
}

function baseDraft(plan: ChainPlan, source: StraightRaster | IndexedRaster): Omit<Draft, 'planned'> {
  const raster = source.kind === 'indexed' ? source : storeCodes(plan, source, plan.treatment.normal.base);
  return { raster, work: null, moved: true };
}

interface Made {
  readonly draft: Draft;
  /** The result as codes of the source's own kind, to go on from; null where it was made from rows. */
  readonly codes: StraightRaster | IndexedRaster | null;
}

function makeDraft(
  plan: ChainPlan,
  planned: PlannedLevel | PlannedTarget,
  method: Method,
  source: StraightRaster | IndexedRaster | null,
  works: ReadonlyMap<PlannedLevel | PlannedTarget, ImageInWork>,
): Made {
  const ready = works.get(planned);
  if (ready !== undefined) return { draft: workDraft(planned, ready), codes: null };
  if (source === null) throw new RangeError('Expected a plan that keeps its base');
  if (method.kind === 'slopes') {
    const work = magnified(plan, planned, source as StraightRaster);
    return { draft: workDraft(planned, work), codes: null };
  }
  const codes = applyMethod(plan, method, source, planned);
  const moved = movesCodes(method);
  const raster = codes.kind === 'indexed' ? codes : storeCodes(plan, codes, moved ? 'keep' : 'renormalise');
  return { draft: { planned, raster, work: null, moved }, codes };
}

function workDraft(planned: PlannedLevel | PlannedTarget, work: ImageInWork): Draft {
  const premultiplied = work.encoding.store === 'premultiplied' && work.encoding.layout.alpha !== null;
  const raster: Raster = premultiplied ? { ...work.straight(), kind: 'premultiplied' } : work.straight();
  return { planned, raster, work, moved: false };
}

function applyMethod(
  plan: ChainPlan,
  method: Exclude<Method, { kind: 'slopes' }>,
  source: StraightRaster | IndexedRaster,
  planned: PlannedLevel | PlannedTarget,
): StraightRaster | IndexedRaster {
  const extent = pictureExtent(planned);
  switch (method.kind) {
    case 'codes':
      return moveCodes(source, method.x, method.y);
    case 'scaler':
      return epx(source, method.factor, plan.treatment.wrap);
    case 'footprint':
      if (method.kernel === 'majority') return majority(source, extent);
      return detail(source as StraightRaster, extent, {
        lambda: method.params.lambda,
        transfers: transfersOf(plan.layout),
        weighted: plan.layout.weighted.filter((channel) => channel < plan.layout.channels),
        alpha: plan.layout.weighted.length > 0 ? plan.layout.alpha : null,
      });
    case 'rows':
      throw new RangeError('Expected rows to be made in a pass');
  }
}

function magnified(plan: ChainPlan, planned: PlannedLevel | PlannedTarget, source: StraightRaster): ImageInWork {
  const extent = pictureExtent(planned);
  const work = new ImageInWork(extent, encodingOf(plan), { alpha: plan.keepsCoverage ? 'kept' : 'dropped' });
  magnifySlopes(source, extent, decodingOf(plan.layout), plan.treatment.wrap, (y, floats) =>
    work.take(y, floats, null),
  );
  return work;
}

function transfersOf(layout: Layout): Transfer[] {
  return layout.roles.map((role) => (role.kind === 'color' ? role.transfer : 'linear'));
}
