import { luminance } from '../color/luminance.ts';
import { decodeTable } from '../color/transfer.ts';
import { type Codes, maxCode } from '../raster/raster.ts';
import type { Encoding, Layout } from '../resample/encoding.ts';
import { sumByFours } from '../resample/fours.ts';
import { frontChannels, holdsColor } from './layout.ts';

/** Sums of luminance times alpha, and of alpha, over texels; the mean is their quotient. */
export interface LightSum {
  readonly light: number;
  readonly weight: number;
}

/** Whether float rows of the layout hold light, times alpha where there is one: then it is measured there, before it is rounded.
 *  Otherwise it is measured on stored codes. */
export function isLightInFloats(layout: Layout): boolean {
  if (!holdsColor(layout)) return false;
  return layout.roles.slice(0, frontChannels(layout.channels)).every((role, channel) => {
    if (role.kind !== 'color' || role.transfer !== role.stored) return false;
    return layout.alpha === null || layout.weighted.includes(channel);
  });
}

/** Numbers that a row is measured by: the sums of its float channels where these are light, else light and weight of its codes. */
export const SUMS_A_ROW = 4;

/** Light of rows whose numbers were added up. */
export function lightOf(layout: Layout, sums: ArrayLike<number>, texels: number): LightSum {
  return isLightInFloats(layout) ? lightOfSums(layout, sums, texels) : { light: sums[0], weight: sums[1] };
}

/** Light of sums over float texels: of each front channel, and of alpha. */
export function lightOfSums(layout: Layout, sums: ArrayLike<number>, texels: number): LightSum {
  const { alpha, depth, channels } = layout;
  const whole = alpha === null ? 1 : maxCode(depth);
  const red = sums[0] / (whole * wholeOf(layout, 0));
  const weight = alpha === null ? texels : sums[alpha] / whole;
  if (frontChannels(channels) === 1) return { light: luminance(red, red, red), weight };
  const green = sums[1] / (whole * wholeOf(layout, 1));
  return { light: luminance(red, green, sums[2] / (whole * wholeOf(layout, 2))), weight };
}

/** The float that a channel's full light is. */
export function wholeOf({ roles, depth }: Layout, channel: number): number {
  const role = roles[channel];
  return role.kind === 'color' && role.transfer === 'linear' ? maxCode(depth) : 1;
}

/** Sums of a float row's channels, clamped to what a texel can hold: alpha to its range, light to what alpha lets through. */
export function sumHeld(layout: Layout, floats: Float32Array, floatChannels: number): Float64Array {
  const { alpha, depth, channels } = layout;
  const texels = floats.length / floatChannels;
  // Nothing from no number, as the kernels' comparisons have it.
  const held = (value: number, bound: number): number => (value > 0 ? Math.min(bound, value) : 0);
  const alphaAt = (x: number): number => (alpha === null ? 1 : held(floats[x * floatChannels + alpha], maxCode(depth)));
  return Float64Array.from({ length: channels }, (_, channel) => {
    if (channel === alpha) return sumByFours(texels, alphaAt);
    const whole = wholeOf(layout, channel);
    return sumByFours(texels, (x) => held(floats[x * floatChannels + channel], Math.fround(alphaAt(x) * whole)));
  });
}

/** Luminance of stored codes, each texel weighed by its alpha, 0..1. */
export function lightOfCodes(
  encoding: Encoding,
  codes: Codes,
  texels: number,
  alphaOf: (texel: number) => number,
): LightSum {
  const { layout, depth } = encoding;
  const { channels } = layout;
  const tables = layout.roles.slice(0, frontChannels(channels)).map((role) => {
    const coded = encoding.light === 'coded' && role.kind === 'color' && role.stored === 'srgb';
    return { table: decodeTable(depth, coded ? 'srgb' : 'linear'), whole: coded ? 1 : maxCode(depth) };
  });
  const [red, green = red, blue = red] = tables;
  const [r, g, b] = tables.length === 1 ? [0, 0, 0] : [0, 1, 2];
  const premultiplied = encoding.store === 'premultiplied' && layout.alpha !== null;
  let light = 0;
  let weight = 0;
  for (let x = 0, at = 0; x < texels; x++, at += channels) {
    const y = luminance(
      red.table[codes[at + r]] / red.whole,
      green.table[codes[at + g]] / green.whole,
      blue.table[codes[at + b]] / blue.whole,
    );
    const share = alphaOf(x);
    light += premultiplied ? y : y * share;
    weight += share;
  }
  return { light, weight };
}
