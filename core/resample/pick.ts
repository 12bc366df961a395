import { type Extent, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';

/** Where the border, transparent black, is picked instead of a texel. */
export const BORDER = -1;

/** A raster of `extent` whose texel k holds the codes (or the palette index) of source texel texels[k]; `BORDER` gives zero
 *  codes, or the first palette entry of alpha 0. Codes move untouched, the palette and its order stay. */
export function pickTexels<R extends StraightRaster | IndexedRaster>(raster: R, extent: Extent, texels: Int32Array): R;
export function pickTexels(
  raster: StraightRaster | IndexedRaster,
  extent: Extent,
  texels: Int32Array,
): StraightRaster | IndexedRaster {
  if (raster.kind === 'indexed') {
    const border = Math.max(0, clearIndex(raster));
    const indices = new Uint8Array(texels.length);
    for (let texel = 0; texel < texels.length; texel++) {
      indices[texel] = texels[texel] === BORDER ? border : raster.indices[texels[texel]];
    }
    return { ...raster, extent, indices };
  }
  const { channels, codes } = raster;
  const picked = newCodes(raster.depth, texels.length * channels);
  for (let texel = 0; texel < texels.length; texel++) {
    if (texels[texel] === BORDER) continue;
    for (let channel = 0; channel < channels; channel++) {
      picked[texel * channels + channel] = codes[texels[texel] * channels + channel];
    }
  }
  return { ...raster, extent, codes: picked };
}

/** Whether the raster can hold a texel of alpha 0 for the border. */
export function holdsBorder(raster: StraightRaster | IndexedRaster): boolean {
  return raster.kind === 'indexed' ? clearIndex(raster) >= 0 : raster.channels % 2 === 0;
}

/** The first palette entry of alpha 0, -1 where there is none. */
function clearIndex(raster: IndexedRaster): number {
  for (let entry = 0; entry < raster.alphaCount; entry++) if (raster.palette[entry * 4 + 3] === 0) return entry;
  return -1;
}
