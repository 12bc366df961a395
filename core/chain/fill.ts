import type { Extent, StraightRaster } from '../raster/raster.ts';

// Color for texels whose alpha code is 0, so that a sampler that interpolates does not pull black into edges: the color of
// the texel over it in the next coarser level, from the last level upward.  [Gortler96, the pull of pull-push]

/** Fills `raster` in place from a coarser raster of the same channels. `alpha` is the channel that must be 0. */
export function fillFrom(raster: StraightRaster, coarser: StraightRaster, alpha: number): void {
  const { width, height } = raster.extent;
  const { channels, codes } = raster;
  const columns = texelsOver(raster.extent, coarser.extent, 'width');
  const rows = texelsOver(raster.extent, coarser.extent, 'height');
  const [words, from] = [wordsOf(raster, alpha), wordsOf(coarser, alpha)];
  if (words !== null && from !== null) {
    for (let y = 0, at = 0; y < height; y++) {
      const over = rows[y] * coarser.extent.width;
      for (let x = 0; x < width; x++, at++) {
        if (words[at] >>> 24 === 0) words[at] = from[over + columns[x]] & 0xffffff;
      }
    }
    return;
  }
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const at = (y * width + x) * channels;
      if (codes[at + alpha] !== 0) continue;
      const over = (rows[y] * coarser.extent.width + columns[x]) * channels;
      copyColor(coarser.codes, over, codes, at, channels, alpha);
    }
  }
}

/** Fills with one texel: the mean color of the whole image, which stands for a level coarser than 1x1. */
export function fillWith(raster: StraightRaster, texel: StraightRaster, alpha: number): void {
  const { channels, codes } = raster;
  for (let at = 0; at < codes.length; at += channels) {
    if (codes[at + alpha] === 0) copyColor(texel.codes, 0, codes, at, channels, alpha);
  }
}

/** RGBA of 8 bits as numbers with alpha on top, a texel in one step instead of five; null where that cannot be. */
function wordsOf({ codes, channels, depth }: StraightRaster, alpha: number): Uint32Array | null {
  if (depth !== 8 || channels !== 4 || alpha !== 3 || codes.byteOffset % 4 !== 0 || !isLittleEndian) return null;
  return new Uint32Array(codes.buffer, codes.byteOffset, codes.length / 4);
}

const isLittleEndian = new Uint8Array(Uint32Array.of(1).buffer)[0] === 1;

function copyColor(
  from: StraightRaster['codes'],
  source: number,
  to: StraightRaster['codes'],
  at: number,
  channels: number,
  alpha: number,
): void {
  for (let channel = 0; channel < channels; channel++) if (channel !== alpha) to[at + channel] = from[source + channel];
}

/** For each texel of an axis the coarser texel that holds its center. */
function texelsOver(fine: Extent, coarse: Extent, axis: 'width' | 'height'): Int32Array {
  const count = fine[axis];
  return Int32Array.from({ length: count }, (_, i) => Math.floor(((2 * i + 1) * coarse[axis]) / (2 * count)));
}
