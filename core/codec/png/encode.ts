import type { Deflate, PngTools } from '../../port.ts';
import type { ChannelCount, Codes, IndexedRaster, StraightRaster } from '../../raster/raster.ts';
import { type Compression, chooseCompression, compressions } from '../compression.ts';
import { type Crc32, crc32 as plainCrc32 } from '../crc.ts';
import { deflateRuns } from '../deflate/stream.ts';
import { plainFilters, type RowFilters } from './filters.ts';

/** A PNG file of the raster: gray, gray and alpha, RGB or RGBA of 8 or 16 bits, or indexed with the palette's order, the
 *  tRNS length and the bits of an index kept. Not interlaced. Equal rasters give equal bytes for an equal deflate.
 *
 *  No color chunk is written. Engines read the codes as the material says and ignore such chunks (glTF 2.0, "Images"),
 *  and an untagged PNG is shown as sRGB; a tag on a normal or a roughness map would be false.
 *
 *  Throws RangeError when codes do not fit the extent or an index leaves the palette. [PNG3] */
export async function encodePng(
  raster: StraightRaster | IndexedRaster,
  deflate: Deflate,
  { filters = plainFilters, tokens, crc32 = plainCrc32 }: PngTools = {},
): Promise<Uint8Array> {
  expectFit(raster);
  const compression = chooseCompression(raster);
  const stream: Uint8Array[] = [];
  const rows = filteredRows(raster, compression, filters);
  const pieces = compression === 'painted' ? deflateRuns(rows, tokens) : deflate(rows, compressions[compression]);
  for await (const piece of pieces) stream.push(piece);
  return layChunks(headChunks(raster), stream, crc32);
}

/** IHDR's color type. [PNG3, "Image header"] */
const COLOR_TYPES: Readonly<Record<ChannelCount, number>> = { 1: 0, 2: 4, 3: 2, 4: 6 };

const INDEXED_TYPE = 3;

function expectFit(raster: StraightRaster | IndexedRaster): void {
  const { width, height } = raster.extent;
  const count = raster.kind === 'indexed' ? raster.indices.length : raster.codes.length;
  const expected = width * height * (raster.kind === 'indexed' ? 1 : raster.channels);
  if (expected === 0 || count !== expected) {
    throw new RangeError(`Expected ${expected} codes for ${width} x ${height} texels but received ${count}`);
  }
  if (raster.kind === 'straight') return;
  const entries = raster.palette.length / 4;
  const most = 2 ** raster.indexBits;
  if (!(Number.isInteger(entries) && entries >= 1 && entries <= most)) {
    throw new RangeError(`Expected 1..${most} entries for palette but received ${entries}`);
  }
  if (!(raster.alphaCount >= 0 && raster.alphaCount <= entries)) {
    throw new RangeError(`Expected integer 0..${entries} for alphaCount but received ${raster.alphaCount}`);
  }
}

/** Rows behind their filter's number. One piece a row, valid until the next is asked for, so that no second image is held. */
function filteredRows(
  raster: StraightRaster | IndexedRaster,
  compression: Compression,
  filters: RowFilters,
): Iterable<Uint8Array> {
  if (raster.kind === 'indexed') return packedRows(raster);
  return compression === 'labels' ? plainRows(raster) : adaptiveRows(raster, filters);
}

function* adaptiveRows(raster: StraightRaster, filters: RowFilters): Iterable<Uint8Array> {
  const { extent, channels, codes, depth } = raster;
  const texelBytes = channels * (depth / 8);
  const writer = filters.openWriter(texelBytes, extent.width * texelBytes);
  const rowCodes = extent.width * channels;
  try {
    for (let y = 0; y < extent.height; y++) {
      const row = codes.subarray(y * rowCodes, (y + 1) * rowCodes);
      writer.row.set(depth === 8 ? row : bytesOf(row));
      if (depth === 16 && IS_LITTLE_ENDIAN) writer.swap();
      yield writer.write();
    }
  } finally {
    writer.close();
  }
}

function bytesOf(codes: Codes): Uint8Array {
  return new Uint8Array(codes.buffer, codes.byteOffset, codes.byteLength);
}

const IS_LITTLE_ENDIAN = new Uint8Array(Uint16Array.of(1).buffer)[0] === 1;

/** Filter 0: differences of colors that are names would only spoil the matches, and few colors have 8 bits.
 *  [PNG3, "Filter selection"] */
function* plainRows({ extent, channels, codes }: StraightRaster): Iterable<Uint8Array> {
  const rowBytes = extent.width * channels;
  const out = new Uint8Array(1 + rowBytes);
  for (let y = 0; y < extent.height; y++) {
    out.set(codes.subarray(y * rowBytes, (y + 1) * rowBytes), 1);
    yield out;
  }
}

/** Indices packed with the leftmost in the high bits, filter 0. */
function* packedRows({ extent, indexBits, indices, palette }: IndexedRaster): Iterable<Uint8Array> {
  const entries = palette.length / 4;
  const perByte = 8 / indexBits;
  const out = new Uint8Array(1 + Math.ceil(extent.width / perByte));
  for (let y = 0; y < extent.height; y++) {
    out.fill(0);
    for (let x = 0; x < extent.width; x++) {
      const index = indices[y * extent.width + x];
      if (index >= entries)
        throw new RangeError(`Expected index 0..${entries - 1} at ${x}, ${y} but received ${index}`);
      out[1 + Math.floor(x / perByte)] |= index << (8 - indexBits * ((x % perByte) + 1));
    }
    yield out;
  }
}

interface Chunk {
  readonly name: string;
  readonly data: Uint8Array;
}

/** What stands before the image data. */
function headChunks(raster: StraightRaster | IndexedRaster): readonly Chunk[] {
  const header = new Uint8Array(13);
  const view = new DataView(header.buffer);
  view.setUint32(0, raster.extent.width);
  view.setUint32(4, raster.extent.height);
  header[8] = raster.kind === 'indexed' ? raster.indexBits : raster.depth;
  header[9] = raster.kind === 'indexed' ? INDEXED_TYPE : COLOR_TYPES[raster.channels];
  const chunks: Chunk[] = [{ name: 'IHDR', data: header }];
  if (raster.kind === 'indexed') {
    const { palette, alphaCount } = raster;
    chunks.push({ name: 'PLTE', data: palette.filter((_, at) => at % 4 < 3) });
    if (alphaCount > 0) {
      chunks.push({ name: 'tRNS', data: palette.filter((_, at) => at % 4 === 3).subarray(0, alphaCount) });
    }
  }
  return chunks;
}

const SIGNATURE = [0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a];

/** Length, name and CRC of a chunk. */
const CHUNK_FRAME = 12;

/** Bytes of an IDAT chunk but the last. A fixed length keeps the file free of how the deflate port cuts its pieces, and far
 *  below the 2^31 - 1 bytes that a chunk may hold. */
const IDAT_BYTES = 1 << 20;

/** The whole file, written once: signature, head, the stream cut into IDAT chunks, IEND. */
function layChunks(head: readonly Chunk[], stream: readonly Uint8Array[], crc32: Crc32): Uint8Array {
  const streamBytes = stream.reduce((sum, piece) => sum + piece.length, 0);
  const idats = Math.ceil(streamBytes / IDAT_BYTES);
  const headBytes = head.reduce((sum, chunk) => sum + CHUNK_FRAME + chunk.data.length, 0);
  const file = new Uint8Array(SIGNATURE.length + headBytes + streamBytes + CHUNK_FRAME * (idats + 1));
  file.set(SIGNATURE);
  let at = SIGNATURE.length;
  for (const { name, data } of head) {
    file.set(data, at + 8);
    at = closeChunk(file, at, name, data.length, crc32);
  }
  const copy = newGatherer(stream);
  for (let left = streamBytes; left > 0; left -= IDAT_BYTES) {
    const length = Math.min(left, IDAT_BYTES);
    copy(file.subarray(at + 8, at + 8 + length));
    at = closeChunk(file, at, 'IDAT', length, crc32);
  }
  closeChunk(file, at, 'IEND', 0, crc32);
  return file;
}

/** Puts length, name and CRC round data that stands in its place already. Gives where the next chunk starts. */
function closeChunk(file: Uint8Array, at: number, name: string, length: number, crc32: Crc32): number {
  const view = new DataView(file.buffer, file.byteOffset, file.byteLength);
  view.setUint32(at, length);
  for (let letter = 0; letter < 4; letter++) file[at + 4 + letter] = name.charCodeAt(letter);
  view.setUint32(at + 8 + length, crc32(file.subarray(at + 4, at + 8 + length)));
  return at + CHUNK_FRAME + length;
}

/** Fills one target after the other from the pieces, as if they were joined. */
function newGatherer(pieces: readonly Uint8Array[]): (target: Uint8Array) => void {
  let piece = 0;
  let offset = 0;
  return (target) => {
    for (let at = 0; at < target.length; ) {
      const part = pieces[piece].subarray(offset, offset + target.length - at);
      target.set(part, at);
      at += part.length;
      offset += part.length;
      if (offset === pieces[piece].length) {
        piece++;
        offset = 0;
      }
    }
  };
}
