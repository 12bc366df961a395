import type { StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { referenceChain } from '../reference/chain.ts';

/** A chain of codes, by the engine or by the reference: both must keep the laws. */
export interface Builder {
  readonly name: string;
  levels(raster: StraightRaster, treatment: Treatment): StraightRaster[];
}

const reference: Builder = {
  name: 'reference',
  levels: (raster, treatment) =>
    referenceChain(raster, treatment).map(({ extent, depth, codes }) => ({ ...raster, extent, depth, codes })),
};

export const builders: readonly Builder[] = [reference];
