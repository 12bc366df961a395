/** A unit normal from codes as fractions 0..1: v * 2 - 1 (glTF 2.0, normal textures), z rebuilt where there is none. */
export function decodeNormal(x01: number, y01: number, z01: number | null): [number, number, number] {
  const x = x01 * 2 - 1;
  const y = y01 * 2 - 1;
  const z = z01 === null ? Math.sqrt(Math.max(0, 1 - x * x - y * y)) : z01 * 2 - 1;
  return unit(x, y, z);
}

/** The direction of a mean; straight up where it has none. */
export function unit(x: number, y: number, z: number): [number, number, number] {
  const length = Math.hypot(x, y, z);
  return length < 1e-6 ? [0, 0, 1] : [x / length, y / length, z / length];
}

/** Variance of the slopes that a mean of length L lost (Toksvig 2004). */
export function spread(length: number): number {
  const clamped = Math.min(1, Math.max(0, length));
  return (1 - clamped) / clamped;
}

/** Perceptual roughness that takes up the spread: alpha = r^2 (glTF 2.0, appendix B), variances add. */
export function roughen(meanAlphaSquared: number, length: number): number {
  const alphaSquared = Math.min(1, Math.max(0, meanAlphaSquared + 2 * spread(length)));
  return Math.sqrt(Math.sqrt(alphaSquared));
}
