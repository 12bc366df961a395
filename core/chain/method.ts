import { findKernel, type Kernel, type KernelParams, kernels } from '../kernel/table.ts';
import { buildTaps, type Taps } from '../kernel/taps.ts';
import { refuse } from '../problem.ts';
import type { Extent } from '../raster/raster.ts';
import type { KernelChoice, Treatment } from '../treatment/treatment.ts';

/** How one image is made from another. The one place where the engine switches on a kernel's kind. */
export type Method =
  /** Weighs floats row by row. */
  | { readonly kind: 'rows'; readonly x: Taps; readonly y: Taps }
  /** Moves codes: a single tap a texel on both axes. */
  | { readonly kind: 'codes'; readonly x: Taps; readonly y: Taps }
  | { readonly kind: 'footprint'; readonly kernel: 'majority' | 'detail'; readonly params: KernelParams }
  | { readonly kind: 'scaler'; readonly factor: number }
  | { readonly kind: 'slopes' };

/** Throws Refusal where the treatment's kernel cannot make `to` from `from`. `target` names the image in words. */
export function methodOf(from: Extent, to: Extent, treatment: Treatment, target: string): Method {
  const x = axisKernel(from.width, to.width, treatment);
  const y = axisKernel(from.height, to.height, treatment);
  const kinds = new Set([x, y].flatMap((axis) => (axis === null ? [] : [axis.kernel.kind])));
  const chosen = x ?? y;
  if (chosen === null || isTapped(kinds)) return tapped(from, to, x, y);
  if (kinds.size > 1 || (x !== null && y !== null && x.kernel !== y.kernel)) {
    refuse('kernel-both-ways', {
      target,
      kernels: [...new Set([x, y].map((axis) => axis?.kernel.name))].join(' and '),
    });
  }
  const { kernel, params } = chosen;
  switch (kernel.kind) {
    case 'slopes':
      return { kind: 'slopes' };
    case 'footprint':
      return { kind: 'footprint', kernel: kernel.name === 'majority' ? 'majority' : 'detail', params };
    case 'scaler':
      return { kind: 'scaler', factor: scalerFactor(from, to, kernel.name, kernel.factors) };
    case 'weights':
    case 'area':
    case 'point':
      return tapped(from, to, x, y);
  }
}

/** Whether the method leaves the source's codes as they are and only places them. */
export function movesCodes(method: Method): boolean {
  return (
    method.kind === 'codes' || method.kind === 'scaler' || (method.kind === 'footprint' && method.kernel === 'majority')
  );
}

interface AxisKernel {
  readonly kernel: Kernel;
  readonly params: KernelParams;
}

/** The kernel that an axis asks for; null where its extent stays and the axis is copied. */
function axisKernel(from: number, to: number, treatment: Treatment): AxisKernel | null {
  if (from === to) return null;
  const action = to < from ? 'minify' : 'magnify';
  const choice: KernelChoice = treatment.kernel[action];
  const kernel = findKernel(choice.name);
  if (kernel === undefined) throw new RangeError(`Expected a kernel of the table but received ${choice.name}`);
  const able = (each: Kernel): boolean => (action === 'minify' ? each.minifies : each.magnifies);
  if (!able(kernel)) {
    const others = kernels.filter(able).map((each) => each.name);
    refuse('kernel-cannot', { kernel: kernel.name, action, from, to, others: others.join(', ') });
  }
  return { kernel, params: choice.params };
}

function isTapped(kinds: ReadonlySet<Kernel['kind']>): boolean {
  return [...kinds].every((kind) => kind === 'weights' || kind === 'area' || kind === 'point');
}

function tapped(from: Extent, to: Extent, x: AxisKernel | null, y: AxisKernel | null): Method {
  const tapsX = axisTaps(x, from.width, to.width);
  const tapsY = axisTaps(y, from.height, to.height);
  const moves = movesTexels(x, from.width, to.width) && movesTexels(y, from.height, to.height);
  return { kind: moves ? 'codes' : 'rows', x: tapsX, y: tapsY };
}

/** Whether the axis has one tap a texel by its kernel's nature. */
function movesTexels(axis: AxisKernel | null, from: number, to: number): boolean {
  if (axis === null || axis.kernel.kind === 'point') return true;
  return axis.kernel.kind === 'area' && axis.kernel.magnified === 'nearest' && to > from;
}

function axisTaps(axis: AxisKernel | null, from: number, to: number): Taps {
  if (axis === null) return buildTaps(findKernel('nearest')!, {}, from, to);
  return buildTaps(axis.kernel, axis.params, from, to);
}

function scalerFactor(from: Extent, to: Extent, kernel: string, factors: readonly number[]): number {
  const factor = to.width / from.width;
  let rest = factor;
  for (const each of factors) while (rest % each === 0) rest /= each;
  if (rest !== 1 || factor * from.height !== to.height) {
    const words = (extent: Extent): string => `${extent.width}x${extent.height}`;
    refuse('scaler-factor', { kernel, factors: factors.join(' and '), from: words(from), to: words(to) });
  }
  return factor;
}
