import { decodeTable, encodeSrgb } from '../color/transfer.ts';
import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import { type Extent, maxCode, newCodes } from '../raster/raster.ts';
import type { Picture } from './want.ts';

type WrapPair = { readonly x: Wrap; readonly y: Wrap };

/** Values of one sample, channels in order: linear light where codes are sRGB-coded, else 0..1 of the largest code. */
export type Sample = Float64Array;

/** A sampler of stored texels as a GPU's: the transfer is decoded, then each channel interpolated by itself between the four
 *  texels round (u, v), which are shares of the extent. Straight color stays straight.  [Vulkan, Texel Filtering] */
export function bilinearSampler(picture: Picture, wrap: WrapPair): (u: number, v: number, out: Sample) => void {
  const { codes, channels, extent } = picture;
  const { width, height } = extent;
  const tables = tablesOf(picture);
  return (u, v, out) => {
    const [x, y] = [u * width - 0.5, v * height - 0.5];
    const [left, top] = [Math.floor(x), Math.floor(y)];
    const [right, bottom] = [x - left, y - top];
    const columns = [wrapIndex(left, width, wrap.x), wrapIndex(left + 1, width, wrap.x)];
    const rows = [wrapIndex(top, height, wrap.y), wrapIndex(top + 1, height, wrap.y)];
    for (let channel = 0; channel < channels; channel++) {
      const at = (column: number, row: number): number =>
        column < 0 || row < 0 ? 0 : tables[channel][codes[(row * width + column) * channels + channel]];
      const upper = at(columns[0], rows[0]) * (1 - right) + at(columns[1], rows[0]) * right;
      const lower = at(columns[0], rows[1]) * (1 - right) + at(columns[1], rows[1]) * right;
      out[channel] = upper * (1 - bottom) + lower * bottom;
    }
  };
}

/** What a trilinear sampler shows, one sample a screen pixel: (1 - share) of the finer level and `share` of the coarser, coded
 *  again as the levels are. `share` is 0..1.  [Vulkan, Level of Detail Operation] */
export function seenPicture(finer: Picture, coarser: Picture, share: number, extent: Extent, wrap: WrapPair): Picture {
  const { channels, depth } = finer;
  const codes = newCodes(depth, extent.width * extent.height * channels);
  const coded = Array.from({ length: channels }, (_, channel) => isCoded(finer, channel));
  const max = maxCode(depth);
  const [near, far] = [bilinearSampler(finer, wrap), bilinearSampler(coarser, wrap)];
  const [one, other] = [new Float64Array(channels), new Float64Array(channels)];
  for (let y = 0, at = 0; y < extent.height; y++) {
    for (let x = 0; x < extent.width; x++) {
      const [u, v] = [(x + 0.5) / extent.width, (y + 0.5) / extent.height];
      near(u, v, one);
      far(u, v, other);
      for (let channel = 0; channel < channels; channel++) {
        const value = one[channel] * (1 - share) + other[channel] * share;
        codes[at++] = Math.floor((coded[channel] ? encodeSrgb(value) : value) * max + 0.5);
      }
    }
  }
  return { ...finer, extent, codes };
}

/** Tables by channel, from code to what a sampler interpolates. */
export function tablesOf(picture: Picture): readonly Float32Array[] {
  const max = maxCode(picture.depth);
  return Array.from({ length: picture.channels }, (_, channel) =>
    isCoded(picture, channel)
      ? decodeTable(picture.depth, 'srgb')
      : decodeTable(picture.depth, 'linear').map((code) => code / max),
  );
}

/** Whether a channel's codes are sRGB-coded: alpha, and a last channel where alpha stands, never are. */
export function isCoded({ meaning, channels }: Picture, channel: number): boolean {
  const front = channels >= 3 ? 3 : 1;
  return meaning.transfer === 'srgb' && channel < front && channel !== meaning.alpha;
}
