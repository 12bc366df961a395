/** Monotone cubic at target texel j: Hermite form between the two nearest centers, tangents from the harmonic mean of the
 *  secants, 0 where they differ in sign (Fritsch and Butland 1984, uniform spacing). */
export function slopeRow(read: (i: number) => number, from: number, to: number, j: number): number {
  const u = ((2 * j + 1) * from - to) / (2 * to);
  const i = Math.floor(u);
  const t = u - i;
  const left = read(i);
  const right = read(i + 1);
  const m0 = tangent(read, i);
  const m1 = tangent(read, i + 1);
  return (
    (2 * t ** 3 - 3 * t ** 2 + 1) * left +
    (t ** 3 - 2 * t ** 2 + t) * m0 +
    (3 * t ** 2 - 2 * t ** 3) * right +
    (t ** 3 - t ** 2) * m1
  );
}

function tangent(read: (i: number) => number, i: number): number {
  const before = read(i) - read(i - 1);
  const after = read(i + 1) - read(i);
  return before * after <= 0 ? 0 : (2 * before * after) / (before + after);
}
