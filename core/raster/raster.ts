/** Width and height in texels, integers 1..16384. */
export interface Extent {
  readonly width: number;
  readonly height: number;
}

export type Depth = 8 | 16;

export type ChannelCount = 1 | 2 | 3 | 4;

/** Codes of one sample each, as stored: 0..255 or 0..65535. */
export type Codes = Uint8Array | Uint16Array;

interface Samples {
  readonly extent: Extent;
  /** 1 gray, 2 gray and alpha, 3 RGB, 4 RGBA; the last of an even count is alpha, or whatever the treatment says. */
  readonly channels: ChannelCount;
  readonly depth: Depth;
  /** Row by row from the top, channels interleaved, no padding: length width * height * channels. */
  readonly codes: Codes;
}

/** Color is not multiplied by alpha: what PNG and TGA hold. */
export interface StraightRaster extends Samples {
  readonly kind: 'straight';
}

/** Color is multiplied by alpha in linear light and then encoded: what a premultiplied KTX2 holds. */
export interface PremultipliedRaster extends Samples {
  readonly kind: 'premultiplied';
}

/** Palette entries as straight RGBA, 8 bits: 4 codes an entry, 1..256 entries. */
export type Palette = Uint8Array;

/** One index a texel into a palette whose order is kept. */
export interface IndexedRaster {
  readonly kind: 'indexed';
  readonly extent: Extent;
  /** Bits an index takes in the source file: 1, 2, 4 or 8. */
  readonly indexBits: 1 | 2 | 4 | 8;
  readonly indices: Uint8Array;
  readonly palette: Palette;
  /** How many palette entries carry an alpha of their own (the tRNS chunk's length). */
  readonly alphaCount: number;
}

export type Raster = StraightRaster | PremultipliedRaster | IndexedRaster;

/** The largest code of a depth: 255 or 65535. */
export function maxCode(depth: Depth): 255 | 65535 {
  return depth === 8 ? 255 : 65535;
}

/** Zeroed codes for `count` samples. */
export function newCodes(depth: Depth, count: number): Codes {
  return depth === 8 ? new Uint8Array(count) : new Uint16Array(count);
}

/** RGBA (or the palette's own channels) in place of indices. */
export function expandIndexed(raster: IndexedRaster): StraightRaster {
  const { indices, palette, extent } = raster;
  const channels = raster.alphaCount > 0 ? 4 : 3;
  const codes = new Uint8Array(indices.length * channels);
  for (let texel = 0; texel < indices.length; texel++) {
    for (let channel = 0; channel < channels; channel++) {
      codes[texel * channels + channel] = palette[indices[texel] * 4 + channel];
    }
  }
  return { kind: 'straight', extent, channels, depth: 8, codes };
}
