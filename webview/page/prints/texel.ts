import { decodeTable, encodeSrgb } from '../../../core/color/transfer.ts';
import { eightBits } from '../../../core/proof/screen.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';

/** Reads texels of a picture as 8-bit codes that a screen shows: gray spread over three channels, 16 bits brought to 8. */
export interface TexelReader {
  /** Writes red, green and blue of a texel to `out`. */
  color(texel: number, out: Uint8ClampedArray | Uint8Array | number[]): void;
  /** Alpha of a texel, 0..1; 1 where there is none. */
  alpha(texel: number): number;
}

export function texelReader(picture: Picture): TexelReader {
  const { channels, codes, depth, meaning } = picture;
  const max = maxCode(depth);
  const shown = (code: number): number => (depth === 8 ? code : eightBits(code));
  const alphaAt = meaning.alpha;
  const alpha = (texel: number): number => (alphaAt === null ? 1 : codes[texel * channels + alphaAt] / max);
  if (channels >= 3) {
    return {
      color: (texel, out) => {
        const at = texel * channels;
        out[0] = shown(codes[at]);
        out[1] = shown(codes[at + 1]);
        out[2] = shown(codes[at + 2]);
      },
      alpha,
    };
  }
  // Two channels without alpha are the x and y of a normal.
  const second = channels === 2 && alphaAt === null ? 1 : 0;
  return {
    color: (texel, out) => {
      const at = texel * channels;
      out[0] = shown(codes[at]);
      out[1] = shown(codes[at + second]);
      out[2] = second === 1 ? 255 : out[0];
    },
    alpha,
  };
}

/** Linear light of an 8-bit sRGB code. */
export const LIGHT_OF_CODE: Float32Array = decodeTable(8, 'srgb');

/** The 8-bit sRGB code nearest to linear light, by a table of 2^14 steps: within one code of the exact rounding. */
export function codeOfLight(light: number): number {
  return CODES[Math.min(STEPS, Math.max(0, Math.round(light * STEPS)))];
}

const STEPS = 1 << 14;
const CODES = Uint8Array.from({ length: STEPS + 1 }, (_, i) => Math.round(encodeSrgb(i / STEPS) * 255));
