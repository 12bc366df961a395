import { maxCode, type StraightRaster } from '../../core/raster/raster.ts';
import { type Doubles, doubles } from './doubles.ts';
import type { Meaning } from './meaning.ts';
import { decodeNormal } from './normal.ts';
import { decodeSrgb } from './transfer.ts';

/** What is filtered: light, premultiplied where weighted; unit normals -1..1; roughness as alpha squared, r^4. A normal's
 *  added z is the last channel. */
export function decodeRaster(raster: StraightRaster, meaning: Meaning): Doubles {
  const { extent, channels, codes } = raster;
  const max = maxCode(raster.depth);
  const { normal, alpha } = meaning;
  const result = doubles(extent.width, extent.height, Math.max(channels, (normal?.z ?? 0) + 1));
  for (let texel = 0; texel < extent.width * extent.height; texel++) {
    const values = Array.from(codes.subarray(texel * channels, (texel + 1) * channels), (code, c) => {
      if (c === meaning.roughness) return (code / max) ** 4;
      return meaning.transfer[c] === 'srgb' ? decodeSrgb(code / max) : code / max;
    });
    if (normal !== null) {
      const { x, y, z, rebuilt } = normal;
      [values[x], values[y], values[z]] = decodeNormal(values[x], values[y], rebuilt ? null : values[z]);
    }
    if (alpha !== null) for (const c of meaning.weighted) values[c] *= values[alpha];
    result.values.set(values, texel * result.channels);
  }
  return result;
}
