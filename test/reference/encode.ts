import { type Codes, type Depth, maxCode, newCodes } from '../../core/raster/raster.ts';
import type { Doubles } from './doubles.ts';
import type { Meaning } from './meaning.ts';
import { roughen, unit } from './normal.ts';
import { encodeFraction, roundCode } from './transfer.ts';

export interface Encoded {
  /** Codes with their fractions, clamped; NaN where color has no alpha to be divided by. */
  readonly fractions: Float64Array;
  readonly codes: Codes;
  /** Straight values before clamping, in light; NaN as above. */
  readonly straight: Float64Array;
}

/** Stored codes of a filtered level: color = c / a where a > 0, else black; alpha times `alphaScale`. `lengths` holds the
 *  mean length of the normals over each texel. */
export function encodeDoubles(
  image: Doubles,
  channels: number,
  meaning: Meaning,
  depth: Depth,
  alphaScale: number,
  lengths: Float64Array | null,
): Encoded {
  const max = maxCode(depth);
  const texels = image.width * image.height;
  const fractions = new Float64Array(texels * channels);
  const straight = new Float64Array(texels * channels);
  const codes = newCodes(depth, texels * channels);
  for (let texel = 0; texel < texels; texel++) {
    const values = Array.from(image.values.subarray(texel * image.channels, (texel + 1) * image.channels));
    const a = meaning.alpha === null ? 1 : values[meaning.alpha];
    for (const c of meaning.weighted) values[c] = a > 0 ? values[c] / a : Number.NaN;
    if (meaning.normal !== null) {
      const { x, y, z } = meaning.normal;
      // The length of a sum needs no division by its alpha.
      const [u, v, w] = [x, y, z].map((c) => image.values[texel * image.channels + c]);
      [values[x], values[y], values[z]] = unit(u, v, w).map((component) => (component + 1) / 2);
    }
    if (meaning.roughness !== null)
      values[meaning.roughness] = roughen(values[meaning.roughness], lengths?.[texel] ?? 1);
    if (meaning.alpha !== null) values[meaning.alpha] *= alphaScale;
    if (meaning.unused !== null) values[meaning.unused] = 1;
    for (let c = 0; c < channels; c++) {
      const at = texel * channels + c;
      straight[at] = values[c];
      fractions[at] = encodeFraction(values[c], meaning.transfer[c], max);
      codes[at] = Number.isNaN(values[c]) ? 0 : roundCode(fractions[at], meaning.transfer[c]);
    }
  }
  return { fractions, codes, straight };
}
