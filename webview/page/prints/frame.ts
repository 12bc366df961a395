import type { Extent } from '../../../core/raster/raster.ts';

/** Where a picture lies in a frame of device pixels: one texel is `zoom` pixels, texel (0, 0) starts at (left, top). */
export interface Placement {
  readonly zoom: number;
  readonly left: number;
  readonly top: number;
}

/** Zooms that there are, in device pixels a texel. */
export const ZOOMS = [1, 2, 3, 4, 6, 8, 12, 16, 24, 32, 48, 64] as const;

/** The largest zoom at which the picture fits the frame, at least 1. */
export function fittingZoom(picture: Extent, frame: Extent): number {
  const room = Math.min(frame.width / picture.width, frame.height / picture.height);
  let best = 1;
  for (const zoom of ZOOMS) if (zoom <= room) best = zoom;
  return best;
}

/** A picture that fits is centered; a larger one shows the texel at `pan` in the middle, and no void at its edges. */
export function place(picture: Extent, frame: Extent, zoom: number, pan: { x: number; y: number }): Placement {
  return {
    zoom,
    left: startOf(picture.width * zoom, frame.width, pan.x),
    top: startOf(picture.height * zoom, frame.height, pan.y),
  };
}

function startOf(length: number, room: number, middle: number): number {
  if (length <= room) return Math.floor((room - length) / 2);
  return Math.min(0, Math.max(room - length, Math.round(room / 2 - middle * length)));
}

/** Texels of an axis that a frame shows: from `first` on, `count` of them, of 0..texels - 1 or, for tiles, of the same run on
 *  and on. */
export interface Span {
  readonly first: number;
  readonly count: number;
}

export function visibleSpan(start: number, zoom: number, room: number, low: number, high: number): Span {
  const first = Math.max(low, Math.floor(-start / zoom));
  const end = Math.min(high, Math.ceil((room - start) / zoom));
  return { first, count: Math.max(0, end - first) };
}
