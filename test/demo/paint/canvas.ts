import type { StraightRaster } from '../../../core/raster/raster.ts';
import { hash } from './chance.ts';
import type { Color } from './color.ts';
import { clamp, wrapped } from './shape.ts';

/** A square of paint that closes on itself: what runs off one edge comes in at the other. */
export interface Canvas {
  /** Edge in texels. */
  readonly size: number;
  /** RGB codes, not rounded, row by row. */
  readonly paint: Float64Array;
}

/** One touch of the brush. Lengths in texels; `along` is a unit vector. */
export interface Dab {
  readonly x: number;
  readonly y: number;
  readonly along: readonly [number, number];
  readonly halfLength: number;
  readonly halfWidth: number;
  readonly color: Color;
  /** 0..1. */
  readonly opacity: number;
  /** Which bristles carry paint. */
  readonly seed: number;
}

/** Share of the paint that a bristle may lack. */
const BRISTLE_GAP = 0.45;

export function newCanvas(size: number, color: (x: number, y: number) => Color): Canvas {
  const paint = new Float64Array(size * size * 3);
  for (let texel = 0; texel < size * size; texel++) {
    paint.set(color(texel % size, Math.floor(texel / size)), texel * 3);
  }
  return { size, paint };
}

export function dab({ size, paint }: Canvas, touch: Dab): void {
  const { along, halfLength, halfWidth, color, opacity } = touch;
  const reach = Math.ceil(Math.max(halfLength, halfWidth)) + 1;
  const left = Math.floor(touch.x);
  const top = Math.floor(touch.y);
  for (let y = top - reach; y <= top + reach; y++) {
    for (let x = left - reach; x <= left + reach; x++) {
      const dx = x + 0.5 - touch.x;
      const dy = y + 0.5 - touch.y;
      const u = (dx * along[0] + dy * along[1]) / halfLength;
      const v = (dy * along[0] - dx * along[1]) / halfWidth;
      const far = u * u + v * v;
      if (far >= 1) continue;
      const bristle = 1 - BRISTLE_GAP * hash(touch.seed, Math.round(v * halfWidth));
      const cover = opacity * Math.min(1, (1 - far) * 2.2) * bristle;
      const at = (wrapped(y, size) * size + wrapped(x, size)) * 3;
      for (let channel = 0; channel < 3; channel++)
        paint[at + channel] += (color[channel] - paint[at + channel]) * cover;
    }
  }
}

export function toRaster({ size, paint }: Canvas): StraightRaster {
  return {
    kind: 'straight',
    extent: { width: size, height: size },
    channels: 3,
    depth: 8,
    codes: Uint8Array.from(paint, (code) => Math.round(clamp(code, 0, 255))),
  };
}
