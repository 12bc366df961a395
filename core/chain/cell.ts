import { expandIndexed, type Raster } from '../raster/raster.ts';
import { blankLike, pasteRegion } from '../raster/region.ts';
import type { TargetPlace } from './levels.ts';

/** The picture in its cell, the rest transparent. What stands round it takes the colour of the picture's nearest texel, so
 *  that a sampler at the picture's edge does not pull black in. `alpha` is the channel that becomes 0 there; without one
 *  the rest is 0 in every channel. An indexed picture stays indexed where its palette has a clear entry. */
export function placeInCell(raster: Raster, place: TargetPlace, alpha: number | null): Raster {
  const { whole, picture, left, top } = place;
  if (whole.width === picture.width && whole.height === picture.height) return raster;
  if (raster.kind === 'indexed') {
    const clear = clearEntry(raster.palette, raster.alphaCount);
    if (clear < 0) return placeInCell(expandIndexed(raster), place, alpha);
    const cell = blankLike(raster, whole);
    cell.indices.fill(clear);
    pasteRegion(cell, raster, left, top);
    return cell;
  }
  if (raster.kind === 'premultiplied') {
    const cell = blankLike({ ...raster, kind: 'straight' }, whole);
    pasteRegion(cell, { ...raster, kind: 'straight' }, left, top);
    return { ...cell, kind: 'premultiplied' };
  }
  const cell = blankLike(raster, whole);
  const { channels } = raster;
  if (alpha !== null) {
    for (let y = 0; y < whole.height; y++) {
      const row = clampTo(y - top, picture.height) * picture.width;
      for (let x = 0; x < whole.width; x++) {
        const from = (row + clampTo(x - left, picture.width)) * channels;
        const to = (y * whole.width + x) * channels;
        for (let channel = 0; channel < channels; channel++) {
          if (channel !== alpha) cell.codes[to + channel] = raster.codes[from + channel];
        }
      }
    }
  }
  pasteRegion(cell, raster, left, top);
  return cell;
}

function clearEntry(palette: Uint8Array, alphaCount: number): number {
  for (let entry = 0; entry < alphaCount; entry++) if (palette[entry * 4 + 3] === 0) return entry;
  return -1;
}

function clampTo(i: number, count: number): number {
  return Math.min(Math.max(i, 0), count - 1);
}
