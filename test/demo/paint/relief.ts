import { wrapped } from './shape.ts';

/** Heights of a square tile, row by row. */
export interface Relief {
  readonly size: number;
  readonly heights: Float64Array;
}

/** Unit normal of a relief that closes on itself: x right, y down the picture, z toward the eye. `steepness` is the
 *  relief's whole height in texels. */
export function normalAt(
  { size, heights }: Relief,
  steepness: number,
  x: number,
  y: number,
): readonly [number, number, number] {
  const at = (dx: number, dy: number): number => heights[wrapped(y + dy, size) * size + wrapped(x + dx, size)];
  const slopeX = (at(1, 0) - at(-1, 0)) * 0.5 * steepness;
  const slopeY = (at(0, 1) - at(0, -1)) * 0.5 * steepness;
  const length = Math.sqrt(slopeX * slopeX + slopeY * slopeY + 1);
  return [-slopeX / length, -slopeY / length, 1 / length];
}
