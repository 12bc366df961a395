import { type VKFormat, write } from 'ktx-parse';
import { levelCount, levelExtent } from '../../chain/levels.ts';
import { ALGORITHM } from '../../manifest/manifest.ts';
import type { Deflate } from '../../port.ts';
import { compressions } from '../compression.ts';
import { describeFormat } from './descriptor.ts';
import type { Ktx2Layout } from './format.ts';
import { type Ktx2Level, storedTexels, texelBytes } from './texels.ts';

export interface Ktx2Options {
  /** `zlib` deflates each level by itself. */
  readonly supercompress: 'none' | 'zlib';
}

/** A file that is known in length before its pieces are made. A piece is valid until the next is asked for. */
export interface LaidFile {
  readonly byteCount: number;
  readonly pieces: Iterable<Uint8Array>;
}

/** The bytes of `layKtx2`, in one. */
export async function encodeKtx2(
  levels: readonly Ktx2Level[],
  layout: Ktx2Layout,
  options: Ktx2Options,
  deflate: Deflate,
): Promise<Uint8Array> {
  const { byteCount, pieces } = await layKtx2(levels, layout, options, deflate);
  const file = new Uint8Array(byteCount);
  let at = 0;
  for (const piece of pieces) {
    file.set(piece, at);
    at += piece.length;
  }
  return file;
}

/** A KTX2 file of a 2D texture. `levels` are in order from the largest and alike in kind, channels and depth; each is half
 *  the one before, rounded down, at least 1. Codes are stored as they are, in the lanes of the layout; see its `holds`.
 *  Without supercompression equal rasters give equal bytes everywhere; with it, for an equal deflate.
 *  Throws RangeError for levels that do not fit each other or the layout. [KTX2] */
export async function layKtx2(
  levels: readonly Ktx2Level[],
  layout: Ktx2Layout,
  options: Ktx2Options,
  deflate: Deflate,
): Promise<LaidFile> {
  expectChain(levels, layout);
  const head = writeHead(levels, layout);
  if (options.supercompress === 'none') {
    return layFile(
      head,
      SCHEMES.none,
      levels.map((level) => plainData(level, layout)),
      alignment(layout),
    );
  }
  const data: LevelData[] = [];
  for (const level of levels) data.push(await deflatedData(level, layout, deflate));
  return layFile(head, SCHEMES.zlib, data, 1);
}

/** [KTX2, "supercompressionScheme"] */
const SCHEMES = { none: 0, zlib: 3 } as const;

/** Without supercompression a level starts at a multiple of the least common multiple of texel bytes and 4. Texels have
 *  1, 2, 3, 4 or 8 bytes. [KTX2, "mipPadding"] */
function alignment({ format }: Ktx2Layout): number {
  const bytes = texelBytes(format);
  return bytes === 3 ? 12 : Math.max(4, bytes);
}

function expectChain(levels: readonly Ktx2Level[], { format, lanes }: Ktx2Layout): void {
  if (levels.length === 0) throw new RangeError('Expected at least 1 level but received 0');
  const { kind, channels, extent } = levels[0];
  if (levels.length > levelCount(extent)) {
    throw new RangeError(`Expected 1..${levelCount(extent)} levels but received ${levels.length}`);
  }
  for (const [index, level] of levels.entries()) {
    const { width, height } = levelExtent(extent, index);
    const expected = [kind, width, height, channels, format.depth, width * height * channels].join(' ');
    const received = [
      level.kind,
      level.extent.width,
      level.extent.height,
      level.channels,
      level.depth,
      level.codes.length,
    ];
    if (received.join(' ') !== expected) {
      throw new RangeError(
        `Expected ${expected} (kind, width, height, channels, depth, codes) for level ${index} but received ${received.join(' ')}`,
      );
    }
  }
  if (lanes.some((lane) => lane !== 'max' && lane >= channels)) {
    throw new RangeError(`Expected lanes below ${channels} but received ${lanes.join(', ')}`);
  }
  if (kind === 'premultiplied' && (channels % 2 === 1 || lanes.at(-1) !== channels - 1)) {
    throw new RangeError(
      'Expected a layout that stores alpha for a premultiplied raster but received one that does not',
    );
  }
}

// Where ktx-parse leaves off. It writes identifier, header, descriptor and key/values; the level data behind them is laid
// down here, because its writer copies all of it twice (measured on a 4096 x 4096 RGBA8 chain: 171 MB beside the texels
// and 1.1 s, here the file's 86 MB and 0.4 s). It is given empty levels under the scheme that asks for no
// alignment; the scheme and the places of the levels are put in afterwards.

/** Byte offset of `supercompressionScheme`. [KTX2, "File structure"] */
const SCHEME_OFFSET = 44;

/** Byte offset of the level index, and bytes of one entry: offset, length, uncompressed length, as u64. */
const INDEX_OFFSET = 80;
const INDEX_ENTRY = 24;

function writeHead(levels: readonly Ktx2Level[], { format, swizzle }: Ktx2Layout): Uint8Array {
  const { extent, kind } = levels[0];
  return write(
    {
      vkFormat: format.vkFormat as VKFormat,
      typeSize: format.depth / 8,
      pixelWidth: extent.width,
      pixelHeight: extent.height,
      pixelDepth: 0,
      layerCount: 0,
      faceCount: 1,
      levelCount: levels.length,
      supercompressionScheme: SCHEMES.zlib,
      levels: levels.map((level) => ({
        levelData: new Uint8Array(0),
        uncompressedByteLength: level.extent.width * level.extent.height * texelBytes(format),
      })),
      dataFormatDescriptor: [describeFormat(format, kind)],
      keyValue: {
        // The first texel is the top left one, as in the rasters: x runs right, y down.
        KTXorientation: 'rd',
        ...(swizzle === null ? {} : { KTXswizzle: swizzle }),
        KTXwriter: `Sizeproof algorithm ${ALGORITHM}`,
      },
      globalData: null,
    },
    { keepWriter: true },
  );
}

interface LevelData {
  readonly byteCount: number;
  readonly pieces: Iterable<Uint8Array>;
}

function plainData(level: Ktx2Level, layout: Ktx2Layout): LevelData {
  const byteCount = level.extent.width * level.extent.height * texelBytes(layout.format);
  return { byteCount, pieces: storedTexels(level, layout) };
}

/** One zlib stream a level. [KTX2, "ZLIB"] */
async function deflatedData(level: Ktx2Level, layout: Ktx2Layout, deflate: Deflate): Promise<LevelData> {
  const pieces: Uint8Array[] = [];
  for await (const piece of deflate(storedTexels(level, layout), compressions.repeating)) pieces.push(piece);
  return { byteCount: pieces.reduce((sum, piece) => sum + piece.length, 0), pieces };
}

/** Head, then the levels from the smallest, as the format asks. Only the head and the paddings are made here. */
function layFile(head: Uint8Array, scheme: number, levels: readonly LevelData[], align: number): LaidFile {
  const offsets = levels.map(() => 0);
  let end = head.length;
  for (let index = levels.length - 1; index >= 0; index--) {
    offsets[index] = Math.ceil(end / align) * align;
    end = offsets[index] + levels[index].byteCount;
  }
  const view = new DataView(head.buffer, head.byteOffset, head.byteLength);
  view.setUint32(SCHEME_OFFSET, scheme, true);
  for (const [index, { byteCount }] of levels.entries()) {
    view.setBigUint64(INDEX_OFFSET + INDEX_ENTRY * index, BigInt(offsets[index]), true);
    view.setBigUint64(INDEX_OFFSET + INDEX_ENTRY * index + 8, BigInt(byteCount), true);
  }
  return { byteCount: end, pieces: piecesOf(head, levels, offsets) };
}

function* piecesOf(head: Uint8Array, levels: readonly LevelData[], offsets: readonly number[]): Iterable<Uint8Array> {
  yield head;
  let at = head.length;
  for (let index = levels.length - 1; index >= 0; index--) {
    if (offsets[index] > at) yield new Uint8Array(offsets[index] - at);
    yield* levels[index].pieces;
    at = offsets[index] + levels[index].byteCount;
  }
}
