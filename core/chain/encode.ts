import { type Encoder, roundedCode, srgbEncoder } from '../color/encoder.ts';
import { decodeSrgb } from '../color/transfer.ts';
import { type Codes, maxCode } from '../raster/raster.ts';
import { CLIP_SLACK, type Clipped } from '../resample/clip.ts';
import { SHORTEST } from '../resample/decode.ts';
import type { Encoding, Layout, Role } from '../resample/encoding.ts';
import type { NormalGroup } from '../resample/engine.ts';

/** Encodes one row into `codes` from sample `offset` on. `lengths` holds the mean length of the normals over each texel,
 *  0..1, for layouts with roughness. */
export function encodeRow(
  encoding: Encoding,
  floats: Float32Array,
  codes: Codes,
  offset: number,
  clipped: Clipped,
  lengths: Float32Array | null,
): void {
  const { layout } = encoding;
  layout.roles.forEach((role, channel) => {
    const column = { encoding, floats, codes, offset, channel, clipped };
    if (role.kind === 'color') encodeColor(column, role, dividerOf(layout, channel));
    else if (role.kind === 'plain') encodePlain(column, dividerOf(layout, channel));
    else if (role.kind === 'opacity') encodeScaled(column, null, plainScale(encoding));
    else if (role.kind === 'unused') fillColumn(column, maxCode(encoding.depth));
    else if (role.kind === 'roughness') encodeRoughness(column, dividerOf(layout, channel), lengths);
  });
  for (const group of layout.normals) encodeNormals(encoding, group, floats, codes, offset);
}

interface Column {
  readonly encoding: Encoding;
  readonly floats: Float32Array;
  readonly codes: Codes;
  readonly offset: number;
  readonly channel: number;
  readonly clipped: Clipped;
}

/** The channel that this one was multiplied by, or null. */
function dividerOf(layout: Layout, channel: number): number | null {
  return layout.weighted.includes(channel) ? layout.alpha : null;
}

const round = Math.fround;

function encodeColor(column: Column, role: Role & { kind: 'color' }, divider: number | null): void {
  const { encoding } = column;
  const asked = multipliesAlpha(encoding) || encoding.light === 'linear';
  if (asked && role.transfer !== role.stored) encodeLate(column, divider);
  else if (multipliesAlpha(encoding)) encodePremultiplied(column, divider);
  else if (role.transfer === 'linear') encodePlain(column, divider);
  else if (encoding.light === 'linear') encodeScaled(column, divider, maxCode(encoding.depth));
  else encodeTransferred(column, divider, srgbEncoder(encoding.depth));
}

function encodeTransferred(column: Column, divider: number | null, encoder: Encoder): void {
  const { floats, codes, offset, channel, clipped, encoding } = column;
  const { floatChannels: stride } = encoding;
  const { channels } = encoding.layout;
  let below = 0;
  let above = 0;
  for (let i = 0, o = offset + channel; i < floats.length; i += stride, o += channels) {
    const value = divider === null ? floats[i + channel] : ratio(floats[i + channel], floats[i + divider]);
    if (value < -CLIP_SLACK) below++;
    else if (value > 1 + CLIP_SLACK) above++;
    codes[o] = encoder.codeOf(value);
  }
  clipped.below[channel] += below;
  clipped.above[channel] += above;
}

/** Code units in, code units out; depths may differ. */
function encodePlain(column: Column, divider: number | null): void {
  const { encoding } = column;
  if (multipliesAlpha(encoding)) encodePremultiplied(column, divider);
  else encodeScaled(column, divider, plainScale(encoding));
}

function multipliesAlpha({ store, layout }: Encoding): boolean {
  return store === 'premultiplied' && layout.alpha !== null;
}

/** From code units of the source to those that are stored. */
function plainScale({ depth, layout }: Encoding): number {
  return maxCode(depth) / maxCode(layout.depth);
}

/** The value times `scale` is in code units. A scale below 1 divides by its inverse, which is a whole number (257). */
function encodeScaled(column: Column, divider: number | null, scale: number): void {
  const { floats, codes, offset, channel, clipped, encoding } = column;
  const { floatChannels: stride } = encoding;
  const { channels } = encoding.layout;
  const max = maxCode(encoding.depth);
  const slack = max * CLIP_SLACK;
  const inverse = Math.round(1 / scale);
  let below = 0;
  let above = 0;
  for (let i = 0, o = offset + channel; i < floats.length; i += stride, o += channels) {
    const value = divider === null ? floats[i + channel] : ratio(floats[i + channel], floats[i + divider]);
    const scaled = scale >= 1 ? round(value * scale) : round(value / inverse);
    if (scaled < -slack) below++;
    else if (scaled > max + slack) above++;
    codes[o] = roundedCode(scaled, max);
  }
  clipped.below[channel] += below;
  clipped.above[channel] += above;
}

/** Color times alpha in linear light, then encoded: color may not exceed what alpha lets through. */
function encodePremultiplied(column: Column, divider: number | null): void {
  const { floats, codes, offset, channel, clipped, encoding } = column;
  const { layout, floatChannels: stride } = encoding;
  const alpha = layout.alpha!;
  const alphaMax = maxCode(layout.depth);
  const role = layout.roles[channel];
  const decoded = role.kind === 'color' && role.transfer === 'srgb';
  const coded = decoded && encoding.light === 'coded';
  const max = maxCode(encoding.depth);
  const whole = decoded ? 1 : alphaMax;
  const encoder = srgbEncoder(encoding.depth);
  let below = 0;
  let above = 0;
  for (let i = 0, o = offset + channel; i < floats.length; i += stride, o += layout.channels) {
    const through = clamped(floats[i + alpha] / alphaMax);
    const value = divider === null ? floats[i + channel] * through : floats[i + channel] / alphaMax;
    if (value < -CLIP_SLACK * whole) below++;
    else if (value > (through + CLIP_SLACK) * whole) above++;
    const kept = round(Math.min(through * whole, Math.max(0, value)));
    codes[o] = coded ? encoder.codeOf(kept) : roundedCode(round((kept / whole) * max), max);
  }
  clipped.below[channel] += below;
  clipped.above[channel] += above;
}

/** sRGB codes that were filtered as they are, where linear light is stored or multiplied by alpha: decoded after filtering. */
function encodeLate(column: Column, divider: number | null): void {
  const { floats, codes, offset, channel, clipped, encoding } = column;
  const { layout, floatChannels: stride } = encoding;
  const from = maxCode(layout.depth);
  const max = maxCode(encoding.depth);
  const alpha = multipliesAlpha(encoding) ? layout.alpha : null;
  const encoder = srgbEncoder(encoding.depth);
  let below = 0;
  let above = 0;
  for (let i = 0, o = offset + channel; i < floats.length; i += stride, o += layout.channels) {
    const value = divider === null ? floats[i + channel] : ratio(floats[i + channel], floats[i + divider]);
    const share = value / from;
    if (share < -CLIP_SLACK) below++;
    else if (share > 1 + CLIP_SLACK) above++;
    const through = alpha === null ? 1 : clamped(floats[i + alpha] / from);
    const kept = round(decodeSrgb(clamped(share)) * through);
    codes[o] = encoding.light === 'coded' ? encoder.codeOf(kept) : roundedCode(round(kept * max), max);
  }
  clipped.below[channel] += below;
  clipped.above[channel] += above;
}

function clamped(share: number): number {
  return Math.min(1, Math.max(0, share));
}

/** Straight color from weighted color; black where nothing is there (fill decides later what stands under alpha 0). */
function ratio(weighted: number, alpha: number): number {
  return alpha > 0 ? round(weighted / alpha) : 0;
}

function fillColumn(column: Column, code: number): void {
  const { codes, offset, channel, floats, encoding } = column;
  const { channels } = encoding.layout;
  const texels = floats.length / encoding.floatChannels;
  for (let x = 0, o = offset + channel; x < texels; x++, o += channels) codes[o] = code;
}

/** r' = (mean alpha^2 + 2 sigma^2)^(1/4) with alpha = r^2 and sigma^2 = (1 - L) / L.  [glTF2, appendix B; Toksvig04] */
function encodeRoughness(column: Column, divider: number | null, lengths: Float32Array | null): void {
  const { floats, codes, offset, channel, encoding } = column;
  const { floatChannels: stride, depth } = encoding;
  const { channels } = encoding.layout;
  const max = maxCode(depth);
  for (let i = 0, x = 0, o = offset + channel; i < floats.length; i += stride, x++, o += channels) {
    const spread = lengths === null ? 0 : spreadOf(lengths[x]);
    const mean = divider === null ? floats[i + channel] : ratio(floats[i + channel], floats[i + divider]);
    const squared = Math.min(1, Math.max(0, mean + 2 * spread));
    codes[o] = roundedCode(round(Math.sqrt(Math.sqrt(squared)) * max), max);
  }
}

/** Variance of directions whose mean has length L: (1 - L) / L; large where they cancel. */
function spreadOf(length: number): number {
  const clamped = Math.min(1, Math.max(SHORTEST, length));
  return (1 - clamped) / clamped;
}

/** The mean made unit again, (0, 0, 1) where it has no direction; a z without a channel of its own is not stored. */
function encodeNormals(
  encoding: Encoding,
  group: NormalGroup,
  floats: Float32Array,
  codes: Codes,
  offset: number,
): void {
  const { floatChannels: stride, depth } = encoding;
  const { channels } = encoding.layout;
  const max = maxCode(depth);
  for (let i = 0, o = offset; i < floats.length; i += stride, o += channels) {
    const x = floats[i + group.x];
    const y = floats[i + group.y];
    const z = floats[i + group.z];
    const length = round(Math.sqrt(round(round(round(x * x) + round(y * y)) + round(z * z))));
    const direction = length >= SHORTEST;
    codes[o + group.x] = normalCode(direction ? x / length : 0, max);
    codes[o + group.y] = normalCode(direction ? y / length : 0, max);
    if (group.z < channels) codes[o + group.z] = normalCode(direction ? z / length : 1, max);
  }
}

/** -1..1 to a code: (v + 1) / 2 of the largest.  [glTF2, normal texture] */
function normalCode(value: number, max: 255 | 65535): number {
  return roundedCode(round(((round(value) + 1) / 2) * max), max);
}
