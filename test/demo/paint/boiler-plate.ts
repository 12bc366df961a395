import type { StraightRaster } from '../../../core/raster/raster.ts';
import { hash } from './chance.ts';
import { layers, noise } from './noise.ts';
import { clamp, mix, smoothstep, wrapped } from './shape.ts';

const SIZE = 256;

/** Plates of half the tile's width and height, every second row shifted by half a plate. */
const PLATE = 128;

/** Distance of rivets from each other and from the seam; their radius. */
const RIVET = { apart: 16, inset: 9, radius: 4 };

/** The boiler of a small engine, packed as glTF 2.0 packs it: red occlusion, green roughness, blue metal. */
export function paintBoilerPlate(): StraightRaster {
  const codes = new Uint8Array(SIZE * SIZE * 3);
  for (let texel = 0; texel < SIZE * SIZE; texel++) {
    const x = (texel % SIZE) + 0.5;
    const y = Math.floor(texel / SIZE) + 0.5;
    codes.set(
      packed(x, y).map((part) => Math.round(255 * clamp(part))),
      texel * 3,
    );
  }
  return { kind: 'straight', extent: { width: SIZE, height: SIZE }, channels: 3, depth: 8, codes };
}

function packed(x: number, y: number): readonly [occlusion: number, roughness: number, metal: number] {
  const { seam, rivet, row, column } = plateAt(x, y);
  const u = x / SIZE;
  const v = y / SIZE;
  const grain = layers({ seed: 601, period: 48, count: 3, gain: 0.7 }, u, v) - 0.5;
  const cloud = layers({ seed: 611, period: 4, count: 5, gain: 0.6 }, u, v);
  // Water runs down from seams and rivets: noise drawn out along y, strongest where it starts.
  const streak = noise(621, 64, u * 64, v * 4) * noise(622, 32, u * 32, v * 3);
  const below = smoothstep(60, 0, wrapped(y, PLATE));
  const rust = smoothstep(0.56, 0.66, cloud + 0.16 * below * streak * 3 + 0.1 * smoothstep(7, 1, seam) + 0.08 * grain);
  const scratch = scratchAt(x, y);
  const occlusion =
    1 -
    0.72 * smoothstep(3.4, 0.6, seam) -
    0.42 * smoothstep(2.6, 0, Math.abs(rivet - RIVET.radius - 1)) -
    0.1 * rust * (0.5 + grain);
  const plate = 0.34 + 0.12 * (hash(631, column, row) - 0.5) + 0.16 * grain + 0.18 * streak;
  const rubbed = rivet < RIVET.radius ? 0.22 + 0.05 * rivet : plate;
  const roughness = mix(mix(rubbed, 0.16, scratch), 0.88 + 0.2 * grain, rust);
  const metal = mix(1, 0.06, rust * (1 - 0.8 * scratch)) * (1 - 0.7 * smoothstep(1.6, 0.4, seam));
  return [occlusion, roughness, metal];
}

/** Distance from the nearest seam and from the middle of the nearest rivet, and which plate this is. */
function plateAt(x: number, y: number): { seam: number; rivet: number; row: number; column: number } {
  const row = Math.floor(y / PLATE);
  const shift = row % 2 === 0 ? 0 : PLATE / 2;
  const px = wrapped(x + shift, PLATE);
  const py = wrapped(y, PLATE);
  const fromX = Math.min(px, PLATE - px);
  const fromY = Math.min(py, PLATE - py);
  const stepX = Math.abs(wrapped(px, RIVET.apart) - RIVET.apart / 2);
  const stepY = Math.abs(wrapped(py, RIVET.apart) - RIVET.apart / 2);
  const alongTop = length(stepX, fromY - RIVET.inset);
  const alongSide = length(stepY, fromX - RIVET.inset);
  return {
    seam: Math.min(fromX, fromY),
    rivet: Math.min(alongTop, alongSide),
    row,
    column: Math.floor(wrapped(x + shift, SIZE) / PLATE),
  };
}

/** 1 in a scratch, 0 beside it: short straight scores, a few in each square of 32 texels. */
function scratchAt(x: number, y: number): number {
  let worst = 0;
  for (let score = 0; score < 26; score++) {
    const sx = hash(641, score) * SIZE;
    const sy = hash(642, score) * SIZE;
    const slope = hash(643, score) - 0.5;
    const long = 10 + 26 * hash(644, score);
    const dx = wrapped(x - sx + SIZE / 2, SIZE) - SIZE / 2;
    const dy = wrapped(y - sy + SIZE / 2, SIZE) - SIZE / 2;
    const off = Math.abs(dy - slope * dx);
    worst = Math.max(worst, smoothstep(1.1, 0.2, off) * smoothstep(long, long * 0.5, Math.abs(dx)));
  }
  return worst;
}

function length(x: number, y: number): number {
  return Math.sqrt(x * x + y * y);
}
