import fc from 'fast-check';
import { defaultParams, findKernel, type Kernel, type KernelParams, kernels } from '../../core/kernel/table.ts';
import type { Taps } from '../../core/kernel/taps.ts';

export type WeightsKernel = Extract<Kernel, { kind: 'weights' }>;

/** Kernels that have taps, and those whose taps mirror: all but nearest, which decides ties by floor. */
export const tapped = kernels.filter((kernel) => ['weights', 'area', 'point'].includes(kernel.kind));
export const weighing = kernels.filter((kernel): kernel is WeightsKernel => kernel.kind === 'weights');

export function kernelNamed(name: string): Kernel {
  const kernel = findKernel(name);
  if (kernel === undefined) throw new RangeError(`Expected a kernel's name but received ${name}`);
  return kernel;
}

export function weightsNamed(name: string): WeightsKernel {
  const kernel = kernelNamed(name);
  if (kernel.kind !== 'weights') throw new TypeError(`Expected a kernel of weights but received ${name}`);
  return kernel;
}

/** Weight at x with the default parameters, or those given. */
export function weightOf(name: string, x: number, params?: KernelParams): number {
  const kernel = weightsNamed(name);
  return kernel.weight(x, params ?? defaultParams(kernel));
}

/** Unnormalised weights of the source texels around a point at phase t between texels 0 and 1: from -reach+1 to reach. */
export function weightsAt(name: string, t: number, reach: number, params?: KernelParams): number[] {
  return Array.from({ length: 2 * reach }, (_, k) => weightOf(name, k - reach + 1 - t, params));
}

/** Weights of target texel j as plain numbers. */
export function tapsOf(taps: Taps, j: number): number[] {
  return Array.from(taps.weights.subarray(taps.start[j], taps.start[j] + taps.count[j]));
}

/** One extent: mostly small ones, where edges and phases are dense, sometimes a large one. */
const extent = fc.oneof(
  { weight: 8, arbitrary: fc.integer({ min: 1, max: 300 }) },
  { weight: 1, arbitrary: fc.constantFrom(1024, 1023, 2047, 4096) },
);

export const extents = fc.tuple(extent, extent);

/** Any values of the kernel's parameters that the table allows. */
export function anyParams(kernel: Kernel): fc.Arbitrary<KernelParams> {
  return fc.record(
    Object.fromEntries(
      kernel.params.map(({ name, min, max, allowed }) => [
        name,
        allowed ? fc.constantFrom(...allowed) : fc.double({ min, max, noNaN: true }),
      ]),
    ),
  );
}
