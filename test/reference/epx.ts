import type { Extent } from '../../core/raster/raster.ts';

/** Scale2x rules (Mazzoleni 2001), which equal EPX with its rule of three: the source texel that each of the four takes.
 *  `same` compares two texels by index; edge texels are repeated. */
export function scale2x(extent: Extent, same: (a: number, b: number) => boolean): Uint32Array {
  const { width, height } = extent;
  const result = new Uint32Array(width * height * 4);
  const at = (x: number, y: number): number =>
    Math.min(height - 1, Math.max(0, y)) * width + Math.min(width - 1, Math.max(0, x));
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const [b, d, e, f, h] = [at(x, y - 1), at(x - 1, y), at(x, y), at(x + 1, y), at(x, y + 1)];
      const flat = same(b, h) || same(d, f);
      const corner = (one: number, other: number): number => (!flat && same(one, other) ? one : e);
      const left = 2 * y * width * 2 + 2 * x;
      result[left] = corner(d, b);
      result[left + 1] = corner(f, b);
      result[left + width * 2] = corner(d, h);
      result[left + width * 2 + 1] = corner(f, h);
    }
  }
  return result;
}
