import type { ChannelCount, Codes, Depth, Extent, Palette } from '../raster/raster.ts';

/** A color chunk of a PNG, as found; whether it is obeyed is the treatment's choice. */
export interface ColorChunk {
  readonly name: 'cICP' | 'iCCP' | 'sRGB' | 'gAMA' | 'cHRM';
  /** Numbers in decimal with a space between. gAMA: value * 100000; cHRM: white, red, green and blue x and y * 100000;
   *  cICP: its four bytes; sRGB: the intent; iCCP: the profile's name. */
  readonly value: string;
}

/** What a file's header promises, known before anything is decoded. */
export interface SourceHeader {
  readonly format: 'png' | 'tga';
  readonly extent: Extent;
  /** Channels and depth of the rows that come out: gray below 8 bits is scaled to 8, a single transparent color becomes
   *  an alpha channel, an indexed file gives indices (then `channels` and `depth` are those of the expanded raster). */
  readonly channels: ChannelCount;
  readonly depth: Depth;
  readonly indexed: {
    readonly indexBits: 1 | 2 | 4 | 8;
    readonly palette: Palette;
    readonly alphaCount: number;
  } | null;
  readonly interlaced: boolean;
  readonly colorChunks: readonly ColorChunk[];
  /** Bytes after the end of the image that no reader needs. */
  readonly trailingBytes: number;
}

/** One row of codes: samples interleaved (indices where the source is indexed). `y` counts from the top. The view is valid
 *  until the next row is asked for. */
export interface SourceRow {
  readonly y: number;
  readonly codes: Codes;
}

/** An image file whose structure has been checked. Asking for rows decodes; asking again decodes again. */
export interface ImageSource {
  readonly header: SourceHeader;
  /** Bytes that decoding holds beside the file and one row (an interlaced or bottom-up file needs a whole raster). */
  readonly decodeBytes: number;
  /** Rows from the top, each once. Throws Refusal for damaged data. */
  rows(): AsyncIterable<SourceRow>;
}
