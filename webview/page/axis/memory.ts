import type { Extent } from '../../../core/raster/raster.ts';
import type { Model } from '../state/model.ts';

/** Bytes of the codes of an image, without a file around them. */
export function memoryOf(model: Model, { width, height }: Extent): number {
  const depth = model.treatment!.depth === 'same' ? model.header!.depth : model.treatment!.depth;
  return (width * height * model.header!.channels * depth) / 8;
}
