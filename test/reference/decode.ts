import { maxCode, type StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { type Doubles, doubles } from './doubles.ts';
import type { Meaning } from './meaning.ts';
import { decodeNormal } from './normal.ts';
import { decodeSrgb } from './transfer.ts';

/** What is filtered: light (or codes as fractions), premultiplied where weighted, unit normals. A rebuilt z is an added
 *  last channel. */
export function decodeRaster(raster: StraightRaster, meaning: Meaning, light: Treatment['light']): Doubles {
  const { extent, channels, codes } = raster;
  const max = maxCode(raster.depth);
  const rebuilt = meaning.normals.filter((normal) => normal.z === null).length;
  const result = doubles(extent.width, extent.height, channels + rebuilt);
  for (let texel = 0; texel < extent.width * extent.height; texel++) {
    const values = Array.from({ length: channels + rebuilt }, (_, c) => {
      if (c >= channels) return 0;
      const fraction = codes[texel * channels + c] / max;
      return meaning.transfer[c] === 'srgb' && light === 'linear' ? decodeSrgb(fraction) : fraction;
    });
    for (const { x, y, z } of meaning.normals) {
      const normal = decodeNormal(values[x], values[y], z === null ? null : values[z]);
      [values[x], values[y], values[z ?? channels]] = normal;
    }
    for (const c of weightedWithZ(meaning, channels)) values[c] *= values[meaning.alpha ?? 0];
    result.values.set(values, texel * result.channels);
  }
  return result;
}

/** Weighted channels; a rebuilt z goes with its x and y. */
export function weightedWithZ(meaning: Meaning, channels: number): number[] {
  const added = meaning.normals.some((normal) => normal.z === null && meaning.weighted.includes(normal.x));
  return added ? [...meaning.weighted, channels] : [...meaning.weighted];
}
