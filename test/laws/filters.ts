import type { Extent } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import type { Doubles } from '../reference/doubles.ts';
import { resampleDoubles } from '../reference/resample.ts';

/** One resample of floats, by the engine or by the reference: both must keep the laws. */
export interface Filter {
  readonly name: string;
  filter(image: Doubles, extent: Extent, kernels: Treatment['kernel'], wrap: Treatment['wrap']): Doubles;
  /** Rounding of one operation relative to its result: half a unit in the last place. */
  readonly rounding: number;
}

const reference: Filter = { name: 'reference', filter: resampleDoubles, rounding: 2 ** -53 };

export const filters: readonly Filter[] = [reference];

/** Error that one resample of values within -1..1 may gather. Each pass adds its taps one by one: as many roundings of
 *  sums below 2 (the taps' absolute sum is below 2 for every kernel), as many of the products, and as many of the taps
 *  themselves, which the engine holds as multiples of 2^-24. */
export function gathered(filter: Filter, taps: number): number {
  return 2 * 3 * 2 * taps * filter.rounding;
}

/** Taps of a pass at most: the widest kernel reaches 4 texels of the coarser grid to each side. */
export function mostTaps(from: number, to: number): number {
  return Math.ceil(8 * Math.max(1, from / to)) + 2;
}
