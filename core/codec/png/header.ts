import { refuse } from '../../problem.ts';
import type { ChannelCount, Extent } from '../../raster/raster.ts';
import { checkExtent } from '../limits.ts';
import { type Chunk, readUint32 } from './chunks.ts';

export type ColorType = 0 | 2 | 3 | 4 | 6;

export type BitDepth = 1 | 2 | 4 | 8 | 16;

/** The IHDR chunk, every field checked. */
export interface PngHeader {
  readonly extent: Extent;
  readonly bitDepth: BitDepth;
  readonly colorType: ColorType;
  readonly interlaced: boolean;
}

/** Samples of one texel as stored: an index, or gray or RGB with or without alpha. */
export const STORED_SAMPLES: Readonly<Record<ColorType, ChannelCount>> = { 0: 1, 2: 3, 3: 1, 4: 2, 6: 4 };

/** Reads IHDR. Throws Refusal for what PNG does not allow and for an extent outside the limits.
 *  [PNG3, 11.2.1 "IHDR Image header"] */
export function readPngHeader(chunk: Chunk): PngHeader {
  const { name, offset, body } = chunk;
  if (body.length !== IHDR_BYTES) {
    refuse('png-chunk-length', { chunk: name, offset, found: body.length, expected: IHDR_BYTES });
  }
  const extent = { width: readUint32(body, 0), height: readUint32(body, 4) };
  checkExtent(extent);
  const [bitDepth, colorType, compression, filter, interlace] = body.subarray(8);
  const depths = DEPTHS[colorType];
  if (depths === undefined) {
    refuse('png-header', { field: 'color type', found: colorType, allowed: '0, 2, 3, 4, 6' });
  }
  if (!depths.includes(bitDepth)) {
    refuse('png-header', {
      field: `color type ${colorType} and bit depth`,
      found: bitDepth,
      allowed: depths.join(', '),
    });
  }
  if (compression !== 0) refuse('png-header', { field: 'compression method', found: compression, allowed: '0' });
  if (filter !== 0) refuse('png-header', { field: 'filter method', found: filter, allowed: '0' });
  if (interlace > 1) refuse('png-header', { field: 'interlace method', found: interlace, allowed: '0, 1' });
  return { extent, bitDepth: bitDepth as BitDepth, colorType: colorType as ColorType, interlaced: interlace === 1 };
}

const IHDR_BYTES = 13;

/** Bit depths of each color type. [PNG3, table 12] */
const DEPTHS: Readonly<Record<number, readonly number[] | undefined>> = {
  0: [1, 2, 4, 8, 16],
  2: [8, 16],
  3: [1, 2, 4, 8],
  4: [8, 16],
  6: [8, 16],
};
