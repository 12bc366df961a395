import { luminance } from '../../../core/color/luminance.ts';
import { oklabDistance, oklabOfLight } from '../../../core/color/oklab.ts';
import { eightBits, lampDirection } from '../../../core/proof/screen.ts';
import type { Picture } from '../../../core/proof/want.ts';
import { maxCode } from '../../../core/raster/raster.ts';
import type { Show } from '../state/state.ts';
import { DIFFERENCE_RAMP, type Rgb, rampAt, SIGNED_RAMP } from './backdrop.ts';
import { codeOfLight, LIGHT_OF_CODE, texelReader } from './texel.ts';

/** How texels are turned into pixels of the screen. */
export interface View {
  readonly show: Show;
  readonly metric: 'oklab' | 'r' | 'g' | 'b' | 'a';
  /** How backdrops blend. */
  readonly blend: 'linear' | 'code';
  /** The least alpha code that passes, of the picture's own depth. */
  readonly passing: number;
  /** Where green points in normals. */
  readonly normalY: 'up' | 'down';
  readonly lamp: { readonly x: number; readonly y: number };
}

/** Writes the three codes of one texel over a backdrop. */
export type Shader = (texel: number, backdrop: Rgb, out: Uint8ClampedArray | number[]) => void;

/** Differences are shown up to this OKLab distance; 0.02 is about what is just seen. */
export const OKLAB_SCALE = 0.1;

/** Differences of one channel are shown up to this many 8-bit codes. */
export const CODE_SCALE = 16;

/** The shader of a view. `reference` is what differences are taken from, of the same extent. */
export function shaderOf(view: View, picture: Picture, reference: Picture | null): Shader {
  switch (view.show) {
    case 'color':
      return over(view, picture);
    case 'bare':
      return opaque(picture);
    case 'r':
    case 'g':
    case 'b':
    case 'a':
      return channel(picture, view.show);
    case 'mask':
      return masked(view, picture);
    case 'lit':
      return lit(view, picture);
    case 'difference':
      return reference === null ? opaque(picture) : difference(view, picture, reference);
    case 'overshoot':
    case 'art':
      return dimmed(picture);
  }
}

/** Whether the backdrop shows through somewhere. */
export function showsBackdrop(show: Show, picture: Picture): boolean {
  return (show === 'color' || show === 'mask') && picture.meaning.alpha !== null;
}

function opaque(picture: Picture): Shader {
  const { color } = texelReader(picture);
  return (texel, _, out) => color(texel, out);
}

function over(view: View, picture: Picture): Shader {
  const { meaning } = picture;
  if (meaning.alpha === null) return opaque(picture);
  const { color, alpha } = texelReader(picture);
  const own = meaning.premultiplied ? 1 : null;
  const linear = view.blend === 'linear' && meaning.transfer === 'srgb';
  return (texel, backdrop, out) => {
    color(texel, out);
    const a = alpha(texel);
    if (a === 1) return;
    const share = own ?? a;
    for (let i = 0; i < 3; i++) {
      out[i] = linear
        ? codeOfLight(LIGHT_OF_CODE[out[i]] * share + LIGHT_OF_CODE[backdrop[i]] * (1 - a))
        : out[i] * share + backdrop[i] * (1 - a);
    }
  };
}

function channel(picture: Picture, letter: 'r' | 'g' | 'b' | 'a'): Shader {
  const { channels, codes, depth } = picture;
  const at = channelAt(channels, letter);
  return (texel, _, out) => {
    const code = at === null ? maxCode(depth) : codes[texel * channels + at];
    out[0] = out[1] = out[2] = depth === 8 ? code : eightBits(code);
  };
}

/** Index of a letter's channel; null for an alpha that is not there. Gray answers to r, g and b. */
export function channelAt(channels: number, letter: 'r' | 'g' | 'b' | 'a'): number | null {
  if (letter === 'a') return channels % 2 === 0 ? channels - 1 : null;
  return channels >= 3 ? 'rgb'.indexOf(letter) : 0;
}

function masked(view: View, picture: Picture): Shader {
  const { alpha: at } = picture.meaning;
  const { color } = texelReader(picture);
  const { channels, codes } = picture;
  return (texel, backdrop, out) => {
    if (at === null || codes[texel * channels + at] >= view.passing) color(texel, out);
    else for (let i = 0; i < 3; i++) out[i] = backdrop[i];
  };
}

/** Lambert's law on a surface of 80 % white, one far lamp, and 4 % of light from everywhere so that shadows keep their form. */
function lit(view: View, picture: Picture): Shader {
  const { normal } = picture.meaning;
  if (normal === null) return opaque(picture);
  const { channels, codes, depth } = picture;
  const max = maxCode(depth);
  const { x: lx, y: ly, z: lz } = lampDirection(view.lamp);
  const up = view.normalY === 'up' ? 1 : -1;
  return (texel, _, out) => {
    const at = texel * channels;
    const x = (codes[at + normal.x] / max) * 2 - 1;
    const y = ((codes[at + normal.y] / max) * 2 - 1) * up;
    const z = normal.z === null ? Math.sqrt(Math.max(0, 1 - x * x - y * y)) : (codes[at + normal.z] / max) * 2 - 1;
    const length = Math.sqrt(x * x + y * y + z * z) || 1;
    const light = Math.max(0, (x * lx + y * ly + z * lz) / length);
    out[0] = out[1] = out[2] = codeOfLight(0.04 + 0.76 * light);
  };
}

function difference(view: View, picture: Picture, reference: Picture): Shader {
  if (view.metric !== 'oklab') return signed(picture, reference, view.metric);
  const measure = colorDistance(picture, reference);
  return (texel, _, out) => put(out, rampAt(DIFFERENCE_RAMP, measure(texel) / OKLAB_SCALE));
}

/** OKLab distance of a texel of one picture from one of another, the same one unless it is given. Colors are compared over mid
 *  gray by their alpha, so that what nobody sees does not count. */
export function colorDistance(picture: Picture, reference: Picture): (texel: number, from?: number) => number {
  const [one, other] = [picture, reference].map((each) => seenLight(each));
  const [first, second] = [new Float64Array(3), new Float64Array(3)];
  return (texel, from = texel) => {
    one(texel, first);
    other(from, second);
    if (first[0] === second[0] && first[1] === second[1] && first[2] === second[2]) return 0;
    return oklabDistance(oklabOfLight(first[0], first[1], first[2]), oklabOfLight(second[0], second[1], second[2]));
  };
}

function seenLight(picture: Picture): (texel: number, out: Float64Array) => void {
  const { color, alpha } = texelReader(picture);
  const { premultiplied } = picture.meaning;
  const codes = [0, 0, 0];
  return (texel, out) => {
    color(texel, codes);
    const a = alpha(texel);
    const share = premultiplied ? 1 : a;
    for (let i = 0; i < 3; i++) out[i] = LIGHT_OF_CODE[codes[i]] * share + 0.5 * (1 - a);
  };
}

function signed(picture: Picture, reference: Picture, letter: 'r' | 'g' | 'b' | 'a'): Shader {
  const at = channelAt(picture.channels, letter);
  const other = channelAt(reference.channels, letter);
  const unit = 255 / maxCode(picture.depth);
  return (texel, _, out) => {
    const one = at === null ? 255 : picture.codes[texel * picture.channels + at] * unit;
    const two = other === null ? 255 : reference.codes[texel * reference.channels + other] * unit;
    put(out, rampAt(SIGNED_RAMP, 0.5 + (one - two) / (2 * CODE_SCALE)));
  };
}

/** Gray and held back, so that marks stand out. */
function dimmed(picture: Picture): Shader {
  const { color, alpha } = texelReader(picture);
  const codes = [0, 0, 0];
  return (texel, _, out) => {
    color(texel, codes);
    // Of codes, not of light: it is only ground for the marks.
    const gray = luminance(codes[0], codes[1], codes[2]);
    out[0] = out[1] = out[2] = 64 + (gray * alpha(texel) + 128 * (1 - alpha(texel))) * 0.45;
  };
}

function put(out: Uint8ClampedArray | number[], color: Rgb): void {
  out[0] = color[0];
  out[1] = color[1];
  out[2] = color[2];
}
