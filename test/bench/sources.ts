import { writeFileSync } from 'node:fs';
import type Sharp from 'sharp';
import { crc32 } from '../../core/codec/crc.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';

/** Writes an image as a PNG file. */
export async function writeSource(sharp: typeof Sharp, image: StraightRaster, file: string): Promise<void> {
  writeFileSync(file, await packSource(sharp, image));
}

/** An image as the bytes of a PNG file, in the way that painting programs do: filters chosen row by row. */
export async function packSource(sharp: typeof Sharp, image: StraightRaster): Promise<Uint8Array> {
  const { codes, extent, channels, depth } = image;
  const made = sharp(codes as Uint8Array, { raw: { ...extent, channels } });
  const packed = (depth === 16 ? made.toColourspace('rgb16') : made).png({ adaptiveFiltering: true });
  return packed.toBuffer();
}

/** Settings as a file: the same work as the peers do, and PNG alone. */
export const plainSettings = JSON.stringify({ defaults: { kernel: 'lanczos3', fill: 'none', outputs: ['png'] } });

/** The same picture as other bytes: a text chunk of its own stands before the end. */
export function remarked(png: Uint8Array, text: string): Uint8Array {
  const body = Buffer.from(`tEXtComment\0${text}`, 'latin1');
  const chunk = Buffer.alloc(body.length + 8);
  chunk.writeUInt32BE(body.length - 4, 0);
  chunk.set(body, 4);
  chunk.writeUInt32BE(crc32(body), body.length + 4);
  return Buffer.concat([png.subarray(0, -END_BYTES), chunk, png.subarray(-END_BYTES)]);
}

/** What IEND takes. */
const END_BYTES = 12;
