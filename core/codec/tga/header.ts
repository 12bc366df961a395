import { refuse } from '../../problem.ts';
import type { Extent } from '../../raster/raster.ts';
import { checkExtent } from '../limits.ts';

export type TexelBits = 8 | 15 | 16 | 24 | 32;

/** The fixed header of a TGA image, every field checked. */
export interface TgaHeader {
  readonly kind: 'mapped' | 'color' | 'gray';
  readonly runLength: boolean;
  readonly extent: Extent;
  readonly texelBits: TexelBits;
  /** Whether the bits that a texel (or a color map entry) has beside its color are alpha. */
  readonly alpha: boolean;
  readonly fromRight: boolean;
  readonly fromBottom: boolean;
  readonly map: ColorMap | null;
  /** Where the image data starts. */
  readonly dataOffset: number;
}

/** Index `first` names the entry at `offset`. */
export interface ColorMap {
  readonly first: number;
  readonly length: number;
  readonly entryBits: Exclude<TexelBits, 8>;
  readonly offset: number;
}

export const TGA_HEADER_BYTES = 18;

/** Reads the header from the head of a file. Throws Refusal for what TGA does not have and for an extent outside the
 *  limits. Layout (little-endian): 0 length of the identification, 1 color map type, 2 image type, 3 first map entry (2),
 *  5 map length (2), 7 bits of a map entry, 8 x and y origin (4, ignored), 12 width (2), 14 height (2), 16 bits of a texel,
 *  17 descriptor: bits 0..3 attribute bits, 4 from the right, 5 from the top, 6..7 interleave, not used.
 *  [TGA2: Truevision TGA File Format Specification, Version 2.0, 1991, "TGA file header"] */
export function readTgaHeader(bytes: Uint8Array): TgaHeader {
  if (bytes.length === 0) refuse('file-empty', {});
  if (bytes.length < TGA_HEADER_BYTES) {
    refuse('tga-truncated', { part: 'header', found: bytes.length, expected: TGA_HEADER_BYTES });
  }
  const mapType = bytes[1];
  const [type, texelBits, descriptor] = [bytes[2], bytes[16], bytes[17]];
  const kind = KINDS[type] ?? refuse('tga-header', { field: 'image type', found: type, allowed: '1, 2, 3, 9, 10, 11' });
  if (mapType > 1) refuse('tga-header', { field: 'color map type', found: mapType, allowed: '0, 1' });
  if (kind === 'mapped' && mapType === 0)
    refuse('tga-header', { field: 'color map type', found: mapType, allowed: '1' });
  checkBits('bits a texel', texelBits, TEXEL_BITS[kind]);
  if (descriptor & 0xc0) refuse('tga-header', { field: 'interleave', found: descriptor >> 6, allowed: '0' });
  const attributeBits = descriptor & 0x0f;
  if (kind === 'gray' && texelBits === 16 && attributeBits === 0) {
    refuse('tga-header', { field: 'gray texels of 16 bits with attribute bits', found: 0, allowed: '8' });
  }
  const extent = { width: readUint16(bytes, 12), height: readUint16(bytes, 14) };
  checkExtent(extent);
  const mapOffset = TGA_HEADER_BYTES + bytes[0];
  return {
    kind,
    runLength: type >= 9,
    extent,
    texelBits: texelBits as TexelBits,
    alpha: attributeBits > 0,
    fromRight: (descriptor & 0x10) !== 0,
    fromBottom: (descriptor & 0x20) === 0,
    map: kind === 'mapped' ? readMap(bytes, mapOffset) : null,
    // A map beside a picture that does not use it is passed over.
    dataOffset: mapOffset + (mapType === 1 ? readUint16(bytes, 5) * byteCount(bytes[7]) : 0),
  };
}

export function byteCount(bits: number): number {
  return Math.ceil(bits / 8);
}

export function readUint16(bytes: Uint8Array, offset: number): number {
  return bytes[offset] | (bytes[offset + 1] << 8);
}

const KINDS: Readonly<Record<number, TgaHeader['kind'] | undefined>> = {
  1: 'mapped',
  2: 'color',
  3: 'gray',
  9: 'mapped',
  10: 'color',
  11: 'gray',
};

const TEXEL_BITS: Readonly<Record<TgaHeader['kind'], readonly number[]>> = {
  mapped: [8, 15, 16],
  color: [15, 16, 24, 32],
  gray: [8, 16],
};

function readMap(bytes: Uint8Array, offset: number): ColorMap {
  const [first, length, entryBits] = [readUint16(bytes, 3), readUint16(bytes, 5), bytes[7]];
  checkBits('bits a color map entry', entryBits, TEXEL_BITS.color);
  if (length === 0) refuse('tga-header', { field: 'color map length', found: length, allowed: '1..65535' });
  return { first, length, entryBits: entryBits as ColorMap['entryBits'], offset };
}

function checkBits(field: string, found: number, allowed: readonly number[]): void {
  if (!allowed.includes(found)) refuse('tga-header', { field, found, allowed: allowed.join(', ') });
}
