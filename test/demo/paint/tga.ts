import type { StraightRaster } from '../../../core/raster/raster.ts';

/** Longest run or row of single texels that one packet holds. */
const PACKET = 128;

/** A run-length coded Truevision TGA file, rows from the bottom up as its first writers had them: type 11 for one channel,
 *  type 10 with blue first for four. */
export function encodeTga({ extent, channels, depth, codes }: StraightRaster): Uint8Array {
  if (depth !== 8 || (channels !== 1 && channels !== 4)) {
    throw new RangeError(`Expected 1 or 4 channels of 8 bits for a TGA but received ${channels} of ${depth}`);
  }
  const { width, height } = extent;
  const bytes = [0, 0, channels === 1 ? 11 : 10, ...new Array(9).fill(0)];
  bytes.push(width & 255, width >> 8, height & 255, height >> 8, channels * 8, channels === 4 ? 8 : 0);
  const order = channels === 1 ? [0] : [2, 1, 0, 3];
  for (let y = height - 1; y >= 0; y--) {
    const texels = Array.from({ length: width }, (_, x) =>
      order.map((channel) => codes[(y * width + x) * channels + channel]),
    );
    bytes.push(...packed(texels));
  }
  return Uint8Array.from(bytes);
}

/** One row in packets, none of which goes on into the next row. */
function packed(texels: readonly (readonly number[])[]): number[] {
  const bytes: number[] = [];
  let at = 0;
  while (at < texels.length) {
    const run = runLength(texels, at);
    if (run > 1) {
      bytes.push(0x80 | (run - 1), ...texels[at]);
      at += run;
      continue;
    }
    let end = at + 1;
    while (end < texels.length && end - at < PACKET && runLength(texels, end) === 1) end++;
    bytes.push(end - at - 1, ...texels.slice(at, end).flat());
    at = end;
  }
  return bytes;
}

/** How many equal texels stand at a place, 1..128. */
function runLength(texels: readonly (readonly number[])[], from: number): number {
  let end = from + 1;
  while (end < texels.length && end - from < PACKET && isEqual(texels[end], texels[from])) end++;
  return end - from;
}

function isEqual(a: readonly number[], b: readonly number[]): boolean {
  return a.every((code, index) => code === b[index]);
}
