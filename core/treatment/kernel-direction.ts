import { findKernel, type Kernel } from '../kernel/table.ts';
import { defaultKernel } from './defaults.ts';
import type { Entry } from './text/entry.ts';
import type { Content, KernelChoice, Target, Treatment } from './treatment.ts';

export type Direction = 'minify' | 'magnify';

/** The kernel of one direction. A name given for both directions counts for those it can; where it cannot, the content's own
 *  kernel stands in (and it is a conflict if the treatment then asks for that direction). */
export function kernelFor(
  direction: Direction,
  entry: Entry | undefined,
  content: Content,
): { readonly kernel: KernelChoice; readonly from: 'entry' | 'built-in' } {
  const choice = entry?.value as KernelChoice | undefined;
  if (choice === undefined || (entry!.given === 'spread' && !can(choice, direction))) {
    return { kernel: defaultKernel(content), from: 'built-in' };
  }
  return { kernel: choice, from: 'entry' };
}

export function can(choice: KernelChoice, direction: Direction): boolean {
  const kernel = known(choice);
  return direction === 'minify' ? kernel.minifies : kernel.magnifies;
}

/** What surely asks for a direction, in words; null where nothing does. Extents and cells may go either way, which only the
 *  image tells: the engine looks at those. */
export function asksFor(treatment: Treatment, direction: Direction): string | null {
  const { levels } = treatment;
  if (direction === 'minify' && levels !== 'none' && levels.last !== 0) return 'the chain of levels';
  const target = treatment.targets.find((each) => {
    if (!('scale' in each)) return false;
    return direction === 'minify' ? each.scale < 1 : each.scale > 1;
  });
  return target === undefined ? null : `the target ${target.name}`;
}

/** The first scale that the magnifying kernel, a scaler for fixed factors, cannot reach. */
export function unreachableScale(treatment: Treatment): Target | undefined {
  const kernel = known(treatment.kernel.magnify);
  if (kernel.kind !== 'scaler') return undefined;
  const { factors } = kernel;
  return treatment.targets.find((each) => 'scale' in each && each.scale > 1 && !isProduct(each.scale, factors));
}

function isProduct(scale: number, factors: readonly number[]): boolean {
  if (scale === 1) return true;
  return factors.some((factor) => Number.isInteger(scale / factor) && isProduct(scale / factor, factors));
}

function known(choice: KernelChoice): Kernel {
  const kernel = findKernel(choice.name);
  if (kernel === undefined) throw new TypeError(`Expected the name of a kernel but received ${choice.name}`);
  return kernel;
}
