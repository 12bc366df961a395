import type { IndexedRaster, StraightRaster } from '../raster/raster.ts';
import { newCodes } from '../raster/raster.ts';
import type { ImageSource } from './source.ts';

/** Collects all rows of an image into a raster of its own: indices where the file is indexed. Throws Refusal. */
export async function decodeImage(source: ImageSource): Promise<StraightRaster | IndexedRaster> {
  const { extent, channels, depth, indexed } = source.header;
  const rowLength = extent.width * (indexed === null ? channels : 1);
  const codes = newCodes(indexed === null ? depth : 8, rowLength * extent.height);
  for await (const row of source.rows()) codes.set(row.codes, row.y * rowLength);
  if (indexed === null) return { kind: 'straight', extent, channels, depth, codes };
  return { kind: 'indexed', extent, ...indexed, indices: codes as Uint8Array };
}
