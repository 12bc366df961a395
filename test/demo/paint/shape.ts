// Shaping functions of plain arithmetic: no engine rounds them differently.

export function clamp(x: number, low = 0, high = 1): number {
  return Math.min(high, Math.max(low, x));
}

export function mix(a: number, b: number, t: number): number {
  return a + (b - a) * t;
}

/** 0 below `low`, 1 above `high`, smooth between; `low` may be the larger of the two. */
export function smoothstep(low: number, high: number, x: number): number {
  const t = clamp((x - low) / (high - low));
  return t * t * (3 - 2 * t);
}

/** The smaller of two, with the corner rounded over a width of `k`. */
export function smoothMin(a: number, b: number, k: number): number {
  const h = Math.max(k - Math.abs(a - b), 0) / k;
  return Math.min(a, b) - (h * h * k) / 4;
}

/** x modulo n, 0..n also for negative x. */
export function wrapped(x: number, n: number): number {
  return ((x % n) + n) % n;
}

/** Distance of a point from a segment, and how far along it the nearest point lies, 0..1. */
export function toSegment(
  [x, y]: readonly [number, number],
  [ax, ay]: readonly [number, number],
  [bx, by]: readonly [number, number],
): { distance: number; along: number } {
  const dx = bx - ax;
  const dy = by - ay;
  const along = clamp(((x - ax) * dx + (y - ay) * dy) / (dx * dx + dy * dy));
  const ex = x - ax - dx * along;
  const ey = y - ay - dy * along;
  return { distance: Math.sqrt(ex * ex + ey * ey), along };
}
