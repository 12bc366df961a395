import type { StraightRaster } from '../../../core/raster/raster.ts';
import { layers } from './noise.ts';
import { clamp, mix, smoothstep, toSegment } from './shape.ts';

/** Odd on purpose: terrain meshes of 256 quads have 257 corners. */
const SIZE = 257;

/** The railway over the bog, in shares of the map; the track lies on a bank of its own. */
const TRACK = [
  [-0.05, 0.72],
  [0.2, 0.64],
  [0.42, 0.6],
  [0.62, 0.5],
  [0.8, 0.32],
  [1.05, 0.22],
] as const;

const TRACK_HEIGHT = 0.36;

/** The bog and the moor around it, 16 bits: pools that are level, peat in steps, hills with runnels. */
export function paintBogHeight(): StraightRaster {
  const codes = new Uint16Array(SIZE * SIZE);
  for (let texel = 0; texel < SIZE * SIZE; texel++) {
    codes[texel] = Math.round(
      65535 * clamp(heightAt((texel % SIZE) / (SIZE - 1), Math.floor(texel / SIZE) / (SIZE - 1))),
    );
  }
  return { kind: 'straight', extent: { width: SIZE, height: SIZE }, channels: 1, depth: 16, codes };
}

function heightAt(u: number, v: number): number {
  // Read off the torus by less than its whole width, so that the map has no repeat of its own.
  const s = u * 0.7 + 0.06 * (layers({ seed: 701, period: 5, count: 3 }, u * 0.7, v * 0.7) - 0.5);
  const t = v * 0.7 + 0.06 * (layers({ seed: 705, period: 5, count: 3 }, u * 0.7, v * 0.7) - 0.5);
  const broad = layers({ seed: 711, period: 4, count: 6, gain: 0.48 }, s, t);
  const ridge = 1 - Math.abs(2 * layers({ seed: 721, period: 7, count: 5, gain: 0.5 }, s, t) - 1);
  const moor = smoothstep(0.9, 0.1, v + 0.35 * (broad - 0.5) - 0.25 * (u - 0.5));
  const hills = 0.22 + 0.5 * broad * (0.45 + moor) + 0.34 * moor * ridge * ridge * ridge;
  const peat = 0.3 + stepped((broad - 0.36) * 9) / 22 + 0.012 * ridge;
  const land = mix(peat, hills, smoothstep(0.28, 0.7, moor));
  const pool = smoothstep(0.47, 0.4, layers({ seed: 731, period: 9, count: 3 }, s, t)) * (1 - moor);
  const wet = mix(land, 0.245, smoothstep(0.25, 0.75, pool));
  return embanked(wet, u, v);
}

/** Steps with rounded edges: peat that was cut and has slumped. */
function stepped(x: number): number {
  const whole = Math.floor(x);
  return whole + smoothstep(0.32, 0.68, x - whole);
}

/** Land cut and filled toward the track's bed, steeply at its shoulders. */
function embanked(land: number, u: number, v: number): number {
  let nearest = Number.POSITIVE_INFINITY;
  for (let part = 1; part < TRACK.length; part++) {
    nearest = Math.min(nearest, toSegment([u, v], TRACK[part - 1], TRACK[part]).distance);
  }
  return mix(land, TRACK_HEIGHT, smoothstep(0.034, 0.013, nearest));
}
