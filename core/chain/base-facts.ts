import type { Extent } from '../raster/raster.ts';
import { type Clipped, newClipped } from '../resample/clip.ts';
import { sumsLight } from './finish.ts';
import { holdsColor } from './layout.ts';
import type { LightSum } from './light.ts';
import type { ChainPlan } from './plan.ts';

/** What is measured of a level 0 whose codes are the source's and were not kept. */
export interface BaseFacts {
  readonly extent: Extent;
  readonly light?: LightSum;
  readonly normalLength?: number;
  readonly clipped: Clipped;
}

/** The plan of a chain that tells of level 0 what can be told without its codes; the same plan where something needs them, and they
 *  are kept. */
export function withoutBase(plan: ChainPlan): ChainPlan {
  const { layout, treatment } = plan;
  const masked = layout.alpha !== null && treatment.alpha.use === 'mask';
  const lit = !measuresLight(plan) || sumsLight(plan, new Float64Array(layout.channels + 1)) !== null;
  return plan.needsBase || masked || !lit ? plan : { ...plan, keepsBase: false };
}

export function baseFacts(plan: ChainPlan, sums: Float64Array): BaseFacts {
  const { head, layout } = plan;
  const light = measuresLight(plan) ? sumsLight(plan, sums) : null;
  return {
    extent: head.extent,
    ...(light !== null && { light }),
    // Normals are unit as they are decoded.
    ...(layout.normals.length > 0 && { normalLength: 1 }),
    clipped: newClipped(layout.channels),
  };
}

function measuresLight({ layout, treatment }: ChainPlan): boolean {
  return treatment.content === 'color' && holdsColor(layout);
}
