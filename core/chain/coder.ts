import { type Codes, maxCode } from '../raster/raster.ts';
import type { Encoding } from '../resample/encoding.ts';
import type { RowCoder } from '../resample/engine.ts';
import { encodeRow } from './encode.ts';
import { isLightInFloats, lightOfCodes, sumHeld } from './light.ts';

/** Stores and measures rows whatever their encoding. The readable reference for engines with a coder of their own. */
export function plainCoder(encoding: Encoding): RowCoder {
  return {
    encode: (floats, codes, offset, clipped, lengths) => encodeRow(encoding, floats, codes, offset, clipped, lengths),
    measure: (floats, codes, offset, sums, at) => measureRow(encoding, floats, codes, offset, sums, at),
    keepAlpha: (floats, values) => keepAlpha(encoding, floats, values),
    measureLengths: (floats, lengths) => measureLengths(encoding, floats, lengths),
  };
}

/** Measures the light of a row that was stored at `offset` of the codes. */
export function measureRow(
  encoding: Encoding,
  floats: Float32Array,
  codes: Codes,
  offset: number,
  sums: Float64Array,
  at: number,
): void {
  const { layout, floatChannels } = encoding;
  const { alpha, depth } = layout;
  if (isLightInFloats(layout)) {
    sums.set(sumHeld(layout, floats, floatChannels), at);
    return;
  }
  const texels = floats.length / floatChannels;
  const { light, weight } = lightOfCodes(encoding, codes.subarray(offset), texels, (x) =>
    alpha === null ? 1 : clampedShare(floats[x * floatChannels + alpha], maxCode(depth)),
  );
  sums[at] = light;
  sums[at + 1] = weight;
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
