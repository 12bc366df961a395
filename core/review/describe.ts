import { channelsOf } from './form.ts';
import type { SideFigures } from './review.ts';

/** `256x256 RGBA, 8 bits`. */
export function describeFile({ extent, channels, depth, palette }: FileForm): string {
  const form = palette === null ? channelsOf({ channels }) : `${palette} palette colors`;
  return `${extent.width}x${extent.height} ${form}, ${depth} bits`;
}

export type FileForm = Pick<SideFigures, 'extent' | 'channels' | 'depth' | 'palette'>;
