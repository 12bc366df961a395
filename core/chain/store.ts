import { type Codes, type Depth, newCodes, type Raster, type StraightRaster } from '../raster/raster.ts';
import { newClipped } from '../resample/clip.ts';
import { decodeRow, floatChannels } from '../resample/decode.ts';
import type { Encoding, Layout } from '../resample/encoding.ts';
import { decodingOf, recodeTable } from './decoding.ts';
import { encodeRow } from './encode.ts';
import type { ChainPlan } from './plan.ts';

/** How the plan's images are stored. */
export function encodingOf(plan: ChainPlan, layout: Layout = plan.layout): Encoding {
  return {
    layout,
    floatChannels: floatChannels(decodingOf(layout)),
    depth: plan.depth,
    store: plan.treatment.alpha.store,
    light: plan.light,
  };
}

/** Codes as the source has them, in the form that the plan stores: untouched where that is the source's own, sRGB where the
 *  source has a gamma of its own. `normals` says whether they are unit already or wanted as they are, or must be made unit. */
export function storeCodes(plan: ChainPlan, raster: StraightRaster, normals: 'keep' | 'renormalise'): Raster {
  const { treatment, layout } = plan;
  if (treatment.alpha.store === 'premultiplied' && layout.alpha !== null) {
    return { ...recoded(plan, raster), kind: 'premultiplied' };
  }
  if (plan.light === 'linear') return recoded(plan, raster);
  const rescaled = plan.layout.gamma === null ? changeDepth(raster, plan.depth) : recodeGamma(plan, raster, plan.depth);
  if (layout.normals.length === 0 || normals === 'keep') return rescaled;
  return withNormals(rescaled, recoded(plan, raster), layout);
}

/** sRGB codes of the source's depth, from codes of its gamma. */
export function untagged(plan: ChainPlan, raster: StraightRaster): StraightRaster {
  return recodeGamma(plan, raster, raster.depth);
}

function recodeGamma({ layout }: ChainPlan, raster: StraightRaster, depth: Depth): StraightRaster {
  const { codes } = changeDepth({ ...raster, codes: raster.codes.slice() }, depth);
  const table = recodeTable(raster.depth, depth, layout.gamma!);
  layout.roles.forEach((role, channel) => {
    if (role.kind !== 'color' || role.stored !== 'srgb') return;
    for (let at = channel; at < codes.length; at += layout.channels) codes[at] = table[raster.codes[at]];
  });
  return { ...raster, depth, codes };
}

/** The same numbers at another depth: times 257, or floor(v 255 / 65535 + 1/2).  [PNG3, sample depth rescaling] */
export function changeDepth(raster: StraightRaster, depth: Depth): StraightRaster {
  if (raster.depth === depth) return raster;
  const codes = newCodes(depth, raster.codes.length);
  const up = depth === 16;
  for (let i = 0; i < codes.length; i++)
    codes[i] = up ? raster.codes[i] * 257 : Math.floor(raster.codes[i] / 257 + 0.5);
  return { ...raster, depth, codes };
}

/** Through floats and back, unweighted: color under alpha 0 survives. */
function recoded(plan: ChainPlan, raster: StraightRaster): StraightRaster {
  const layout: Layout = { ...plan.layout, weighted: [] };
  const decoding = decodingOf(layout);
  const encoding = encodingOf(plan, layout);
  const { width, height } = raster.extent;
  const length = width * raster.channels;
  const codes = newCodes(plan.depth, raster.codes.length);
  const floats = new Float32Array(width * encoding.floatChannels);
  const clipped = newClipped(raster.channels);
  for (let y = 0; y < height; y++) {
    decodeRow(decoding, raster.codes.subarray(y * length, (y + 1) * length), floats);
    encodeRow(encoding, floats, codes, y * length, clipped, null);
  }
  return { ...raster, depth: plan.depth, codes };
}

function withNormals(raster: StraightRaster, normals: StraightRaster, layout: Layout): StraightRaster {
  const codes: Codes = raster.codes.slice();
  const { channels } = raster;
  layout.roles.forEach((role, channel) => {
    if (role.kind !== 'normal') return;
    for (let at = channel; at < codes.length; at += channels) codes[at] = normals.codes[at];
  });
  return { ...raster, codes };
}
