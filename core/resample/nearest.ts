import type { Taps } from '../kernel/taps.ts';
import { type Extent, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';

/** Moves codes: each target texel is the source texel its taps name. `x` and `y` hold one tap a target texel. */
export function moveCodes<R extends StraightRaster | IndexedRaster>(raster: R, x: Taps, y: Taps): R {
  const extent = { width: x.to, height: y.to };
  if (raster.kind === 'indexed') {
    const indices = new Uint8Array(extent.width * extent.height);
    moveSamples(raster.indices, indices, raster.extent, 1, x, y);
    return { ...raster, extent, indices };
  }
  const codes = newCodes(raster.depth, extent.width * extent.height * raster.channels);
  moveSamples(raster.codes, codes, raster.extent, raster.channels, x, y);
  return { ...raster, extent, codes };
}

function moveSamples(
  from: Uint8Array | Uint16Array,
  to: Uint8Array | Uint16Array,
  extent: Extent,
  channels: number,
  x: Taps,
  y: Taps,
): void {
  let at = 0;
  for (let row = 0; row < y.to; row++) {
    const start = y.first[row] * extent.width;
    for (let column = 0; column < x.to; column++) {
      const source = (start + x.first[column]) * channels;
      for (let channel = 0; channel < channels; channel++) to[at++] = from[source + channel];
    }
  }
}
