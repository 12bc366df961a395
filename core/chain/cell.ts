import {
  type ChannelCount,
  expandIndexed,
  maxCode,
  newCodes,
  type Raster,
  type StraightRaster,
} from '../raster/raster.ts';
import { blankLike, pasteRegion } from '../raster/region.ts';
import type { TargetPlace } from './levels.ts';

/** The picture in its cell, the rest transparent. What stands round it takes the color of the picture's nearest texel, so
 *  that a sampler at the picture's edge does not pull black in. `alpha` is the channel that becomes 0 there; a gray or RGB
 *  picture is given one, and where all channels have another use the rest is 0 in each. An indexed picture stays indexed
 *  where its palette has a clear entry. */
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
  const { channels } = raster;
  if (alpha === null && channels % 2 === 1) return placeInCell(withAlpha(raster), place, channels);
  const cell = blankLike(raster, whole);
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

/** The same picture with full alpha behind its channels. */
function withAlpha(raster: StraightRaster): StraightRaster {
  const { extent, depth } = raster;
  const channels = (raster.channels + 1) as ChannelCount;
  const codes = newCodes(depth, extent.width * extent.height * channels).fill(maxCode(depth));
  for (let at = 0, to = 0; at < raster.codes.length; at += raster.channels, to += channels) {
    for (let channel = 0; channel < raster.channels; channel++) codes[to + channel] = raster.codes[at + channel];
  }
  return { ...raster, channels, codes };
}

function clearEntry(palette: Uint8Array, alphaCount: number): number {
  for (let entry = 0; entry < alphaCount; entry++) if (palette[entry * 4 + 3] === 0) return entry;
  return -1;
}

function clampTo(i: number, count: number): number {
  return Math.min(Math.max(i, 0), count - 1);
}
