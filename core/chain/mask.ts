import { maxCode, type StraightRaster } from '../raster/raster.ts';
import {
  type AlphaPlane,
  type CoverageScale,
  findScale,
  measureCoverage,
  passingCode,
  scaledCode,
  type UnscaledAlpha,
} from './coverage.ts';
import type { ImageInWork } from './image.ts';
import type { ChainPlan } from './plan.ts';

/** Coverage of a stored raster, 0..1. */
export function coverageOf(plan: ChainPlan, raster: StraightRaster): number {
  const { alpha, wrap } = plan.treatment;
  return measureCoverage(alphaPlane(raster, plan.layout.alpha!), passingCode(alpha, raster.depth), wrap);
}

/** Scales alpha, in place, so that the raster covers what `wanted` says; says with which scale. */
export function keepCoverage(
  plan: ChainPlan,
  raster: StraightRaster,
  work: ImageInWork | null,
  wanted: number,
): CoverageScale {
  const { alpha, wrap } = plan.treatment;
  const channel = plan.layout.alpha!;
  const unscaled = work?.alpha ?? storedAlpha(raster, channel);
  const found = findScale(unscaled, raster.depth, passingCode(alpha, raster.depth), wrap, wanted);
  if (found.scale !== 1) {
    for (let i = 0, at = channel; i < unscaled.values.length; i++, at += raster.channels) {
      raster.codes[at] = scaledCode(unscaled.values[i], found.scale, raster.depth);
    }
  }
  return found;
}

function alphaPlane(raster: StraightRaster, channel: number): AlphaPlane {
  const { extent, depth, codes, channels } = raster;
  return { extent, depth, codes, stride: channels, start: channel };
}

function storedAlpha(raster: StraightRaster, channel: number): UnscaledAlpha {
  const scale = 65535 / maxCode(raster.depth);
  const texels = raster.extent.width * raster.extent.height;
  const values = Uint16Array.from({ length: texels }, (_, i) => raster.codes[i * raster.channels + channel] * scale);
  return { extent: raster.extent, values };
}
