import { refuse } from '../../problem.ts';
import { byteCount, type TgaHeader } from './header.ts';

/** Where each stored row starts, so that rows can be read in any order. */
export interface RowStarts {
  /** Offset of the row's first byte, or of the run-length packet that its first texel is in. */
  readonly offsets: Float64Array;
  /** Texels of that packet that belong to the row before. */
  readonly skips: Uint8Array;
  /** Where the image data ends. */
  readonly end: number;
}

/** Finds the rows of the image data; throws Refusal where the file ends before they do. */
export function findRows(bytes: Uint8Array, header: TgaHeader): RowStarts {
  return header.runLength ? findPackedRows(bytes, header) : findPlainRows(bytes, header);
}

/** Texels of the packet that starts with `head`: a run where the top bit is set, else texels one by one.
 *  [TGA2, "Run-length encoded images"] */
export function packetLength(head: number): number {
  return (head & 0x7f) + 1;
}

export function isRun(head: number): boolean {
  return (head & 0x80) !== 0;
}

function findPlainRows(bytes: Uint8Array, { extent, texelBits, dataOffset }: TgaHeader): RowStarts {
  const rowBytes = extent.width * byteCount(texelBits);
  const end = dataOffset + rowBytes * extent.height;
  if (end > bytes.length) refuseCut(bytes, end);
  const offsets = new Float64Array(extent.height).map((_, row) => dataOffset + row * rowBytes);
  return { offsets, skips: new Uint8Array(extent.height), end };
}

/** Packets may reach from one row into the next. */
function findPackedRows(bytes: Uint8Array, { extent, texelBits, dataOffset }: TgaHeader): RowStarts {
  const { width, height } = extent;
  const texelBytes = byteCount(texelBits);
  const offsets = new Float64Array(height);
  const skips = new Uint8Array(height);
  const texelCount = width * height;
  let offset = dataOffset;
  let texel = 0;
  for (let row = 0; texel < texelCount; ) {
    if (offset >= bytes.length) refuseCut(bytes, offset + 1 + texelBytes);
    const length = packetLength(bytes[offset]);
    for (; row < height && row * width < texel + length; row++) {
      offsets[row] = offset;
      skips[row] = row * width - texel;
    }
    const next = offset + 1 + (isRun(bytes[offset]) ? texelBytes : length * texelBytes);
    if (next > bytes.length) refuseCut(bytes, next);
    texel += length;
    if (texel > texelCount) refuse('tga-packet', { offset, found: texel - texelCount });
    offset = next;
  }
  return { offsets, skips, end: offset };
}

function refuseCut(bytes: Uint8Array, expected: number): never {
  refuse('tga-truncated', { part: 'image data', found: bytes.length, expected });
}
