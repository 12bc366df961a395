import { readFileSync } from 'node:fs';
import { buildChain } from '../../core/chain/chain.ts';
import { levelCount, levelExtent } from '../../core/chain/levels.ts';
import type { Extent, StraightRaster } from '../../core/raster/raster.ts';
import type { Engine } from '../../core/resample/engine.ts';
import { createEngine } from '../../core/simd/engine.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';

/** The engine that builds run on. */
export function openEngine(): Engine {
  return createEngine(new WebAssembly.Module(readFileSync(new URL('./engine.wasm', import.meta.url))));
}

/** The levels below an image. */
export function ownChain(engine: Engine, image: StraightRaster, treatment: Treatment): readonly Uint8Array[] {
  return buildChain(image, treatment, { engine })
    .images.slice(1)
    .map(({ raster }) => {
      if (raster.kind === 'indexed') throw new TypeError('Expected codes but received indices');
      return new Uint8Array(raster.codes.buffer, raster.codes.byteOffset, raster.codes.byteLength);
    });
}

export function extentsBelow(extent: Extent): readonly Extent[] {
  return Array.from({ length: levelCount(extent) - 1 }, (_, index) => levelExtent(extent, index + 1));
}

/** Texels of 2^20. */
export function megatexels({ width, height }: Extent): number {
  return (width * height) / 2 ** 20;
}
