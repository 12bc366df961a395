import { findKernel } from '../kernel/table.ts';
import { buildTaps } from '../kernel/taps.ts';
import type { Depth, Extent } from '../raster/raster.ts';
import type { Layout } from '../resample/encoding.ts';
import type { Pass } from '../resample/engine.ts';
import type { Target, Treatment } from '../treatment/treatment.ts';
import { decodingOf } from './decoding.ts';
import { type ChainHead, planLayout } from './layout.ts';
import { levelCount, levelExtent, type TargetPlace, targetPlace } from './levels.ts';
import { type Method, methodOf, movesCodes } from './method.ts';
import { encodingOf } from './store.ts';

/** How codes are stored beyond what the treatment says: a KTX2 of 16-bit color holds linear light. */
export type Light = 'coded' | 'linear';

/** Everything about a chain that its head and treatment decide. */
export interface ChainPlan {
  readonly head: ChainHead;
  readonly treatment: Treatment;
  readonly layout: Layout;
  readonly light: Light;
  readonly depth: Depth;
  /** The internal chain from level 0 on; deeper than what is shipped where fill needs it. */
  readonly levels: readonly PlannedLevel[];
  readonly targets: readonly PlannedTarget[];
  /** Indices and palette are kept. */
  readonly indexed: boolean;
  readonly keepsCoverage: boolean;
  readonly fill: 'none' | 'hidden' | 'all';
  /** Mean normal lengths need a pass of their own, before the chain's. */
  readonly lengthPass: boolean;
  /** Something is made from the codes of level 0, or measured on them, after its rows have gone by. */
  readonly needsBase: boolean;
  /** The codes of level 0 are held until the end. */
  readonly keepsBase: boolean;
  readonly notes: readonly string[];
}

export interface PlannedLevel {
  readonly level: number;
  readonly extent: Extent;
  /** From level 0 or the level before, as `derive` says; null for level 0 itself. */
  readonly method: Method | null;
  readonly shipped: boolean;
}

export interface PlannedTarget {
  readonly target: Target;
  readonly place: TargetPlace;
  /** From level 0 to the picture's extent. */
  readonly method: Method;
}

export function planChain(head: ChainHead, treatment: Treatment, light: Light = 'coded'): ChainPlan {
  const layout = planLayout(head, treatment);
  const notes: string[] = [];
  const fill = layout.alpha === null || treatment.alpha.store === 'premultiplied' ? 'none' : treatment.fill;
  const levels = planLevels(head.extent, treatment, fill !== 'none', notes);
  const targets = treatment.targets.map((target) => planTarget(head.extent, target, treatment));
  const methods = [...levels, ...targets].flatMap((image) => (image.method === null ? [] : [image.method]));
  const depth = treatment.depth === 'same' ? head.depth : treatment.depth;
  const keepsCoverage =
    layout.alpha !== null && treatment.alpha.use === 'mask' && treatment.alpha.keepCoverage && methods.length > 0;
  if (fill === 'all') notes.push('Level 0 is changed: color under alpha 0 is filled.');
  if (depth !== head.depth) notes.push(`Level 0 is changed: ${head.depth} bits become ${depth}.`);
  if (head.gamma !== undefined) notes.push(`Level 0 is changed: colors encoded with gamma ${head.gamma} become sRGB.`);
  const renormalised = layout.normals.length > 0 && treatment.normal.base === 'renormalise';
  if (renormalised) notes.push('Level 0 is changed: its normals are made unit.');
  const multiplied = layout.alpha !== null && treatment.alpha.store === 'premultiplied';
  const indexed =
    head.indexed &&
    head.gamma === undefined &&
    methods.every(movesCodes) &&
    !(keepsCoverage || multiplied || renormalised) &&
    fill !== 'all' &&
    depth === 8 &&
    light === 'coded';
  const lengthPass =
    layout.normals.length > 0 &&
    [...levels, ...targets].some(
      (image) => image.method?.kind === 'rows' && !weighsAreas(head.extent, pictureExtent(image), treatment),
    );
  const needsBase =
    lengthPass ||
    methods.some((method) => method.kind !== 'rows') ||
    fill === 'all' ||
    keepsCoverage ||
    treatment.height.minmax;
  return {
    head,
    treatment,
    layout,
    light,
    depth,
    levels,
    targets,
    indexed,
    keepsCoverage,
    fill,
    lengthPass,
    needsBase,
    keepsBase: needsBase || levels[0].shipped,
    notes,
  };
}

/** Which phases the plan needs: rows stream, the level phase works on whole levels of codes. */
export function phasesOf(plan: ChainPlan): ('rows' | 'level')[] {
  const methods = methodsOf(plan);
  const level =
    plan.keepsCoverage ||
    plan.fill !== 'none' ||
    plan.treatment.height.minmax ||
    methods.some((each) => each.kind !== 'rows');
  return [
    ...(methods.some((each) => each.kind === 'rows') ? (['rows'] as const) : []),
    ...(level ? (['level'] as const) : []),
  ];
}

/** The pass that makes every image of the plan that is made from rows. `nodes[i]` says which image node i + 1 is. */
export function passOf(plan: ChainPlan): {
  readonly pass: Pass;
  readonly nodes: readonly (PlannedLevel | PlannedTarget)[];
} {
  const nodes: (PlannedLevel | PlannedTarget)[] = [];
  const steps: Pass['steps'][number][] = [];
  plan.levels.forEach((level, index) => {
    if (level.method?.kind !== 'rows') return;
    const previous = plan.treatment.derive === 'previous' ? nodes.indexOf(plan.levels[index - 1]) + 1 : 0;
    steps.push({ from: previous, extent: level.extent, x: level.method.x, y: level.method.y });
    nodes.push(level);
  });
  for (const target of plan.targets) {
    if (target.method.kind !== 'rows') continue;
    steps.push({ from: 0, extent: target.place.picture, x: target.method.x, y: target.method.y });
    nodes.push(target);
  }
  const { head, treatment, layout } = plan;
  const [decoding, encoding] = [decodingOf(layout), encodingOf(plan)];
  return { pass: { extent: head.extent, wrap: treatment.wrap, decoding, encoding, steps }, nodes };
}

/** The same steps with box weights, from level 0 each: what mean lengths of normals are measured with. */
export function lengthPassOf(plan: ChainPlan): Pass {
  const { pass } = passOf(plan);
  const box = findKernel('box')!;
  const steps = pass.steps.map((step) => ({
    from: 0,
    extent: step.extent,
    x: buildTaps(box, {}, pass.extent.width, step.extent.width),
    y: buildTaps(box, {}, pass.extent.height, step.extent.height),
  }));
  return { ...pass, steps };
}

/** The extent that is filtered: the image's own, or the picture inside a cell. */
export function pictureExtent(image: PlannedLevel | PlannedTarget): Extent {
  return 'level' in image ? image.extent : image.place.picture;
}

function methodsOf(plan: ChainPlan): readonly Method[] {
  return [...plan.levels, ...plan.targets].flatMap((image) => (image.method === null ? [] : [image.method]));
}

/** Whether the kernels of both axes are areas, so that the chain's own pass measures mean lengths. */
function weighsAreas(from: Extent, to: Extent, { kernel }: Treatment): boolean {
  return (['width', 'height'] as const).every((axis) => {
    if (from[axis] === to[axis]) return true;
    const { name } = to[axis] < from[axis] ? kernel.minify : kernel.magnify;
    return findKernel(name)?.kind === 'area';
  });
}

function planLevels(base: Extent, treatment: Treatment, fills: boolean, notes: string[]): PlannedLevel[] {
  const { levels } = treatment;
  const end = levelCount(base) - 1;
  const first = levels === 'none' ? 0 : Math.min(levels.first, end);
  const last = levels === 'none' ? 0 : Math.max(first, Math.min(levels.last ?? end, end));
  if (levels !== 'none' && levels.first > end) {
    notes.push(`Level ${levels.first} does not exist: the last level, ${end}, is shipped.`);
  }
  const deepest = fills ? end : last;
  return Array.from({ length: deepest + 1 }, (_, level) => {
    const extent = levelExtent(base, level);
    const from = treatment.derive === 'previous' && level > 0 ? levelExtent(base, level - 1) : base;
    const method = level === 0 ? null : methodOf(from, extent, treatment, `level ${level}`);
    return { level, extent, method, shipped: level >= first && level <= last };
  });
}

function planTarget(base: Extent, target: Target, treatment: Treatment): PlannedTarget {
  const place = targetPlace(base, target);
  return { target, place, method: methodOf(base, place.picture, treatment, target.name) };
}
