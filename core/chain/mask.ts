import { maxCode, type StraightRaster } from '../raster/raster.ts';
import { type AlphaPlane, measureCoverage, passingCode } from './coverage.ts';
import { type CoverageScale, findScale } from './coverage-scale.ts';
import type { ImageInWork } from './image.ts';
import type { ChainPlan } from './plan.ts';
import { scaledCode, scaledCodes, type UnscaledAlpha } from './scaled-alpha.ts';

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
    const { values } = unscaled;
    const { channels, codes, depth } = raster;
    // Where there are more texels than values, each value is scaled once.
    const stored = values.length > 65536 ? scaledCodes(found.scale, depth) : null;
    for (let i = 0, at = channel; i < values.length; i++, at += channels) {
      codes[at] = stored === null ? scaledCode(values[i], found.scale, depth) : stored[values[i]];
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
