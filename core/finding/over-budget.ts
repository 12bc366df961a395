import { layoutKtx2 } from '../codec/ktx2/format.ts';
import type { Manifest } from '../manifest/manifest.ts';
import { finding, type Problem } from '../problem.ts';
import { type GpuFormat, gpuBytes, gpuFormats } from '../raster/gpu-format.ts';
import type { ChannelCount, Depth } from '../raster/raster.ts';

/** Bytes that the chain takes on the GPU, against the budget that its settings give it; `null` within it or without one.
 *  Targets are no part of the chain. */
export function overBudget(manifest: Manifest): Problem | null {
  const limit = manifest.settings.limits.overBudget;
  if (limit === null) return null;
  const format =
    limit.format === 'written' ? writtenFormat(manifest) : gpuFormats[limit.format as keyof typeof gpuFormats];
  if (format === undefined) return null;
  const levels = manifest.levels.filter((level) => level.use === 'image');
  const bytes = gpuBytes(
    levels.map((level) => level.extent),
    format,
  );
  if (bytes <= limit.bytes) return null;
  return finding('over-budget', { bytes, format: limit.format, budget: limit.bytes });
}

/** The texel of the texture's KTX2, whether one is written or not. */
function writtenFormat({ settings, sources }: Manifest): GpuFormat {
  const source = sources.find((each) => each.use === 'image') ?? sources[0];
  const first = Object.entries(settings.channels ?? {}).find(([letters]) => letters.startsWith('r'))?.[1];
  const { format } = layoutKtx2({
    content: settings.channels === null ? settings.content : first === 'color' ? 'color' : 'data',
    channels: source.channels as ChannelCount,
    depth: settings.depth === 'same' ? (source.depth as Depth) : settings.depth,
    transfer: typeof settings.transfer === 'string' ? settings.transfer : settings.transfer[0],
    alpha: settings.alpha.use,
    normalCount: settings.normal.count,
    format: settings.ktx2.format,
  });
  return { width: 1, height: 1, bytes: (format.channels * format.depth) / 8 };
}
