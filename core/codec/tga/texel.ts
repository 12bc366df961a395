import type { ChannelCount, Palette } from '../../raster/raster.ts';
import { byteCount, type ColorMap, readUint16, type TexelBits } from './header.ts';

/** Turns `count` stored texels from `bytes[offset]` on into codes of 8 bits, from the start of `out`. */
export type ReadTexels = (bytes: Uint8Array, offset: number, count: number, out: Uint8Array) => void;

/** Codes a texel of these bits expands to; `alpha` is whether the bits beside the color are alpha. */
export function colorChannels(bits: TexelBits, alpha: boolean): ChannelCount {
  return alpha && (bits === 16 || bits === 32) ? 4 : 3;
}

/** Colors are stored as blue, green, red and then attribute bits, or as 5 bits each in a little-endian word with the
 *  attribute bit on top. [TGA2, "Image data field"] */
export function colorReader(bits: TexelBits, channels: ChannelCount): ReadTexels {
  if (bits === 15 || bits === 16) return channels === 4 ? readWordsAlpha : readWords;
  const stride = byteCount(bits);
  return (bytes, offset, count, out) => {
    for (let to = 0, from = offset; to < count * channels; to += channels, from += stride) {
      out[to] = bytes[from + 2];
      out[to + 1] = bytes[from + 1];
      out[to + 2] = bytes[from];
      if (channels === 4) out[to + 3] = bytes[from + 3];
    }
  };
}

/** Bytes as they are: gray, gray and alpha, and indices of 8 bits. */
export function byteReader(channels: ChannelCount): ReadTexels {
  return (bytes, offset, count, out) => out.set(bytes.subarray(offset, offset + count * channels));
}

/** Entries of a color map as RGBA, opaque where they carry no alpha. */
export function readColorMap(bytes: Uint8Array, map: ColorMap, alpha: boolean): Palette {
  const channels = colorChannels(map.entryBits, alpha);
  const codes = new Uint8Array(map.length * channels);
  colorReader(map.entryBits, channels)(bytes, map.offset, map.length, codes);
  if (channels === 4) return codes;
  const palette = new Uint8Array(map.length * 4).fill(255);
  for (let entry = 0; entry < map.length; entry++) {
    palette.set(codes.subarray(entry * 3, entry * 3 + 3), entry * 4);
  }
  return palette;
}

function readWords(bytes: Uint8Array, offset: number, count: number, out: Uint8Array): void {
  for (let to = 0, from = offset; to < count * 3; to += 3, from += 2) putWord(readUint16(bytes, from), out, to);
}

function readWordsAlpha(bytes: Uint8Array, offset: number, count: number, out: Uint8Array): void {
  for (let to = 0, from = offset; to < count * 4; to += 4, from += 2) {
    const word = readUint16(bytes, from);
    putWord(word, out, to);
    out[to + 3] = word & 0x8000 ? 255 : 0;
  }
}

function putWord(word: number, out: Uint8Array, to: number): void {
  out[to] = FIVE_TO_EIGHT[(word >> 10) & 31];
  out[to + 1] = FIVE_TO_EIGHT[(word >> 5) & 31];
  out[to + 2] = FIVE_TO_EIGHT[word & 31];
}

/** round(v * 255 / 31). [PNG3, 12.4 "Sample depth scaling"] */
const FIVE_TO_EIGHT = new Uint8Array(32).map((_, code) => Math.floor((code * 255) / 31 + 0.5));
