import type { Hash } from '../port.ts';
import { type Codes, type Extent, expandIndexed, type Raster } from '../raster/raster.ts';

/** SHA-256 of width, height, channels and depth (u32, little-endian), then the codes row by row, 16-bit codes with the low
 *  byte first whatever the host's order. Lower-case hexadecimal. An indexed raster is hashed as the colors it stands for
 *  (RGBA where it carries alpha, else RGB), so an indexed file and its expanded twin agree, and a palette may be reordered. */
export function hashPixels(raster: Raster, newHash: () => Hash): string {
  const steps = hashSteps(raster, newHash);
  for (;;) {
    const { done, value } = steps.next();
    if (done === true) return value;
  }
}

/** The same in pieces of less than a millisecond, so that others can work between them, or it can be left. */
export function* hashSteps(raster: Raster, newHash: () => Hash): Generator<undefined, string> {
  const { width, height } = raster.extent;
  const form = raster.kind === 'indexed' ? expandedForm(raster.alphaCount) : raster;
  const hash = new PixelHash(raster.extent, form.channels, form.depth, newHash);
  // In bands of rows, so that neither expansion nor byte order needs a second image.
  const bandRows = Math.max(1, Math.floor(BAND_TEXELS / width));
  for (let top = 0; top < height; top += bandRows) {
    hash.update(band(raster, top, Math.min(bandRows, height - top)));
    yield;
  }
  return hash.hex();
}

/** The same hash for rows as they come in, top first, any number of codes at a time. */
export class PixelHash {
  readonly #hash: Hash;

  constructor(extent: Extent, channels: number, depth: number, newHash: () => Hash) {
    this.#hash = newHash();
    const head = new DataView(new ArrayBuffer(16));
    for (const [at, value] of [extent.width, extent.height, channels, depth].entries()) {
      head.setUint32(4 * at, value, true);
    }
    this.#hash.update(new Uint8Array(head.buffer));
  }

  update(codes: Codes): void {
    this.#hash.update(littleEndian(codes));
  }

  hex(): string {
    return this.#hash.hex();
  }
}

const BAND_TEXELS = 1 << 14;

function expandedForm(alphaCount: number): { channels: number; depth: number } {
  return { channels: alphaCount > 0 ? 4 : 3, depth: 8 };
}

function band(raster: Raster, top: number, rows: number): Codes {
  const { width } = raster.extent;
  if (raster.kind === 'indexed') {
    const indices = raster.indices.subarray(top * width, (top + rows) * width);
    return expandIndexed({ ...raster, extent: { width, height: rows }, indices }).codes;
  }
  const rowCodes = width * raster.channels;
  return raster.codes.subarray(top * rowCodes, (top + rows) * rowCodes);
}

function littleEndian(codes: Codes): Uint8Array {
  if (codes instanceof Uint8Array) return codes;
  const bytes = new Uint8Array(2 * codes.length);
  for (let at = 0; at < codes.length; at++) {
    bytes[2 * at] = codes[at];
    bytes[2 * at + 1] = codes[at] >>> 8;
  }
  return bytes;
}
