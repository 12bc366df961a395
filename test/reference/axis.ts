import type { KernelChoice } from '../../core/treatment/treatment.ts';
import { weightKernel } from './kernel.ts';

/** One source texel's share in a target texel. `index` is unwrapped: it may lie outside the axis. */
export interface Tap {
  readonly index: number;
  readonly weight: number;
}

/** For each of the `to` target texels its taps; they sum to 1 but for rounding in double precision. */
export function weighAxis(kernel: KernelChoice, from: number, to: number): Tap[][] {
  return Array.from({ length: to }, (_, j) => weighTexel(kernel, from, to, j));
}

function weighTexel(kernel: KernelChoice, from: number, to: number, j: number): Tap[] {
  if (from === to) return [{ index: j, weight: 1 }];
  if (kernel.name === 'nearest') return pointTap(from, to, j);
  if (kernel.name === 'box') return to > from ? pointTap(from, to, j) : areaTaps(from, to, j);
  if (kernel.name === 'even') return areaTaps(from, to, j);
  return kernelTaps(kernel, from, to, j);
}

/** The texel under the target's center: floor(u). */
export function pointTap(from: number, to: number, j: number): Tap[] {
  return [{ index: Math.floor(((2 * j + 1) * from) / (2 * to)), weight: 1 }];
}

/** Overlap of source and target intervals, both axes scaled to from * to units. */
export function areaTaps(from: number, to: number, j: number): Tap[] {
  const taps: Tap[] = [];
  for (let i = 0; i < from; i++) {
    const overlap = Math.min((i + 1) * to, (j + 1) * from) - Math.max(i * to, j * from);
    if (overlap > 0) taps.push({ index: i, weight: overlap / from });
  }
  return taps;
}

/** The kernel over source centers, stretched when minifying. The distance of centers in units of the coarser grid is
 *  ((2i + 1) to - (2j + 1) from) / (2 max(from, to)). */
function kernelTaps(choice: KernelChoice, from: number, to: number, j: number): Tap[] {
  const kernel = weightKernel(choice);
  if (kernel === null) throw new RangeError(`Expected a linear kernel but received ${choice.name}`);
  const coarse = Math.max(from, to);
  const center = ((2 * j + 1) * from) / (2 * to);
  const reach = (kernel.support * coarse) / to + 1;
  const taps: Tap[] = [];
  for (let i = Math.floor(center - reach); i <= Math.ceil(center + reach); i++) {
    const weight = kernel.weight(((2 * i + 1) * to - (2 * j + 1) * from) / (2 * coarse));
    if (weight !== 0) taps.push({ index: i, weight });
  }
  const sum = taps.reduce((total, tap) => total + tap.weight, 0);
  return taps.map((tap) => ({ index: tap.index, weight: tap.weight / sum }));
}
