import type { StraightRaster } from '../../../core/raster/raster.ts';
import type { Color } from './color.ts';

/** Samples a texel on each axis. */
const GRID = 4;

/** A picture with an alpha channel from a shape that is either there, with a color, or not. Alpha is the share of a
 *  texel's samples that are there, color their mean; where none is, both are 0. Coordinates are in texels. */
export function cutOut(width: number, height: number, shape: (x: number, y: number) => Color | null): StraightRaster {
  const codes = new Uint8Array(width * height * 4);
  for (let texel = 0; texel < width * height; texel++) {
    const sum = [0, 0, 0];
    let count = 0;
    for (let sample = 0; sample < GRID * GRID; sample++) {
      const x = (texel % width) + ((sample % GRID) + 0.5) / GRID;
      const y = Math.floor(texel / width) + (Math.floor(sample / GRID) + 0.5) / GRID;
      const color = shape(x, y);
      if (color === null) continue;
      count++;
      for (let channel = 0; channel < 3; channel++) sum[channel] += color[channel];
    }
    if (count === 0) continue;
    for (let channel = 0; channel < 3; channel++) codes[texel * 4 + channel] = Math.round(sum[channel] / count);
    codes[texel * 4 + 3] = Math.round((count * 255) / (GRID * GRID));
  }
  return { kind: 'straight', extent: { width, height }, channels: 4, depth: 8, codes };
}
