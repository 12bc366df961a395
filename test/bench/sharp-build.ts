import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type Sharp from 'sharp';
import type { Extent } from '../../core/raster/raster.ts';
import { extentsBelow } from './own.ts';

/** How sharp compresses PNG files. */
export interface Packing {
  readonly compressionLevel: number;
  readonly adaptiveFiltering: boolean;
}

/** A PNG file to the PNG files of its levels in linear light, each from the bytes of the one before. Answers their bytes. */
export async function buildBySharp(sharp: typeof Sharp, file: string, out: string, packing: Packing): Promise<number> {
  mkdirSync(out, { recursive: true });
  const { width, height, channels, depth } = await sharp(file).metadata();
  const wide = depth === 'ushort';
  // Without being asked, sharp brings 16 bits to 8 as it decodes.
  const read = wide ? sharp(file).toColourspace('rgb16') : sharp(file);
  const decoded = read.raw({ depth: wide ? 'ushort' : 'uchar' });
  let from: { codes: Buffer; extent: Extent } = { codes: await decoded.toBuffer(), extent: { width, height } };
  let bytes = 0;
  for (const [index, extent] of extentsBelow(from.extent).entries()) {
    const raw = { ...from.extent, channels: channels as 3 | 4 };
    const codes = await sharp(wide ? words(from.codes) : from.codes, { raw })
      .pipelineColourspace('scrgb')
      .resize(extent.width, extent.height, { kernel: 'lanczos3', fit: 'fill' })
      .toColourspace(wide ? 'rgb16' : 'srgb')
      .raw({ depth: wide ? 'ushort' : 'uchar' })
      .toBuffer();
    from = { codes, extent };
    const image = sharp(wide ? words(codes) : codes, { raw: { ...extent, channels: channels as 3 | 4 } });
    const png = await (wide ? image.toColourspace('rgb16') : image).png(packing).toBuffer();
    bytes += png.length;
    writeFileSync(join(out, `${index + 1}.png`), png);
  }
  return bytes;
}

function words(bytes: Buffer): Uint16Array {
  return new Uint16Array(bytes.buffer.slice(bytes.byteOffset, bytes.byteOffset + bytes.byteLength));
}

/** Of all its packings the one whose files come nearest to a size: that of the levels of some files together. */
export async function packingFor(
  sharp: typeof Sharp,
  files: readonly string[],
  out: string,
  wanted: number,
): Promise<Packing> {
  let best: { packing: Packing; miss: number } | null = null;
  for (const packing of PACKINGS) {
    let bytes = 0;
    for (const file of files) bytes += await buildBySharp(sharp, file, out, packing);
    const miss = Math.abs(Math.log(bytes / wanted));
    if (best === null || miss < best.miss) best = { packing, miss };
  }
  return best!.packing;
}

/** Filters decide most, then the level. */
const PACKINGS: readonly Packing[] = [
  { compressionLevel: 1, adaptiveFiltering: true },
  { compressionLevel: 4, adaptiveFiltering: true },
  { compressionLevel: 6, adaptiveFiltering: true },
  { compressionLevel: 6, adaptiveFiltering: false },
  { compressionLevel: 9, adaptiveFiltering: true },
];

export function packingWords({ compressionLevel, adaptiveFiltering }: Packing): string {
  return `level ${compressionLevel}, ${adaptiveFiltering ? 'adaptive filters' : 'no filters'}`;
}
