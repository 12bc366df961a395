import type { Backdrop } from '../state/state.ts';

// The only literal colors of the page: what stands behind transparent texels, the tints of channels, and the scales of
// differences. They are content, judged by eye, and do not follow the theme.

/** sRGB codes. */
export type Rgb = readonly [red: number, green: number, blue: number];

/** One color, or the two of a checker. */
export const BACKDROPS: Readonly<Record<Backdrop, readonly Rgb[]>> = {
  checker: [
    [142, 142, 142],
    [102, 102, 102],
  ],
  black: [[0, 0, 0]],
  white: [[255, 255, 255]],
  // Half of the light of white.
  gray: [[188, 188, 188]],
};

/** CSS pixels of a checker's square. */
export const CHECKER_SIDE = 8;

/** Lines of channels in plots, by letter; each has a dash of its own too. */
export const CHANNEL_TINTS: Readonly<Record<'r' | 'g' | 'b' | 'a', string>> = {
  r: '#e5484d',
  g: '#2f9e58',
  b: '#3b82e0',
  a: '#8f8f8f',
};

/** Colors of a difference from none to the most, evenly spaced. Lightness grows throughout, so that it reads without hue. */
export const DIFFERENCE_RAMP: readonly Rgb[] = [
  [16, 18, 24],
  [66, 32, 92],
  [158, 46, 96],
  [226, 104, 62],
  [246, 186, 84],
  [255, 248, 224],
];

/** A channel that is lower, equal, higher. */
export const SIGNED_RAMP: readonly Rgb[] = [
  [70, 140, 255],
  [24, 26, 32],
  [255, 150, 40],
];

/** Dark and light of marks that must show on any picture. */
export const MARK_DARK = 'rgba(0, 0, 0, 0.85)';
export const MARK_LIGHT = 'rgba(255, 255, 255, 0.95)';

/** Lines between texels. */
export const GRID_LINE = 'rgba(128, 128, 128, 0.45)';

/** Footprint weights: pulled towards, and pushed away from. */
export const WEIGHT_PLUS: Rgb = [255, 186, 84];
export const WEIGHT_MINUS: Rgb = [70, 140, 255];

/** A color of a ramp at 0..1. */
export function rampAt(ramp: readonly Rgb[], share: number): Rgb {
  const at = Math.min(1, Math.max(0, share)) * (ramp.length - 1);
  const left = Math.min(ramp.length - 2, Math.floor(at));
  const [one, other] = [ramp[left], ramp[left + 1]];
  const mix = (channel: 0 | 1 | 2): number => Math.round(one[channel] + (other[channel] - one[channel]) * (at - left));
  return [mix(0), mix(1), mix(2)];
}
