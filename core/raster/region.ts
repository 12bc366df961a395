import { type Extent, type IndexedRaster, newCodes, type StraightRaster } from './raster.ts';

type Cuttable = StraightRaster | IndexedRaster;

/** A copy of the texels from (left, top) on. The region must lie inside; RangeError otherwise. */
export function cutRegion<R extends Cuttable>(raster: R, left: number, top: number, extent: Extent): R {
  if (left < 0 || top < 0 || left + extent.width > raster.extent.width || top + extent.height > raster.extent.height) {
    const whole = `${raster.extent.width}x${raster.extent.height}`;
    throw new RangeError(
      `Expected a region inside ${whole} but received ${extent.width}x${extent.height} at ${left},${top}`,
    );
  }
  const out = blankLike(raster, extent);
  copyRows(windowOf(raster, left, top), windowOf(out, 0, 0), extent);
  return out;
}

/** Writes `part` into `raster`, its first texel at (left, top). Both have the same channels and depth. */
export function pasteRegion<R extends Cuttable>(raster: R, part: R, left: number, top: number): void {
  copyRows(windowOf(part, 0, 0), windowOf(raster, left, top), part.extent);
}

/** A zeroed raster of the same kind, channels, depth and palette. */
export function blankLike<R extends Cuttable>(raster: R, extent: Extent): R {
  const texels = extent.width * extent.height;
  return raster.kind === 'indexed'
    ? { ...raster, extent, indices: new Uint8Array(texels) }
    : { ...raster, extent, codes: newCodes(raster.depth, texels * raster.channels) };
}

/** Samples seen from a texel on. */
interface Window {
  readonly samples: Uint8Array | Uint16Array;
  readonly channels: number;
  readonly start: number;
  /** Samples from one row to the next. */
  readonly stride: number;
}

function windowOf(raster: Cuttable, left: number, top: number): Window {
  const samples = raster.kind === 'indexed' ? raster.indices : raster.codes;
  const channels = raster.kind === 'indexed' ? 1 : raster.channels;
  const stride = raster.extent.width * channels;
  return { samples, channels, start: top * stride + left * channels, stride };
}

function copyRows(from: Window, to: Window, extent: Extent): void {
  const length = extent.width * from.channels;
  for (let y = 0; y < extent.height; y++) {
    const source = from.start + y * from.stride;
    to.samples.set(from.samples.subarray(source, source + length), to.start + y * to.stride);
  }
}
