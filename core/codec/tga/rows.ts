import { refuse } from '../../problem.ts';
import type { ChannelCount, Palette } from '../../raster/raster.ts';
import type { SourceRow } from '../source.ts';
import { byteCount, type ColorMap, readUint16, type TgaHeader } from './header.ts';
import { isRun, packetLength, type RowStarts } from './rowstarts.ts';
import { byteReader, colorReader } from './texel.ts';

/** A TGA whose structure has been checked. */
export interface CheckedTga {
  readonly bytes: Uint8Array;
  readonly header: TgaHeader;
  readonly palette: Palette | null;
  readonly starts: RowStarts;
  /** 1 for indices and gray, else what the colors expand to. */
  readonly rowChannels: ChannelCount;
}

/** Rows from the top and left. Throws Refusal for an index that the color map does not have. */
export async function* readRows(tga: CheckedTga): AsyncGenerator<SourceRow> {
  const { bytes, header, starts, rowChannels } = tga;
  const { width, height } = header.extent;
  const read = readerOf(tga);
  const codes = new Uint8Array(width * rowChannels);
  const unpacked = new Uint8Array(header.runLength ? width * byteCount(header.texelBits) : 0);
  for (let y = 0; y < height; y++) {
    const row = header.fromBottom ? height - 1 - y : y;
    if (header.runLength) {
      unpackRow(tga, row, unpacked);
      read(unpacked, 0, y, codes);
    } else {
      read(bytes, starts.offsets[row], y, codes);
    }
    if (header.fromRight) mirrorRow(codes, rowChannels);
    yield { y, codes };
  }
}

/** Stored texels to the codes of a row, in stored order. */
type ReadRow = (bytes: Uint8Array, offset: number, y: number, out: Uint8Array) => void;

function readerOf({ header, palette, rowChannels }: CheckedTga): ReadRow {
  const { width } = header.extent;
  if (palette !== null && header.map !== null) return mappedReader(header, header.map, palette, rowChannels);
  const read = header.kind === 'gray' ? byteReader(rowChannels) : colorReader(header.texelBits, rowChannels);
  return (bytes, offset, _y, out) => read(bytes, offset, width, out);
}

/** Indices counted from the map's first entry, or the colors in their place. */
function mappedReader(header: TgaHeader, map: ColorMap, palette: Palette, rowChannels: ChannelCount): ReadRow {
  const indexBytes = byteCount(header.texelBits);
  const { width } = header.extent;
  return (bytes, offset, y, out) => {
    for (let column = 0; column < width; column++) {
      const at = offset + column * indexBytes;
      const stored = indexBytes === 1 ? bytes[at] : readUint16(bytes, at);
      const entry = stored - map.first;
      if (entry < 0 || entry >= map.length) {
        const x = header.fromRight ? width - 1 - column : column;
        refuse('tga-palette-index', { x, y, found: stored, first: map.first, last: map.first + map.length - 1 });
      }
      if (rowChannels === 1) out[column] = entry;
      else out.set(palette.subarray(entry * 4, entry * 4 + rowChannels), column * rowChannels);
    }
  };
}

/** Texels of one stored row out of their packets. */
function unpackRow({ bytes, header, starts }: CheckedTga, row: number, out: Uint8Array): void {
  const texelBytes = byteCount(header.texelBits);
  let offset = starts.offsets[row];
  let skip = starts.skips[row];
  for (let to = 0; to < out.length; ) {
    const head = bytes[offset];
    const length = packetLength(head);
    const count = Math.min(length - skip, (out.length - to) / texelBytes) * texelBytes;
    if (isRun(head)) {
      const texel = bytes.subarray(offset + 1, offset + 1 + texelBytes);
      for (let at = 0; at < count; at++) out[to + at] = texel[at % texelBytes];
      offset += 1 + texelBytes;
    } else {
      const from = offset + 1 + skip * texelBytes;
      out.set(bytes.subarray(from, from + count), to);
      offset += 1 + length * texelBytes;
    }
    to += count;
    skip = 0;
  }
}

function mirrorRow(codes: Uint8Array, channels: number): void {
  for (let left = 0, right = codes.length - channels; left < right; left += channels, right -= channels) {
    for (let channel = 0; channel < channels; channel++) {
      const code = codes[left + channel];
      codes[left + channel] = codes[right + channel];
      codes[right + channel] = code;
    }
  }
}
