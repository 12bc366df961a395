import { cubeRoot } from '../color/portable.ts';

/** OKLab distance of two colors of linear light in 0..1, within 1e-5 of `oklabDistance`: the cube roots, which cost most of it, come
 *  from a table, in a tenth of the time.  [Ottosson20] */
export function labDistance(
  red: number,
  green: number,
  blue: number,
  otherRed: number,
  otherGreen: number,
  otherBlue: number,
): number {
  const l = coneRoot(0, red, green, blue) - coneRoot(0, otherRed, otherGreen, otherBlue);
  const m = coneRoot(1, red, green, blue) - coneRoot(1, otherRed, otherGreen, otherBlue);
  const s = coneRoot(2, red, green, blue) - coneRoot(2, otherRed, otherGreen, otherBlue);
  // Both axes and lightness are linear in the roots, so differences may be taken first.
  const lightness = 0.2104542553 * l + 0.793617785 * m - 0.0040720468 * s;
  const a = 1.9779984951 * l - 2.428592205 * m + 0.4505937099 * s;
  const b = 0.0259040371 * l + 0.7827717662 * m - 0.808675766 * s;
  return Math.sqrt(lightness * lightness + a * a + b * b);
}

/** Distance at which a difference of two patches is just noticed.  [CSSColor4, "CSS gamut mapping", the JND of deltaEOK] */
export const JUST_SEEN = 0.02;

function coneRoot(cone: 0 | 1 | 2, red: number, green: number, blue: number): number {
  if (cone === 0) return root(0.4122214708 * red + 0.5363325363 * green + 0.0514459929 * blue);
  if (cone === 1) return root(0.2119034982 * red + 0.6806995451 * green + 0.1073969566 * blue);
  return root(0.0883024619 * red + 0.2817188376 * green + 0.6299787005 * blue);
}

// A float32 is sign, 8 bits of exponent and 23 of mantissa: its bits without the last 15 number 256 steps an octave. Between
// them the root is taken as straight, which is off by h^2 / 36 of it at most, h = 1/256: 4e-7.

const LOW_BITS = 15;
/** Below 2^-45 a root is under 4e-5 and counts as 0. */
const LEAST_EXPONENT = -45;
const FIRST = (127 + LEAST_EXPONENT) << (23 - LOW_BITS);
/** Up to 2, which leaves room above white for rounding. */
const COUNT = (1 - LEAST_EXPONENT) << (23 - LOW_BITS);

const float = new Float32Array(1);
const word = new Uint32Array(float.buffer);

let table: Float64Array | null = null;

function root(value: number): number {
  table ??= makeTable();
  float[0] = value;
  const step = (word[0] >>> LOW_BITS) - FIRST;
  if (step < 0 || value <= 0) return 0;
  if (step >= COUNT) return cubeRoot(value);
  const share = (word[0] & ((1 << LOW_BITS) - 1)) / (1 << LOW_BITS);
  return table[step] * (1 - share) + table[step + 1] * share;
}

function makeTable(): Float64Array {
  const roots = new Float64Array(COUNT + 1);
  for (let step = 0; step <= COUNT; step++) {
    word[0] = (FIRST + step) << LOW_BITS;
    roots[step] = cubeRoot(float[0]);
  }
  return roots;
}
