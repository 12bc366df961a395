import { deflateSync } from 'node:zlib';
import { PNG } from 'pngjs';

import { crc32 } from '../../../core/codec/crc.ts';
import type { IndexedRaster, StraightRaster } from '../../../core/raster/raster.ts';

/** PNG color types by channel count. */
const COLOR_TYPES = [0, 0, 4, 2, 6] as const;

/** A PNG file of a painted raster. */
export function encodePng(raster: StraightRaster | IndexedRaster): Uint8Array {
  return raster.kind === 'indexed' ? encodeIndexed(raster) : encodeStraight(raster);
}

function encodeStraight({ extent, channels, depth, codes }: StraightRaster): Uint8Array {
  const colorType = COLOR_TYPES[channels];
  const png = new PNG({ ...extent, colorType });
  png.data = Buffer.from(codes.buffer, codes.byteOffset, codes.byteLength);
  return PNG.sync.write(png, {
    colorType,
    inputColorType: colorType,
    inputHasAlpha: channels % 2 === 0,
    bitDepth: depth,
    deflateLevel: 9,
    deflateStrategy: 0,
  });
}

/** Written by hand, since pngjs writes no palettes. */
function encodeIndexed({ extent, indexBits, indices, palette, alphaCount }: IndexedRaster): Uint8Array {
  const { width, height } = extent;
  const header = Buffer.alloc(13);
  header.writeUInt32BE(width, 0);
  header.writeUInt32BE(height, 4);
  header.set([indexBits, 3, 0, 0, 0], 8);
  const stride = Math.ceil((width * indexBits) / 8) + 1;
  const rows = Buffer.alloc(stride * height);
  indices.forEach((index, texel) => {
    const bit = (texel % width) * indexBits;
    rows[Math.floor(texel / width) * stride + 1 + (bit >> 3)] |= index << (8 - indexBits - (bit & 7));
  });
  const entries = Array.from({ length: palette.length / 4 }, (_, entry) => entry * 4);
  return Buffer.concat([
    Buffer.from([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]),
    chunk('IHDR', header),
    chunk('PLTE', Buffer.from(entries.flatMap((at) => [...palette.subarray(at, at + 3)]))),
    ...(alphaCount > 0 ? [chunk('tRNS', Buffer.from(entries.slice(0, alphaCount).map((at) => palette[at + 3])))] : []),
    chunk('IDAT', deflateSync(rows, { level: 9 })),
    chunk('IEND', Buffer.alloc(0)),
  ]);
}

function chunk(name: string, data: Uint8Array): Buffer {
  const body = Buffer.concat([Buffer.from(name, 'latin1'), data]);
  const ends = Buffer.alloc(8);
  ends.writeUInt32BE(data.length, 0);
  ends.writeUInt32BE(crc32(body), 4);
  return Buffer.concat([ends.subarray(0, 4), body, ends.subarray(4)]);
}
