import { type Codes, type Depth, maxCode, newCodes } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import type { Doubles } from './doubles.ts';
import type { Meaning } from './meaning.ts';
import { unit } from './normal.ts';
import { encodeFraction, roundCode } from './transfer.ts';

export interface Encoded {
  /** Codes with their fractions, clamped; NaN where colour has no alpha to be divided by. */
  readonly fractions: Float64Array;
  readonly codes: Codes;
  /** Straight values before clamping, in light; NaN as above. */
  readonly straight: Float64Array;
}

/** Stored codes of a filtered level: colour = c / a where a > 0, else black; alpha times `alphaScale`. */
export function encodeDoubles(
  image: Doubles,
  channels: number,
  meaning: Meaning,
  light: Treatment['light'],
  depth: Depth,
  alphaScale: number,
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
    for (const { x, y, z } of meaning.normals) {
      const rebuiltZ = meaning.weighted.includes(x) ? values[channels] / a : values[channels];
      const normal = unit(values[x], values[y], z === null ? rebuiltZ : values[z]).map((v) => (v + 1) / 2);
      [values[x], values[y]] = normal;
      if (z !== null) values[z] = normal[2];
    }
    if (meaning.alpha !== null) values[meaning.alpha] *= alphaScale;
    for (let c = 0; c < channels; c++) {
      const at = texel * channels + c;
      const transfer = light === 'linear' ? meaning.transfer[c] : 'linear';
      straight[at] = values[c];
      fractions[at] = encodeFraction(values[c], transfer, max);
      codes[at] = Number.isNaN(values[c]) ? 0 : roundCode(fractions[at], meaning.transfer[c]);
    }
  }
  return { fractions, codes, straight };
}
