/** Taps of one axis: for each target texel the first source index and its weights.
 *
 *    first[j] .. first[j] + count[j] - 1   source texels, unwrapped (may lie outside 0..from-1)
 *    weights[start[j] + k]                 weight of source texel first[j] + k, an integer / 2^24
 */
export interface Taps {
  readonly from: number;
  readonly to: number;
  readonly first: Int32Array;
  readonly count: Int32Array;
  readonly start: Int32Array;
  readonly weights: Float32Array;
}
