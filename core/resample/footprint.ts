import type { Extent } from '../raster/raster.ts';

/** The source texels that each target texel of one axis covers, with integer overlaps: source texel first + k shares
 *  overlap[start + k] of `from` parts of target texel j.
 *
 *    first[j] .. first[j] + count[j] - 1   source texels, all inside 0..from-1
 *    overlap[start[j] + k]                 integers that sum to `from`
 */
export interface Footprints {
  readonly from: number;
  readonly to: number;
  readonly first: Int32Array;
  readonly count: Int32Array;
  readonly start: Int32Array;
  readonly overlap: Float64Array;
}

/** Footprints of `to` texels on `from`, with to <= from. */
export function buildFootprints(from: number, to: number): Footprints {
  const first = new Int32Array(to);
  const count = new Int32Array(to);
  const start = new Int32Array(to);
  const overlap: number[] = [];
  for (let j = 0; j < to; j++) {
    first[j] = Math.floor((j * from) / to);
    start[j] = overlap.length;
    for (let i = first[j]; i * to < (j + 1) * from; i++) {
      overlap.push(Math.min((i + 1) * to, (j + 1) * from) - Math.max(i * to, j * from));
    }
    count[j] = overlap.length - start[j];
  }
  return { from, to, first, count, start, overlap: Float64Array.from(overlap) };
}

/** Throws RangeError where the target is larger than the source on an axis, or has none at all. */
export function checkSmaller(source: Extent, target: Extent): void {
  for (const axis of ['width', 'height'] as const) {
    if (Number.isInteger(target[axis]) && target[axis] >= 1 && target[axis] <= source[axis]) continue;
    throw new RangeError(`Expected integer 1..${source[axis]} for target.${axis} but received ${target[axis]}`);
  }
}
