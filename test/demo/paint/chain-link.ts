import type { StraightRaster } from '../../../core/raster/raster.ts';
import { type Color, mixColor, ramp } from './color.ts';
import { layers } from './noise.ts';
import { cutOut } from './samples.ts';
import { clamp, smoothstep, toSegment, wrapped } from './shape.ts';

const SIZE = 128;

/** Distance between two wires, and between a bend and the next below it: openings are 32 texels wide and high. */
const PITCH = 16;

/** Half a wire's thickness: three texels in all. */
const HALF = 1.5;

/** How far the bends of neighbors reach past each other, so that they hook. */
const HOOK = 1.6;

const zinc = ramp('#22272d', '#454f58', '#74818a', '#a7b3b8', '#dfe6e4');
const rust = ramp('#27130d', '#55281a', '#8a4626', '#bb6c35', '#dca263');

interface Wire {
  readonly distance: number;
  /** Signed distance upward, in half thicknesses. */
  readonly lit: number;
  /** Nearness to the eye. */
  readonly front: number;
}

/** A wire fence that tiles both ways: each wire zigzags down the tile and hooks into its neighbors at every bend, in
 *  front of them on its way right and behind them on its way left. */
export function paintChainLink(): StraightRaster {
  return cutOut(SIZE, SIZE, wireAt);
}

function wireAt(x: number, y: number): Color | null {
  const near = Math.floor(x / PITCH);
  let seen: Wire | null = null;
  for (let column = near - 1; column <= near + 1; column++) {
    for (const wire of partsOf(column, x, y)) {
      if (wire.distance < HALF && (seen === null || wire.front > seen.front)) seen = wire;
    }
  }
  if (seen === null) return null;
  const patch = layers({ seed: 501, period: 4, count: 4, gain: 0.6 }, x / SIZE, y / SIZE);
  const grain = layers({ seed: 521, period: 42, count: 2 }, x / SIZE, y / SIZE) - 0.5;
  const tone = clamp(0.86 - 0.55 * Math.abs(seen.lit - 0.4) + 0.3 * grain + 0.09 * seen.front);
  return mixColor(zinc(tone), rust(tone), smoothstep(0.55, 0.66, patch));
}

/** The straight parts of one wire near a height. Neighbors sway against each other, so bends meet bends. */
function partsOf(column: number, x: number, y: number): Wire[] {
  const first = Math.floor(y / PITCH) - 1;
  const middle = (column + 0.5) * PITCH;
  const reach = (PITCH + HOOK) / 2;
  return [0, 1, 2].map((offset) => {
    const step = first + offset;
    const sway = wrapped(step + column, 2) === 0 ? reach : -reach;
    const top = [middle - sway, step * PITCH] as const;
    const bottom = [middle + sway, (step + 1) * PITCH] as const;
    const { distance, along } = toSegment([x, y], top, bottom);
    const above = top[1] + (bottom[1] - top[1]) * along > y ? 1 : -1;
    return { distance, lit: (above * distance) / HALF, front: sway > 0 ? 1 : -1 };
  });
}
