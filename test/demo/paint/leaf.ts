import { hash } from './chance.ts';
import { clamp, smoothstep } from './shape.ts';

/** A point of a leaf blade. */
export interface Blade {
  /** Light, 0..1, for a ramp. */
  readonly tone: number;
  /** Nearness to the rim, 1 at it. */
  readonly rim: number;
}

const TEETH = 9;
const VEINS = 7;

/** The blade of an alder leaf at a point, or null beside it. `along` runs 0..1 from stalk to tip, `across` is in leaf
 *  lengths; the half with across < 0 faces the light. */
export function bladeAt(along: number, across: number, seed: number): Blade | null {
  if (along <= 0 || along >= 1) return null;
  const side = across < 0 ? 0 : 1;
  const width = halfWidth(along) * toothed(along, side, seed);
  const out = Math.abs(across) / width;
  if (out >= 1 || isEaten(along, across, seed)) return null;
  const vein = fraction((along - Math.abs(across) * 0.95) * VEINS + side * 0.45);
  const nearVein = Math.min(vein, 1 - vein);
  const rib = smoothstep(0.022, 0.006, Math.abs(across)) * (1 - along * 0.6);
  const ribs = smoothstep(0.13, 0.02, nearVein) * smoothstep(1, 0.7, out);
  // Between two veins the blade swells; the slope toward the light is the brighter one.
  const swell = (side === 0 ? vein - 0.5 : 0.5 - vein) * 0.26;
  const half = side === 0 ? 0.64 : 0.38;
  const tone = half + swell + 0.16 * (along - 0.4) + 0.24 * ribs + 0.45 * rib - 0.2 * smoothstep(0.2, 0, along);
  return { tone: clamp(tone), rim: smoothstep(0.72, 1, out) };
}

/** Round at the stalk, pointed at the tip, widest at a third. */
function halfWidth(along: number): number {
  return 0.88 * Math.sqrt(along) * (1 - along) * (1.12 - 0.3 * along);
}

/** Teeth that lean to the tip: each swells slowly and breaks off, with a small one on its back. */
function toothed(along: number, side: number, seed: number): number {
  const at = along * TEETH + side * 0.5 + hash(seed, side) * 0.4;
  const depth = 0.16 + 0.12 * hash(seed + 1, Math.floor(at), side);
  return 1 - depth * (1 - fraction(at)) - 0.06 * (1 - fraction(at * 3));
}

/** Where a caterpillar has been. */
function isEaten(along: number, across: number, seed: number): boolean {
  for (let hole = 0; hole < 3; hole++) {
    if (hash(seed + 2, hole) > 0.5) continue;
    const dx = along - 0.2 - 0.6 * hash(seed + 3, hole);
    const dy = across - 0.36 * (hash(seed + 4, hole) - 0.5);
    const radius = 0.02 + 0.035 * hash(seed + 5, hole);
    if (dx * dx * 0.6 + dy * dy < radius * radius) return true;
  }
  return false;
}

function fraction(x: number): number {
  return x - Math.floor(x);
}
