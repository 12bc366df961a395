import { channelsOf } from './form.ts';
import type { SideFigures } from './review.ts';

/** `256x256 RGBA, 8 bits`. */
export function describeFile({ extent, channels, depth, palette }: FileForm): string {
  const form = palette === null ? channelsOf({ channels }) : `${palette} palette colors`;
  return `${extent.width}x${extent.height} ${form}, ${depth} bits`;
}

export type FileForm = Pick<SideFigures, 'extent' | 'channels' | 'depth' | 'palette'>;

/** `812 bytes`, `1.2 KiB`, `3.4 MiB`. */
export function sayBytes(bytes: number): string {
  if (Math.abs(bytes) < 1024) return `${bytes} bytes`;
  const isSmall = Math.abs(bytes) < 1024 * 1024;
  const unit = isSmall ? 1024 : 1024 * 1024;
  return `${Math.round((bytes / unit) * 10) / 10} ${isSmall ? 'KiB' : 'MiB'}`;
}
