import { maxCode, type PremultipliedRaster, type StraightRaster } from '../../raster/raster.ts';
import type { Ktx2Format, Ktx2Layout } from './format.ts';

export type Ktx2Level = StraightRaster | PremultipliedRaster;

/** The level's texels in the layout's lanes, rows tightly packed, 16-bit codes with the low byte first. Pieces are valid
 *  until the next is asked for; where the codes are the texels already, they are handed over uncopied. */
export function* storedTexels(level: Ktx2Level, layout: Ktx2Layout): Iterable<Uint8Array> {
  const { codes, channels, extent } = level;
  if (codes instanceof Uint8Array && isPlain(layout, channels)) {
    yield codes;
    return;
  }
  const rowCodes = extent.width * channels;
  const row = new Uint8Array(extent.width * texelBytes(layout.format));
  for (let y = 0; y < extent.height; y++) {
    fillRow(codes.subarray(y * rowCodes, (y + 1) * rowCodes), channels, layout, row);
    yield row;
  }
}

export function texelBytes({ channels, depth }: Ktx2Format): number {
  return channels * (depth / 8);
}

function isPlain({ lanes }: Ktx2Layout, channels: number): boolean {
  return lanes.length === channels && lanes.every((lane, index) => lane === index);
}

function fillRow(codes: ArrayLike<number>, channels: number, { format, lanes }: Ktx2Layout, row: Uint8Array): void {
  const stride = texelBytes(format);
  const codeBytes = format.depth / 8;
  const full = maxCode(format.depth);
  for (const [index, lane] of lanes.entries()) {
    for (let from = 0, at = index * codeBytes; from < codes.length; from += channels, at += stride) {
      const code = lane === 'max' ? full : codes[from + lane];
      row[at] = code;
      if (codeBytes === 2) row[at + 1] = code >>> 8;
    }
  }
}
