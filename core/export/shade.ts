import { passingCode } from '../chain/coverage.ts';
import { roundedCode, srgbEncoder } from '../color/encoder.ts';
import { decodeTable } from '../color/transfer.ts';
import { eightBits, lampDirection } from '../proof/screen.ts';
import type { Picture } from '../proof/want.ts';
import { maxCode } from '../raster/raster.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { Rgb } from './canvas.ts';
import type { Look, SheetShow } from './look.ts';

/** Color of one texel as it is printed, over what stands behind it. Opaque texels are their codes; 16 bits are brought to 8. */
export type Shade = (texel: number, backdrop: Rgb) => Rgb;

export function shadeOf(
  picture: Picture,
  view: { readonly show: SheetShow; readonly treatment: Treatment; readonly lamp: Look['lamp'] },
): Shade {
  switch (view.show) {
    case 'color':
      return over(picture, view.treatment.view.blend);
    case 'bare':
      return codesOf(picture);
    case 'r':
    case 'g':
    case 'b':
    case 'a':
      return channel(picture, view.show);
    case 'mask':
      return tested(picture, view.treatment);
    case 'lit':
      return lit(picture, view);
  }
}

/** Whether a backdrop may be seen behind a picture. */
export function isSeenThrough({ meaning }: Picture, show: SheetShow): boolean {
  return meaning.alpha !== null && (show === 'color' || show === 'mask');
}

function shown(code: number, { depth }: Picture): number {
  return depth === 8 ? code : eightBits(code);
}

function codesOf(picture: Picture): (texel: number) => Rgb {
  const { channels, codes, meaning } = picture;
  const at = (texel: number, index: number): number => shown(codes[texel * channels + index], picture);
  if (channels >= 3) return (texel) => [at(texel, 0), at(texel, 1), at(texel, 2)];
  // Two channels without alpha are the x and y of a normal.
  if (channels === 2 && meaning.alpha === null) return (texel) => [at(texel, 0), at(texel, 1), 255];
  return (texel) => [at(texel, 0), at(texel, 0), at(texel, 0)];
}

function over(picture: Picture, blend: 'linear' | 'code'): Shade {
  const { channels, codes, meaning } = picture;
  const color = codesOf(picture);
  const { alpha } = meaning;
  if (alpha === null) return color;
  const max = maxCode(picture.depth);
  const isLight = blend === 'linear' && meaning.transfer === 'srgb';
  const decode = decodeTable(8, 'srgb');
  const encoder = srgbEncoder(8);
  return (texel, backdrop) => {
    const front = color(texel);
    const a = codes[texel * channels + alpha] / max;
    if (a === 1) return front;
    const share = meaning.premultiplied ? 1 : a;
    const mix = (i: 0 | 1 | 2): number =>
      isLight
        ? encoder.codeOf(decode[front[i]] * share + decode[backdrop[i]] * (1 - a))
        : roundedCode(front[i] * share + backdrop[i] * (1 - a), 255);
    return [mix(0), mix(1), mix(2)];
  };
}

function channel(picture: Picture, letter: 'r' | 'g' | 'b' | 'a'): Shade {
  const { channels, codes } = picture;
  const front = channels >= 3 ? 'rgb'.indexOf(letter) : 0;
  const index = letter === 'a' ? (channels % 2 === 0 ? channels - 1 : null) : front;
  return (texel) => {
    const code = index === null ? 255 : shown(codes[texel * channels + index], picture);
    return [code, code, code];
  };
}

/** What a renderer that tests alpha keeps, and the backdrop where it keeps nothing. */
function tested(picture: Picture, { alpha: use }: Treatment): Shade {
  const { channels, codes, meaning, depth } = picture;
  const color = codesOf(picture);
  const passing = passingCode(use, depth);
  return (texel, backdrop) =>
    meaning.alpha === null || codes[texel * channels + meaning.alpha] >= passing ? color(texel) : backdrop;
}

/** Lambert's law on a surface of 80 % white, one far lamp, and 4 % of light from everywhere so that shadows keep their form. */
function lit(
  picture: Picture,
  { lamp, treatment }: { readonly lamp: Look['lamp']; readonly treatment: Treatment },
): Shade {
  const { channels, codes, depth, meaning } = picture;
  const { normal } = meaning;
  if (normal === null) return codesOf(picture);
  const max = maxCode(depth);
  const { x: lx, y: ly, z: lz } = lampDirection(lamp);
  const up = treatment.normal.y === 'up' ? 1 : -1;
  const encoder = srgbEncoder(8);
  return (texel) => {
    const signed = (index: number): number => (codes[texel * channels + index] / max) * 2 - 1;
    const [x, y] = [signed(normal.x), signed(normal.y) * up];
    const z = normal.z === null ? Math.sqrt(Math.max(0, 1 - x * x - y * y)) : signed(normal.z);
    const length = Math.sqrt(x * x + y * y + z * z) || 1;
    const code = encoder.codeOf(0.04 + 0.76 * Math.max(0, (x * lx + y * ly + z * lz) / length));
    return [code, code, code];
  };
}
