import { refuse } from '../../problem.ts';
import type { Palette } from '../../raster/raster.ts';
import type { Crc32 } from '../crc.ts';
import type { ColorChunk } from '../source.ts';
import { CHUNK_FRAME_BYTES, type Chunk, checkSignature, PNG_SIGNATURE, readChunk, refuseCutChunk } from './chunks.ts';
import { readColorChunk } from './colorchunk.ts';
import { type PngHeader, readPngHeader } from './header.ts';
import { readPalette, readTransparentColor, withAlphas } from './palette.ts';

/** What the chunks of a PNG say, image data still compressed. */
export interface PngStructure {
  readonly header: PngHeader;
  /** Entries of PLTE with the alphas of tRNS; only a suggestion where the color type is not 3. */
  readonly palette: Palette | null;
  /** Length of the tRNS chunk of an indexed image, else 0. */
  readonly alphaCount: number;
  /** The one color that is transparent in a gray or RGB image, at the stored bit depth. */
  readonly transparentColor: readonly number[] | null;
  /** In the order of the file; only those that stand where a reader heeds them, before PLTE and IDAT. */
  readonly colorChunks: readonly ColorChunk[];
  /** Bodies of the IDAT chunks: one zlib stream in pieces. */
  readonly imageData: readonly Uint8Array[];
  readonly trailingBytes: number;
}

/** Walks every chunk of a PNG: signature, names, CRCs, order, lengths, presence. Throws Refusal.
 *  [PNG3, 5.6 "Chunk ordering"] */
export function readStructure(bytes: Uint8Array, crc32?: Crc32): PngStructure {
  checkSignature(bytes);
  const walk = newWalk();
  let offset = PNG_SIGNATURE.length;
  while (walk.last !== 'IEND') {
    const chunk = readChunk(bytes, offset, crc32) ?? refuseCutChunk(bytes, offset);
    takeChunk(walk, chunk);
    offset += CHUNK_FRAME_BYTES + chunk.body.length;
  }
  return finish(walk, bytes.length - offset);
}

/** The same for the head of a file: chunks that are not there in full are not asked for, image data is left out.
 *  `settled` is whether all that can change the rows has been seen. */
export function readHeadStructure(head: Uint8Array): PngStructure & { readonly settled: boolean } {
  checkSignature(head);
  const walk = newWalk();
  let offset = PNG_SIGNATURE.length;
  let chunk = readChunk(head, offset) ?? refuseCutChunk(head, offset);
  takeChunk(walk, chunk);
  while (true) {
    offset += CHUNK_FRAME_BYTES + chunk.body.length;
    if (startsImageData(head, offset)) return { ...finish(walk, 0), settled: true };
    const next = readChunk(head, offset);
    if (next === null) return { ...finish(walk, 0), settled: false };
    takeChunk(walk, next);
    chunk = next;
  }
}

interface Walk {
  header: PngHeader | null;
  palette: Palette | null;
  alphaCount: number;
  transparentColor: readonly number[] | null;
  readonly colorChunks: ColorChunk[];
  readonly imageData: Uint8Array[];
  /** Names met so far, and the one met last. */
  readonly seen: Set<string>;
  last: string;
}

function newWalk(): Walk {
  return {
    header: null,
    palette: null,
    alphaCount: 0,
    transparentColor: null,
    colorChunks: [],
    imageData: [],
    seen: new Set(),
    last: '',
  };
}

function finish(walk: Walk, trailingBytes: number): PngStructure {
  const { header, palette, alphaCount, transparentColor, colorChunks, imageData } = walk;
  return { header: header!, palette, alphaCount, transparentColor, colorChunks, imageData, trailingBytes };
}

function takeChunk(walk: Walk, chunk: Chunk): void {
  const { name, offset } = chunk;
  if (walk.header === null) {
    if (name !== 'IHDR') refuse('png-missing-chunk', { chunk: 'IHDR', offset, found: name });
    walk.header = readPngHeader(chunk);
  } else {
    takeLaterChunk(walk, walk.header, chunk);
  }
  walk.seen.add(name);
  walk.last = name;
}

function takeLaterChunk(walk: Walk, header: PngHeader, chunk: Chunk): void {
  const { name, offset, body } = chunk;
  switch (name) {
    case 'IHDR':
      checkOrder(walk, chunk, ['IHDR']);
      return;
    case 'PLTE':
      checkOrder(walk, chunk, ['PLTE', 'tRNS', 'IDAT']);
      walk.palette = readPalette(chunk, header);
      return;
    case 'tRNS':
      checkOrder(walk, chunk, ['tRNS', 'IDAT']);
      takeTransparency(walk, header, chunk);
      return;
    case 'IDAT':
      takeImageData(walk, header, chunk);
      return;
    case 'IEND':
      if (!walk.seen.has('IDAT')) refuse('png-missing-chunk', { chunk: 'IDAT', offset, found: name });
      if (body.length > 0) refuse('png-chunk-length', { chunk: name, offset, found: body.length, expected: 0 });
      return;
    default:
      takeOtherChunk(walk, chunk);
  }
}

function takeTransparency(walk: Walk, header: PngHeader, chunk: Chunk): void {
  if (header.colorType !== 3) {
    walk.transparentColor = readTransparentColor(chunk, header);
    return;
  }
  const palette = walk.palette ?? refuse('png-missing-chunk', { chunk: 'PLTE', offset: chunk.offset, found: 'tRNS' });
  walk.palette = withAlphas(palette, chunk);
  walk.alphaCount = chunk.body.length;
}

function takeImageData(walk: Walk, header: PngHeader, chunk: Chunk): void {
  const { name, offset, body } = chunk;
  if (walk.seen.has(name) && walk.last !== name) refuse('png-chunk-order', { chunk: name, offset, after: walk.last });
  if (header.colorType === 3 && walk.palette === null) {
    refuse('png-missing-chunk', { chunk: 'PLTE', offset, found: name });
  }
  walk.imageData.push(body);
}

function takeOtherChunk(walk: Walk, chunk: Chunk): void {
  const { name, offset } = chunk;
  if (isCritical(name)) refuse('png-unknown-chunk', { chunk: name, offset });
  const color = readColorChunk(chunk);
  if (color !== null && !walk.seen.has('PLTE') && !walk.seen.has('IDAT')) walk.colorChunks.push(color);
}

function checkOrder(walk: Walk, chunk: Chunk, mustFollow: readonly string[]): void {
  const after = mustFollow.find((name) => walk.seen.has(name));
  if (after !== undefined) refuse('png-chunk-order', { chunk: chunk.name, offset: chunk.offset, after });
}

/** An upper-case first letter: a reader that does not know the chunk cannot show the image. [PNG3, 5.4] */
function isCritical(name: string): boolean {
  return name[0] < 'a';
}

function startsImageData(head: Uint8Array, offset: number): boolean {
  return String.fromCharCode(...head.subarray(offset + 4, offset + 8)) === 'IDAT';
}
