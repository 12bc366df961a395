// Chance that comes out the same everywhere: integer arithmetic alone.

/** A number 0..1 (1 excluded) that depends on nothing but its arguments, which are taken as 32-bit integers. */
export function hash(seed: number, x: number, y = 0): number {
  let h = Math.imul(seed ^ 0x2545f491, 0x9e3779b1) ^ Math.imul(x, 0x85ebca77) ^ Math.imul(y, 0xc2b2ae3d);
  h = Math.imul(h ^ (h >>> 15), 0x2c1b3c6d);
  h = Math.imul(h ^ (h >>> 12), 0x297a2d39);
  return ((h ^ (h >>> 15)) >>> 0) / 2 ** 32;
}

/** A stream of numbers 0..1 (1 excluded). */
export type Chance = () => number;

export function newChance(seed: number): Chance {
  let count = 0;
  return () => hash(seed, count++, 7919);
}

/** A number between two. */
export function between(chance: Chance, low: number, high: number): number {
  return low + (high - low) * chance();
}

/** A unit vector in a direction of chance, evenly spread: a point in the disc, normalised. */
export function direction(chance: Chance): readonly [number, number] {
  for (;;) {
    const x = between(chance, -1, 1);
    const y = between(chance, -1, 1);
    const squared = x * x + y * y;
    if (squared > 0.01 && squared <= 1) return [x / Math.sqrt(squared), y / Math.sqrt(squared)];
  }
}
