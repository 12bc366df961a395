import { findKernel } from '../../../core/kernel/table.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import type { KernelChoice } from '../../../core/treatment/treatment.ts';
import type { Stop } from '../state/scale.ts';

/** What a kernel would have to do here and cannot; null where it can make the image from the source. */
export function unfitFor(choice: KernelChoice, stop: Stop | null, base: Extent): 'minify' | 'magnify' | null {
  const kernel = findKernel(choice.name);
  if (kernel === undefined || stop === null || 'level' in stop.image)
    return kernel?.minifies === false ? 'minify' : null;
  const shrinks = stop.lod > 0 || (stop.lod === 0 && stop.extent.width < base.width);
  if (stop.lod < 0 && !kernel.magnifies) return 'magnify';
  return shrinks && !kernel.minifies ? 'minify' : null;
}
