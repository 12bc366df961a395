// The monotone cubic along one axis: a Hermite cubic between the two samples on either side of a target, whose tangents
// are harmonic means of the neighboring differences, or 0 at an extremum. It never leaves the range of those two samples.
// Every operation is rounded to float32. [FritschButland84, uniform spacing; FritschCarlson80 shows that it is monotone]

/** Where the targets of an axis lie between the source samples, and the Hermite weights there. A target reads the samples
 *  left[j] - 1 .. left[j] + 2, unwrapped. */
export interface Slopes {
  readonly from: number;
  readonly to: number;
  readonly left: Int32Array;
  /** Which sample is nearer: -1 left, 1 right, 0 exactly between. Values build on that sample, so that mirrored samples give
   *  exactly mirrored results and equal samples come out untouched. */
  readonly side: Int8Array;
  /** Share of the step from the nearer sample to the other one. */
  readonly step: Float32Array;
  /** Weights of the tangents at the nearer and at the farther sample, in the direction from near to far. */
  readonly nearTangent: Float32Array;
  readonly farTangent: Float32Array;
}

/** Positions of `to` targets on `from` samples: u = ((2j + 1) from - to) / (2 to), by integers. */
export function buildSlopes(from: number, to: number): Slopes {
  const slopes: Slopes = {
    from,
    to,
    left: new Int32Array(to),
    side: new Int8Array(to),
    step: new Float32Array(to),
    nearTangent: new Float32Array(to),
    farTangent: new Float32Array(to),
  };
  for (let j = 0; j < to; j++) {
    const numerator = (2 * j + 1) * from - to;
    slopes.left[j] = Math.floor(numerator / (2 * to));
    const part = numerator - slopes.left[j] * 2 * to;
    slopes.side[j] = Math.sign(part - to);
    const t = Math.min(part, 2 * to - part) / (2 * to);
    slopes.step[j] = t * t * (3 - 2 * t);
    slopes.nearTangent[j] = t * (1 - t) * (1 - t);
    slopes.farTangent[j] = t * t * (t - 1);
  }
  return slopes;
}

/** The curve at target j through four neighboring float32 samples, of which b and c lie on either side of it. */
export function slopeAt(slopes: Slopes, j: number, a: number, b: number, c: number, d: number): number {
  const before = fround(b - a);
  const across = fround(c - b);
  const after = fround(d - c);
  const atLeft = tangent(before, across);
  const atRight = tangent(across, after);
  const side = slopes.side[j];
  const step = slopes.step[j];
  const near = slopes.nearTangent[j];
  const far = slopes.farTangent[j];
  let value: number;
  if (side < 0) value = fround(b + fround(fround(step * across) + bend(near, atLeft, far, atRight)));
  else if (side > 0) value = fround(c - fround(fround(step * across) + bend(near, atRight, far, atLeft)));
  else value = fround(fround(fround(b + c) * 0.5) + fround(near * fround(atLeft - atRight)));
  // In exact arithmetic the value lies between b and c; this keeps the last rounding from leaving that range.
  return b < c ? Math.min(Math.max(value, b), c) : Math.min(Math.max(value, c), b);
}

/** One row of targets j from four rows of samples, element by element. */
export function slopeRows(
  slopes: Slopes,
  j: number,
  [a, b, c, d]: readonly [Float32Array, Float32Array, Float32Array, Float32Array],
  result: Float32Array,
): void {
  for (let x = 0; x < result.length; x++) result[x] = slopeAt(slopes, j, a[x], b[x], c[x], d[x]);
}

const { fround } = Math;

function bend(near: number, nearTangent: number, far: number, farTangent: number): number {
  return fround(fround(near * nearTangent) + fround(far * farTangent));
}

/** 2 d0 d1 / (d0 + d1), or 0 where the differences have no common sign. */
function tangent(d0: number, d1: number): number {
  if (!((d0 > 0 && d1 > 0) || (d0 < 0 && d1 < 0))) return 0;
  return fround(fround(2 * fround(d0 * d1)) / fround(d0 + d1));
}
