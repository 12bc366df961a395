import type { Wrap } from '../../core/kernel/wrap.ts';
import { areaTaps } from './axis.ts';
import { type Doubles, doubles } from './doubles.ts';
import { wrapIndex } from './wrap.ts';

/** Bounds of the next level from bounds of this one: every texel with a box weight and one more on each side; a border
 *  reads 0. */
export function nextBounds(
  image: Doubles,
  extent: { readonly width: number; readonly height: number },
  wrap: { readonly x: Wrap; readonly y: Wrap },
  pick: (a: number, b: number) => number,
): Doubles {
  const result = doubles(extent.width, extent.height, image.channels);
  const columns = reach(image.width, extent.width, wrap.x);
  const rows = reach(image.height, extent.height, wrap.y);
  for (let y = 0; y < extent.height; y++) {
    for (let x = 0; x < extent.width; x++) {
      for (let c = 0; c < image.channels; c++) {
        const met = rows[y].flatMap((v) =>
          columns[x].map((u) =>
            u === null || v === null ? 0 : image.values[(v * image.width + u) * image.channels + c],
          ),
        );
        result.values[(y * extent.width + x) * image.channels + c] = met.reduce((a, b) => pick(a, b));
      }
    }
  }
  return result;
}

function reach(from: number, to: number, wrap: Wrap): (number | null)[][] {
  return Array.from({ length: to }, (_, j) => {
    const inside = areaTaps(from, to, j).map((tap) => tap.index);
    const all = [inside[0] - 1, ...inside, inside[inside.length - 1] + 1];
    return all.map((i) => wrapIndex(i, from, wrap));
  });
}
