import { luminance } from '../color/luminance.ts';
import { decodeTable } from '../color/transfer.ts';
import { type Codes, maxCode } from '../raster/raster.ts';
import type { RowCoder } from '../resample/engine.ts';
import { type Encoding, encodeRow } from './encode.ts';
import type { LightSum } from './image.ts';
import { frontChannels } from './layout.ts';

/** Stores and measures rows whatever their encoding. The readable reference for engines with a coder of their own. */
export function plainCoder(encoding: Encoding): RowCoder {
  const { layout, floatChannels } = encoding;
  return {
    encode: (floats, codes, offset, clipped, lengths) => encodeRow(encoding, floats, codes, offset, clipped, lengths),
    light(floats, codes, offset) {
      const { alpha } = layout;
      const whole = maxCode(layout.depth);
      const of = (x: number): number => Math.min(whole, Math.max(0, floats[x * floatChannels + (alpha ?? 0)]));
      const texels = floats.length / floatChannels;
      return sumLight(encoding, codes.subarray(offset), texels, alpha === null ? null : { whole, of });
    },
    keepAlpha: (floats, values) => keepAlpha(encoding, floats, values),
    measureLengths: (floats, lengths) => measureLengths(encoding, floats, lengths),
  };
}

/** What weighs texels: alpha in units of which `whole` is 1. */
export interface Alphas {
  readonly whole: number;
  readonly of: (texel: number) => number;
}

/** Luminance of stored codes, weighed by alpha, or each by 1. Texels of even and of odd index are summed apart. */
export function sumLight(encoding: Encoding, codes: Codes, texels: number, alphas: Alphas | null): LightSum {
  const { layout, depth } = encoding;
  const { channels } = layout;
  const tables = layout.roles.slice(0, frontChannels(channels)).map((role) => {
    const coded = encoding.light === 'coded' && role.kind === 'color' && role.stored === 'srgb';
    return { table: decodeTable(depth, coded ? 'srgb' : 'linear'), whole: coded ? 1 : maxCode(depth) };
  });
  const [red, green = red, blue = red] = tables;
  const [r, g, b] = tables.length === 1 ? [0, 0, 0] : [0, 1, 2];
  const premultiplied = encoding.store === 'premultiplied' && layout.alpha !== null;
  const light = [0, 0];
  const weight = [0, 0];
  for (let x = 0, at = 0; x < texels; x++, at += channels) {
    const y = luminance(
      red.table[codes[at + r]] / red.whole,
      green.table[codes[at + g]] / green.whole,
      blue.table[codes[at + b]] / blue.whole,
    );
    const share = alphas === null ? 1 : alphas.of(x);
    light[x & 1] += premultiplied ? y : y * share;
    weight[x & 1] += share;
  }
  const whole = alphas?.whole ?? 1;
  return {
    light: (light[0] + light[1]) / (premultiplied ? 1 : whole),
    weight: (weight[0] + weight[1]) / whole,
  };
}

function clampedShare(value: number, max: number): number {
  return Math.min(1, Math.max(0, value / max));
}

function keepAlpha(encoding: Encoding, floats: Float32Array, values: Uint16Array): void {
  const { layout, floatChannels } = encoding;
  const alpha = layout.alpha!;
  const max = maxCode(layout.depth);
  for (let x = 0; x < values.length; x++) {
    values[x] = Math.floor(clampedShare(floats[x * floatChannels + alpha], max) * 65535 + 0.5);
  }
}

/** Length of the mean normal over each texel, alpha taken out again where it weighs normals. */
function measureLengths(encoding: Encoding, floats: Float32Array, lengths: Float32Array): void {
  const { layout, floatChannels: stride } = encoding;
  const [group] = layout.normals;
  const divider = layout.weighted.includes(group.x) ? layout.alpha : null;
  for (let x = 0; x < lengths.length; x++) {
    const at = x * stride;
    const [nx, ny, nz] = [floats[at + group.x], floats[at + group.y], floats[at + group.z]];
    const length = Math.sqrt(nx * nx + ny * ny + nz * nz);
    const whole = divider === null ? 1 : floats[at + divider];
    lengths[x] = whole > 0 ? length / whole : 0;
  }
}
