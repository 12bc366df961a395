// The Fritsch-Butland cubic for samples at any places, in double precision: the published data is unevenly spaced, the
// product's own texels never are. Fritsch and Butland 1984: tangent 0 where the secants differ in sign, else
// 3 (h0 + h1) / ((2 h1 + h0) / d0 + (h1 + 2 h0) / d1).

/** Tangents at all samples but the first and the last. */
export function interiorTangents(x: readonly number[], y: readonly number[]): number[] {
  return x.slice(1, -1).map((_, k) => {
    const [h0, h1] = [x[k + 1] - x[k], x[k + 2] - x[k + 1]];
    const [d0, d1] = [(y[k + 1] - y[k]) / h0, (y[k + 2] - y[k + 1]) / h1];
    return d0 * d1 <= 0 ? 0 : (3 * (h0 + h1)) / ((2 * h1 + h0) / d0 + (h1 + 2 * h0) / d1);
  });
}

/** The curve at a place between the second sample and the last but one. */
export function interpolate(x: readonly number[], y: readonly number[], at: number): number {
  const tangents = interiorTangents(x, y);
  const k = x.findIndex((place) => place > at) - 1;
  const h = x[k + 1] - x[k];
  const t = (at - x[k]) / h;
  return (
    (1 + 2 * t) * (1 - t) ** 2 * y[k] +
    t * (1 - t) ** 2 * h * tangents[k - 1] +
    t ** 2 * (3 - 2 * t) * y[k + 1] +
    t ** 2 * (t - 1) * h * tangents[k]
  );
}
