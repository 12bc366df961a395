import type { Codes, Extent } from '../../core/raster/raster.ts';
import { areaTaps } from './axis.ts';

/** Index of the source texel whose color has the most overlap with target texel (jx, jy). Texels of alpha 0 vote as one.
 *  A tie goes to the tied color nearest the target's center, then to the lowest RGBA read as an integer. */
export function majorityTexel(
  source: { readonly extent: Extent; readonly channels: number; readonly codes: Codes },
  target: Extent,
  jx: number,
  jy: number,
): number {
  const { extent, channels, codes } = source;
  const hasAlpha = channels % 2 === 0;
  const votes = new Map<string, { overlap: number; distance: number; texel: number; number: number }>();
  for (const down of areaTaps(extent.height, target.height, jy)) {
    for (const across of areaTaps(extent.width, target.width, jx)) {
      const texel = down.index * extent.width + across.index;
      const color = Array.from(codes.subarray(texel * channels, (texel + 1) * channels));
      const key = hasAlpha && color[channels - 1] === 0 ? 'clear' : color.join();
      // Overlaps as integers, so that equal shares tie exactly.
      const overlap = Math.round(down.weight * extent.height) * Math.round(across.weight * extent.width);
      const dx = ((2 * across.index + 1) * target.width - (2 * jx + 1) * extent.width) / (2 * target.width);
      const dy = ((2 * down.index + 1) * target.height - (2 * jy + 1) * extent.height) / (2 * target.height);
      const distance = dx * dx + dy * dy;
      const number = color.reduce((sum, code) => sum * 65536 + code, 0);
      const seen = votes.get(key);
      if (seen === undefined) votes.set(key, { overlap, distance, texel, number });
      else {
        seen.overlap += overlap;
        const nearer = distance < seen.distance - 1e-9;
        const level = Math.abs(distance - seen.distance) <= 1e-9;
        if (nearer || (level && number < seen.number)) Object.assign(seen, { distance, texel, number });
      }
    }
  }
  const ranked = [...votes.values()].sort(
    (a, b) =>
      b.overlap - a.overlap ||
      (Math.abs(a.distance - b.distance) > 1e-9 ? a.distance - b.distance : 0) ||
      a.number - b.number,
  );
  return ranked[0].texel;
}
