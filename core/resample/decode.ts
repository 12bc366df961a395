import type { Codes } from '../raster/raster.ts';
import type { Decoding, NormalGroup } from './engine.ts';

const round = Math.fround;

/** Channels of a float row: the source's, and one more for each normal whose z has no channel of its own. */
export function floatChannels(decoding: Decoding): number {
  return decoding.normals.reduce((most, group) => Math.max(most, group.z + 1), decoding.channels);
}

/** Codes to floats: table, then unit normals, then the weight of alpha. Writes `floatChannels` floats a texel. */
export function decodeRow(decoding: Decoding, codes: Codes, floats: Float32Array): void {
  const { channels, tables } = decoding;
  const stride = floatChannels(decoding);
  for (let channel = 0; channel < channels; channel++) {
    const table = tables[channel];
    for (let i = channel, o = channel; i < codes.length; i += channels, o += stride) floats[o] = table[codes[i]];
  }
  for (const group of decoding.normals) makeUnit(group, stride, floats);
  if (decoding.alpha === null) return;
  for (const channel of decoding.weighted) weigh(channel, decoding.alpha, stride, floats);
}

function weigh(channel: number, alpha: number, stride: number, floats: Float32Array): void {
  for (let o = 0; o < floats.length; o += stride) floats[o + channel] = round(floats[o + channel] * floats[o + alpha]);
}

/** z = sqrt(max(0, 1 - x^2 - y^2)) where it is rebuilt; then length 1, (0, 0, 1) where there is no direction. */
function makeUnit(group: NormalGroup, stride: number, floats: Float32Array): void {
  for (let o = 0; o < floats.length; o += stride) {
    const x = floats[o + group.x];
    const y = floats[o + group.y];
    const flat = round(round(x * x) + round(y * y));
    const z = group.rebuilt ? round(Math.sqrt(Math.max(0, round(1 - flat)))) : floats[o + group.z];
    const length = round(Math.sqrt(round(flat + round(z * z))));
    if (length < SHORTEST) {
      floats[o + group.x] = 0;
      floats[o + group.y] = 0;
      floats[o + group.z] = 1;
    } else {
      floats[o + group.x] = round(x / length);
      floats[o + group.y] = round(y / length);
      floats[o + group.z] = round(z / length);
    }
  }
}

/** Below this a mean of unit vectors has no direction left: some ten times the error of a float32 sum of a footprint. */
export const SHORTEST = 1e-6;
