import type { ChannelCount, Depth, Extent } from '../raster/raster.ts';
import { formatOf } from './open.ts';
import { rowFormat } from './png/expand.ts';
import { readHeadStructure } from './png/structure.ts';
import { tgaForm } from './tga/form.ts';
import { readTgaHeader } from './tga/header.ts';

/** What the head of an image file tells. */
export interface ImagePeek {
  readonly format: 'png' | 'tga';
  readonly extent: Extent;
  readonly channels: ChannelCount;
  readonly depth: Depth;
  readonly indexed: boolean;
  /** Bits an index takes in the file; 0 where it is not indexed. */
  readonly indexBits: 0 | 1 | 2 | 4 | 8;
  readonly interlaced: boolean;
  /** Whether `channels` is certain. Where the head ends before the image data, transparency may still follow and add an
   *  alpha channel. */
  readonly settled: boolean;
}

/** Bytes of a file's head that are worth reading for a peek: a PNG rarely has more before its image data. */
export const PEEK_BYTES = 0x10000;

/** Looks at the head of an image file, for planning; the whole file may be given too. Throws the Refusals that opening the
 *  file would throw for its head. */
export function peekImage(head: Uint8Array, path: string): ImagePeek {
  return formatOf(head, path) === 'png' ? peekPng(head) : peekTga(head);
}

function peekPng(head: Uint8Array): ImagePeek {
  const structure = readHeadStructure(head);
  const { header, alphaCount, settled } = structure;
  const { rowChannels, depth } = rowFormat(structure);
  const indexed = header.colorType === 3;
  return {
    format: 'png',
    extent: header.extent,
    channels: indexed ? (alphaCount > 0 ? 4 : 3) : rowChannels,
    depth,
    indexed,
    indexBits: indexed ? (header.bitDepth as 1 | 2 | 4 | 8) : 0,
    interlaced: header.interlaced,
    // An alpha channel cannot be given a second time.
    settled: settled || header.colorType >= 4,
  };
}

function peekTga(head: Uint8Array): ImagePeek {
  const { indexed, extent, channels } = tgaForm(readTgaHeader(head));
  return {
    format: 'tga',
    extent,
    channels,
    depth: 8,
    indexed,
    indexBits: indexed ? 8 : 0,
    interlaced: false,
    settled: true,
  };
}
