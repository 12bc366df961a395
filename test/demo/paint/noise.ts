import { hash } from './chance.ts';
import { mix, wrapped } from './shape.ts';

/** Smooth noise 0..1 over a lattice of `period` cells that closes on itself; x and y in cells. */
export function noise(seed: number, period: number, x: number, y: number): number {
  const x0 = Math.floor(x);
  const y0 = Math.floor(y);
  const corner = (dx: number, dy: number): number => hash(seed, wrapped(x0 + dx, period), wrapped(y0 + dy, period));
  const tx = ease(x - x0);
  const ty = ease(y - y0);
  return mix(mix(corner(0, 0), corner(1, 0), tx), mix(corner(0, 1), corner(1, 1), tx), ty);
}

/** Layers of noise, each at twice the frequency and `gain` times the height of the one before; 0..1, closes on itself.
 *  u and v are 0..1 over the tile; the first layer has `period` cells. */
export function layers(
  { seed, period, count, gain = 0.5 }: { seed: number; period: number; count: number; gain?: number },
  u: number,
  v: number,
): number {
  let sum = 0;
  let total = 0;
  let height = 1;
  for (let layer = 0; layer < count; layer++) {
    const cells = period * 2 ** layer;
    sum += height * noise(seed + layer, cells, u * cells, v * cells);
    total += height;
    height *= gain;
  }
  return sum / total;
}

/** First and second derivative are 0 at both ends, so the lattice does not show in shading. */
function ease(t: number): number {
  return t * t * t * (t * (t * 6 - 15) + 10);
}
