import { buildChain, type Chain } from '../../core/chain/chain.ts';
import type { ChainImage } from '../../core/chain/image.ts';
import type { ImageUse } from '../../core/manifest/manifest.ts';
import type { IndexedRaster, Raster, StraightRaster } from '../../core/raster/raster.ts';
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

export const engine: Builder = {
  name: 'engine',
  levels: (raster, treatment) => engineLevels(buildChain(raster, treatment)),
};

export const builders: readonly Builder[] = [reference, engine];

/** Levels of one use, straight. */
export function engineLevels(chain: Chain, use: ImageUse = 'image'): StraightRaster[] {
  return chain.images
    .filter((image) => image.use === use && image.level !== undefined)
    .map((image) => straight(image.raster));
}

/** The target of a name, as the engine makes it. */
export function engineTarget(source: StraightRaster | IndexedRaster, treatment: Treatment, name: string): ChainImage {
  const found = buildChain(source, treatment).images.find((image) => image.target === name);
  if (found === undefined) throw new RangeError(`Expected a target named ${name}`);
  return found;
}

export function straight(raster: Raster): StraightRaster {
  if (raster.kind !== 'straight') throw new TypeError(`Expected a straight raster but received ${raster.kind}`);
  return raster;
}
