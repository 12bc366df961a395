import type { Extent } from '../../core/raster/raster.ts';

/** Every extent of a chain: halves, rounded down, never below one (Vulkan, "Image Mip Level Sizing"). */
export function chainExtents(base: Extent): Extent[] {
  const extents = [base];
  let { width, height } = base;
  while (width > 1 || height > 1) {
    width = Math.max(1, Math.floor(width / 2));
    height = Math.max(1, Math.floor(height / 2));
    extents.push({ width, height });
  }
  return extents;
}

export function scaledExtent(base: Extent, scale: number): Extent {
  return {
    width: Math.max(1, Math.floor(scale * base.width + 0.5)),
    height: Math.max(1, Math.floor(scale * base.height + 0.5)),
  };
}

/** Where a picture scaled to fit a cell lies in it. */
export function cellPlace(
  base: Extent,
  cell: Extent,
): { readonly extent: Extent; readonly x: number; readonly y: number } {
  const extent = scaledExtent(base, Math.min(cell.width / base.width, cell.height / base.height));
  return {
    extent,
    x: Math.floor((cell.width - extent.width) / 2),
    y: Math.floor((cell.height - extent.height) / 2),
  };
}
