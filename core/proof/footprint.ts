import type { ChainHead } from '../chain/layout.ts';
import { type ChainPlan, type PlannedLevel, type PlannedTarget, planChain } from '../chain/plan.ts';
import type { Taps } from '../kernel/taps.ts';
import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { AxisFootprint, FootprintAnswer, PrintImage } from './want.ts';

/** The source texels, with their weights, that make texel (x, y) of an image. Where a level is made from the one before it, its
 *  weights are multiplied through to level 0. Null axes where a kernel chooses by the codes, for sheets, and for what a sampler
 *  shows between levels. */
export function footprintOf(
  head: ChainHead,
  treatment: Treatment,
  image: PrintImage,
  x: number,
  y: number,
): FootprintAnswer {
  const none: FootprintAnswer = { kind: 'footprint', axes: null };
  if (treatment.grid !== null || 'lod' in image) return none;
  const plan = planChain(head, treatment);
  const steps = 'level' in image ? stepsTo(plan, image.level) : [plan.targets[0]];
  const taps: { x: Taps; y: Taps }[] = [];
  for (const { method } of steps) {
    if (method === null) continue;
    if (method.kind !== 'rows' && method.kind !== 'codes') return none;
    taps.push(method);
  }
  const place = 'level' in image ? { left: 0, top: 0 } : plan.targets[0].place;
  const axes = {
    x: spread(x - place.left, taps.map((step) => step.x).reverse(), treatment.wrap.x),
    y: spread(y - place.top, taps.map((step) => step.y).reverse(), treatment.wrap.y),
  };
  return axes.x === null || axes.y === null ? none : { kind: 'footprint', axes: { x: axes.x, y: axes.y } };
}

/** Images from level 0, left out, to this level. */
function stepsTo(plan: ChainPlan, level: number): readonly (PlannedLevel | PlannedTarget)[] {
  return plan.treatment.derive === 'base' ? plan.levels.slice(level, level + 1) : plan.levels.slice(1, level + 1);
}

/** One texel's weights, carried down from the last step to the first. Null outside the picture. */
function spread(texel: number, taps: readonly Taps[], wrap: Wrap): AxisFootprint | null {
  let weights = new Map<number, number>([[texel, 1]]);
  for (const step of taps) {
    if (texel < 0 || texel >= taps[0].to) return null;
    const finer = new Map<number, number>();
    for (const [at, weight] of weights) {
      for (let k = 0; k < step.count[at]; k++) {
        const source = wrapIndex(step.first[at] + k, step.from, wrap);
        if (source < 0) continue;
        finer.set(source, (finer.get(source) ?? 0) + weight * step.weights[step.start[at] + k]);
      }
    }
    weights = finer;
  }
  const sorted = [...weights].sort(([one], [other]) => one - other);
  return { texels: sorted.map(([at]) => at), weights: sorted.map(([, weight]) => weight) };
}
