import { writeFileSync } from 'node:fs';
import type Sharp from 'sharp';
import type { StraightRaster } from '../../core/raster/raster.ts';

/** Writes an image as a PNG file, in the way that painting programs do: filters chosen row by row. */
export async function writeSource(sharp: typeof Sharp, image: StraightRaster, file: string): Promise<void> {
  const { codes, extent, channels, depth } = image;
  const made = sharp(codes as Uint8Array, { raw: { ...extent, channels } });
  const packed = (depth === 16 ? made.toColourspace('rgb16') : made).png({ adaptiveFiltering: true });
  writeFileSync(file, await packed.toBuffer());
}

/** Settings as a file: the same work as the peers do, and PNG alone. */
export const plainSettings = JSON.stringify({ defaults: { kernel: 'lanczos3', fill: 'none', outputs: ['png'] } });
