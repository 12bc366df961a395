import type { ChainImage } from '../chain/image.ts';
import type { ManifestFile, ManifestImage } from '../manifest/manifest.ts';
import type { PlannedImage } from './outputs.ts';

/** What the manifest says of an image. Measured numbers have 6 significant digits. */
export function describeImage(
  planned: PlannedImage,
  image: Omit<ChainImage, 'use' | 'raster'>,
  pixels: string,
  file: ManifestFile | null,
): ManifestImage {
  const { coverage, coverageScale, light, normalLength, clipped, extent } = image;
  const anyClipped = [...clipped.below, ...clipped.above].some((count) => count > 0);
  return {
    use: planned.use,
    ...(planned.level !== undefined && { level: planned.level }),
    ...(planned.target !== undefined && { target: planned.target }),
    extent: [extent.width, extent.height],
    pixels,
    ...(file !== null && { file }),
    ...(coverage !== undefined && { coverage: shortened(coverage) }),
    ...(coverageScale && {
      coverageScale: {
        scale: shortened(coverageScale.scale),
        residual: shortened(coverageScale.residual),
        tie: coverageScale.tie,
      },
    }),
    ...(light && { luminance: shortened(light.weight > 0 ? light.light / light.weight : 0) }),
    ...(normalLength !== undefined && { normalLength: shortened(normalLength) }),
    ...(anyClipped && { clipped }),
  };
}

function shortened(value: number): number {
  return Number(value.toPrecision(6));
}
