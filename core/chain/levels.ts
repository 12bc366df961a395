import type { Extent } from '../raster/raster.ts';
import type { Target } from '../treatment/treatment.ts';

/** Extent of a level: floor(n / 2^level) per axis, at least 1.  [Vulkan, Image Mip Level Sizing] */
export function levelExtent(base: Extent, level: number): Extent {
  return { width: Math.max(1, base.width >> level), height: Math.max(1, base.height >> level) };
}

/** Levels of a full chain, the base included: floor(log2(max(width, height))) + 1.  [KTX2, levelCount] */
export function levelCount(base: Extent): number {
  return 32 - Math.clz32(Math.max(base.width, base.height));
}

/** Extent that scale `s` gives: max(1, floor(s n + 1/2)) per axis. */
export function scaledExtent(base: Extent, scale: number): Extent {
  const of = (texels: number): number => Math.max(1, Math.floor(scale * texels + 0.5));
  return { width: of(base.width), height: of(base.height) };
}

/** Where the picture stands in the target, and the target's whole extent. They differ for cells alone. */
export interface TargetPlace {
  readonly whole: Extent;
  readonly picture: Extent;
  readonly left: number;
  readonly top: number;
}

export function targetPlace(base: Extent, target: Target): TargetPlace {
  if ('scale' in target) return filling(scaledExtent(base, target.scale));
  if ('extent' in target) return filling({ width: target.extent[0], height: target.extent[1] });
  const [width, height] = target.cell;
  const picture = scaledExtent(base, Math.min(width / base.width, height / base.height));
  return {
    whole: { width, height },
    picture,
    left: Math.floor((width - picture.width) / 2),
    top: Math.floor((height - picture.height) / 2),
  };
}

function filling(extent: Extent): TargetPlace {
  return { whole: extent, picture: extent, left: 0, top: 0 };
}
