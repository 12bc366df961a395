import type { Inflate, PngTools } from '../../port.ts';
import { refuse } from '../../problem.ts';
import { newCodes } from '../../raster/raster.ts';
import type { ImageSource, SourceHeader, SourceRow } from '../source.ts';
import { expansionOf, isExpanded, rowFormat } from './expand.ts';
import { plainFilters } from './filters.ts';
import { type Layout, layoutOf, rowByteCount } from './layout.ts';
import { type Line, readLines } from './lines.ts';
import { type PngStructure, readStructure } from './structure.ts';

/** A PNG whose chunks and header have been checked; its rows inflate as they are asked for. `bytes` is viewed, not copied,
 *  and must not change. Throws Refusal, without a path.
 *  [PNG3: Portable Network Graphics (PNG) Specification, Third Edition, W3C Recommendation, 24 June 2025] */
export function openPng(
  bytes: Uint8Array,
  inflate: Inflate,
  { filters = plainFilters, crc32 }: PngTools = {},
): ImageSource {
  const structure = readStructure(bytes, crc32);
  const layout = layoutOf(structure.header);
  checkPromise(structure, layout);
  const interlaced = structure.header.interlaced;
  return {
    header: pngSourceHeader(structure),
    decodeBytes: interlaced ? rasterBytes(structure) : lineBytes(layout),
    rows() {
      const lines = readLines(inflate(structure.imageData, layout.byteCount), layout, filters);
      return interlaced ? interlacedRows(structure, lines) : streamedRows(structure, lines);
    },
  };
}

export function pngSourceHeader(structure: PngStructure): SourceHeader {
  const { header, palette, alphaCount, colorChunks, trailingBytes } = structure;
  const { rowChannels, depth } = rowFormat(structure);
  const indexed =
    header.colorType === 3 ? { indexBits: header.bitDepth as 1 | 2 | 4 | 8, palette: palette!, alphaCount } : null;
  return {
    format: 'png',
    extent: header.extent,
    channels: indexed === null ? rowChannels : alphaCount > 0 ? 4 : 3,
    depth,
    indexed,
    interlaced: header.interlaced,
    colorChunks,
    trailingBytes,
  };
}

/** Bytes that one byte of a deflate stream can become at most: a match of 258 bytes costs no less than two bits.
 *  [RFC1951, 3.2.5 "Compressed blocks"] */
const DEFLATE_RATIO = 1032;

/** Refuses a header that the compressed data cannot fill, before anything of that size is held. */
function checkPromise(structure: PngStructure, layout: Layout): void {
  const found = structure.imageData.reduce((sum, piece) => sum + piece.length, 0);
  if (found * DEFLATE_RATIO < layout.byteCount) refuse('png-promise', { expected: layout.byteCount, found });
}

async function* streamedRows(structure: PngStructure, lines: AsyncIterable<Line>): AsyncGenerator<SourceRow> {
  const { width } = structure.header.extent;
  const { rowChannels, depth } = rowFormat(structure);
  const expand = expansionOf(structure);
  if (isExpanded(structure)) {
    for await (const line of lines) yield { y: line.row, codes: line.bytes };
    return;
  }
  const codes = newCodes(depth, width * rowChannels);
  for await (const line of lines) {
    expand(line, width, codes);
    yield { y: line.row, codes };
  }
}

/** The last pass completes the image, so all of it is held before the first row is given. */
async function* interlacedRows(structure: PngStructure, lines: AsyncIterable<Line>): AsyncGenerator<SourceRow> {
  const { width, height } = structure.header.extent;
  const { rowChannels, depth } = rowFormat(structure);
  const expand = expansionOf(structure);
  const rowLength = width * rowChannels;
  const raster = newCodes(depth, rowLength * height);
  const codes = newCodes(depth, rowLength);
  for await (const line of lines) {
    const { pass, row } = line;
    expand(line, pass.extent.width, codes);
    let to = (pass.y + row * pass.dy) * rowLength + pass.x * rowChannels;
    for (let from = 0; from < pass.extent.width * rowChannels; from += rowChannels, to += pass.dx * rowChannels) {
      for (let channel = 0; channel < rowChannels; channel++) raster[to + channel] = codes[from + channel];
    }
  }
  for (let y = 0; y < height; y++) yield { y, codes: raster.subarray(y * rowLength, (y + 1) * rowLength) };
}

function rasterBytes(structure: PngStructure): number {
  const { width, height } = structure.header.extent;
  const { rowChannels, depth } = rowFormat(structure);
  return (width * height * rowChannels * depth) / 8;
}

/** The line being filled and the one above it. */
function lineBytes({ passes, texelBits, filterStep }: Layout): number {
  return 2 * (filterStep + rowByteCount(passes[0].extent.width, texelBits));
}
