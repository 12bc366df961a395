import { refuse } from '../../problem.ts';
import type { Palette } from '../../raster/raster.ts';
import { type Chunk, readUint16 } from './chunks.ts';
import type { PngHeader } from './header.ts';
import { STORED_SAMPLES } from './header.ts';

/** The PLTE chunk as opaque RGBA entries. Throws Refusal for a length that is not whole entries and for more entries
 *  than an index can name. [PNG3, 11.2.2 "PLTE Palette"] */
export function readPalette(chunk: Chunk, header: PngHeader): Palette {
  const { name, offset, body } = chunk;
  if (header.colorType === 0 || header.colorType === 4) {
    refuse('png-forbidden-chunk', { chunk: name, offset, colorType: header.colorType });
  }
  const count = Math.ceil(body.length / 3);
  if (body.length !== count * 3) {
    refuse('png-chunk-length', { chunk: name, offset, found: body.length, expected: count * 3 });
  }
  const allowed = header.colorType === 3 ? 1 << header.bitDepth : 256;
  if (count < 1 || count > allowed) refuse('png-palette-size', { found: count, allowed });
  const palette = new Uint8Array(count * 4).fill(255);
  for (let entry = 0; entry < count; entry++) {
    palette.set(body.subarray(entry * 3, entry * 3 + 3), entry * 4);
  }
  return palette;
}

/** The palette with the alphas of a tRNS chunk; entries beyond them stay opaque.
 *  [PNG3, 11.3.1.1 "tRNS Transparency"] */
export function withAlphas(palette: Palette, chunk: Chunk): Palette {
  const { name, offset, body } = chunk;
  const count = palette.length / 4;
  if (body.length > count) {
    refuse('png-chunk-length', { chunk: name, offset, found: body.length, expected: `0..${count}` });
  }
  const result = palette.slice();
  for (let entry = 0; entry < body.length; entry++) {
    result[entry * 4 + 3] = body[entry];
  }
  return result;
}

/** The samples of the single transparent color of a gray or RGB image. Bits above the bit depth are dropped, as the
 *  standard says. Throws Refusal where the image has an alpha channel already. */
export function readTransparentColor(chunk: Chunk, header: PngHeader): readonly number[] {
  const { name, offset, body } = chunk;
  const { colorType, bitDepth } = header;
  if (colorType !== 0 && colorType !== 2) refuse('png-forbidden-chunk', { chunk: name, offset, colorType });
  const count = STORED_SAMPLES[colorType];
  if (body.length !== count * 2) {
    refuse('png-chunk-length', { chunk: name, offset, found: body.length, expected: count * 2 });
  }
  const mask = (1 << bitDepth) - 1;
  return Array.from({ length: count }, (_, index) => readUint16(body, index * 2) & mask);
}
