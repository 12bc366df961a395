import type { Wrap } from '../../core/kernel/wrap.ts';
import type { Extent } from '../../core/raster/raster.ts';
import type { KernelChoice } from '../../core/treatment/treatment.ts';
import { weighAxis } from './axis.ts';
import { type Doubles, doubles, transposed } from './doubles.ts';
import { slopeRow } from './monotone.ts';
import { wrapIndex } from './wrap.ts';

export interface Kernels {
  readonly minify: KernelChoice;
  readonly magnify: KernelChoice;
}

/** One resample, x before y. An axis of equal extents is copied. */
export function resampleDoubles(
  image: Doubles,
  extent: Extent,
  kernels: Kernels,
  wrap: { readonly x: Wrap; readonly y: Wrap },
): Doubles {
  const wide = resampleRows(image, extent.width, kernels, wrap.x);
  return transposed(resampleRows(transposed(wide), extent.height, kernels, wrap.y));
}

function resampleRows(image: Doubles, to: number, kernels: Kernels, wrap: Wrap): Doubles {
  if (image.width === to) return image;
  const kernel = to < image.width ? kernels.minify : kernels.magnify;
  const result = doubles(to, image.height, image.channels);
  const taps = kernel.name === 'monotone' ? null : weighAxis(kernel, image.width, to);
  for (let y = 0; y < image.height; y++) {
    for (let c = 0; c < image.channels; c++) {
      const read = (i: number): number => {
        const x = wrapIndex(i, image.width, wrap);
        return x === null ? 0 : image.values[(y * image.width + x) * image.channels + c];
      };
      for (let j = 0; j < to; j++) {
        const value =
          taps === null
            ? slopeRow(read, image.width, to, j)
            : taps[j].reduce((sum, tap) => sum + tap.weight * read(tap.index), 0);
        result.values[(y * to + j) * image.channels + c] = value;
      }
    }
  }
  return result;
}
