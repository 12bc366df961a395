import { expandIndexed, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { SectionAnswer } from './want.ts';

/** Most texels that a section holds. */
export const SECTION_LENGTH = 4096;

/** Codes of the texels that a line crosses, one for each texel of its longer direction, at most `SECTION_LENGTH`. Ends are shares
 *  of width and height. */
export function sectionOf(
  source: StraightRaster | IndexedRaster,
  from: readonly [number, number],
  to: readonly [number, number],
): SectionAnswer {
  const { width, height } = source.extent;
  const reach = Math.max(Math.abs(to[0] - from[0]) * width, Math.abs(to[1] - from[1]) * height);
  const length = Math.max(1, Math.min(SECTION_LENGTH, Math.round(reach)));
  const texels = Array.from({ length }, (_, i) => {
    const share = (i + 0.5) / length;
    const x = texelAt(from[0] + (to[0] - from[0]) * share, width);
    const y = texelAt(from[1] + (to[1] - from[1]) * share, height);
    return y * width + x;
  });
  const line = pickTexels(source, texels);
  return { kind: 'section', channels: line.channels, depth: line.depth, codes: line.codes };
}

function texelAt(share: number, count: number): number {
  return Math.min(count - 1, Math.max(0, Math.floor(share * count)));
}

function pickTexels(source: StraightRaster | IndexedRaster, texels: readonly number[]): StraightRaster {
  const extent = { width: texels.length, height: 1 };
  if (source.kind === 'indexed') {
    return expandIndexed({ ...source, extent, indices: Uint8Array.from(texels, (texel) => source.indices[texel]) });
  }
  const { channels, depth } = source;
  const codes = newCodes(depth, texels.length * channels);
  texels.forEach((texel, i) => {
    for (let channel = 0; channel < channels; channel++) {
      codes[i * channels + channel] = source.codes[texel * channels + channel];
    }
  });
  return { kind: 'straight', extent, channels, depth, codes };
}
