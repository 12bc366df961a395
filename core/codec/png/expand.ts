import { refuse } from '../../problem.ts';
import type { ChannelCount, Codes, Depth } from '../../raster/raster.ts';
import { type PngHeader, STORED_SAMPLES } from './header.ts';
import type { Line } from './lines.ts';
import type { PngStructure } from './structure.ts';

/** What rows hold once expanded. */
export interface RowFormat {
  /** Codes a texel has in a row: 1 where it is an index. */
  readonly rowChannels: ChannelCount;
  readonly depth: Depth;
}

/** Turns a line's bytes into codes, `width` texels, from the start of `out`. Throws Refusal for an index beyond the palette. */
export type Expand = (line: Line, width: number, out: Codes) => void;

export function rowFormat(structure: Pick<PngStructure, 'header' | 'transparentColor'>): RowFormat {
  const { header, transparentColor } = structure;
  const stored = STORED_SAMPLES[header.colorType];
  const rowChannels = (transparentColor === null ? stored : stored + 1) as ChannelCount;
  return { rowChannels, depth: header.bitDepth === 16 ? 16 : 8 };
}

/** Whether the bytes of a line are the codes already. */
export function isExpanded({ header, transparentColor }: PngStructure): boolean {
  return header.bitDepth === 8 && header.colorType !== 3 && transparentColor === null;
}

/** Chooses the expansion once for all rows. */
export function expansionOf(structure: PngStructure): Expand {
  const { header, transparentColor } = structure;
  if (header.colorType === 3) return expandIndices(header, structure.palette!.length / 4);
  const unpack = unpackerOf(header);
  if (transparentColor === null) {
    return (line, width, out) => scaleUp(unpack(line.bytes, width, out), width, header, out);
  }
  return expandTransparentColor(header, unpack, transparentColor);
}

/** Samples at their stored depth, into `out`. */
type Unpack = (bytes: Uint8Array, width: number, out: Codes) => Codes;

function unpackerOf(header: PngHeader): Unpack {
  const { bitDepth } = header;
  const samples = STORED_SAMPLES[header.colorType];
  if (bitDepth === 16) return (bytes, width, out) => unpackWords(bytes, width * samples, out);
  if (bitDepth === 8) return unpackBytes;
  return (bytes, width, out) => unpackBits(bytes, bitDepth, width, out);
}

function unpackBytes(bytes: Uint8Array, _width: number, out: Codes): Codes {
  out.set(bytes);
  return out;
}

/** Most significant byte first, as the file has them; codes are in the machine's order. */
function unpackWords(bytes: Uint8Array, count: number, out: Codes): Codes {
  for (let index = 0, at = 0; index < count; index++, at += 2) out[index] = (bytes[at] << 8) | bytes[at + 1];
  return out;
}

/** 1, 2 or 4 bits a texel, the leftmost in the high bits. */
function unpackBits(bytes: Uint8Array, bits: number, width: number, out: Codes): Codes {
  const mask = (1 << bits) - 1;
  for (let x = 0, bit = 0; x < width; x++, bit += bits) {
    out[x] = (bytes[bit >> 3] >> (8 - bits - (bit & 7))) & mask;
  }
  return out;
}

/** Gray below 8 bits to 8: 255 divides evenly by 1, 3 and 15, so the scaling is exact. */
function scaleUp(codes: Codes, count: number, header: PngHeader, out: Codes): void {
  if (header.bitDepth >= 8) return;
  const factor = 255 / ((1 << header.bitDepth) - 1);
  for (let index = 0; index < count; index++) out[index] = codes[index] * factor;
}

/** Adds an alpha channel: 0 where every sample equals the transparent color, compared at the stored depth before anything
 *  is scaled. The color itself is kept under it. [PNG3, 11.3.1.1 "tRNS Transparency"] */
function expandTransparentColor(header: PngHeader, unpack: Unpack, color: readonly number[]): Expand {
  const samples = color.length;
  const factor = header.bitDepth < 8 ? 255 / ((1 << header.bitDepth) - 1) : 1;
  const opaque = header.bitDepth === 16 ? 65535 : 255;
  let stored: Codes | null = null;
  return (line, width, out) => {
    stored ??= out.slice();
    unpack(line.bytes, width, stored);
    for (let x = 0, from = 0, to = 0; x < width; x++, from += samples, to += samples + 1) {
      let same = true;
      for (let sample = 0; sample < samples; sample++) {
        const code = stored[from + sample];
        if (code !== color[sample]) same = false;
        out[to + sample] = code * factor;
      }
      out[to + samples] = same ? 0 : opaque;
    }
  };
}

function expandIndices(header: PngHeader, entries: number): Expand {
  const unpack = unpackerOf(header);
  return (line, width, out) => {
    unpack(line.bytes, width, out);
    if (entries === 1 << header.bitDepth) return;
    for (let x = 0; x < width; x++) {
      if (out[x] >= entries) refuseIndex(line, x, out[x], entries);
    }
  };
}

function refuseIndex({ pass, row }: Line, column: number, found: number, entries: number): never {
  refuse('png-palette-index', { x: pass.x + column * pass.dx, y: pass.y + row * pass.dy, found, entries });
}
