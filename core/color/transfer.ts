import { type Depth, maxCode } from '../raster/raster.ts';
import { cubeRoot, fifthRoot } from './portable.ts';

/** How codes stand for light. */
export type Transfer = 'srgb' | 'linear';

// The sRGB transfer function, exact and piecewise, with the standard's own rounded constants. They leave a step of 8e-9 at
// the joint; the constants that would close it belong to no standard.  [IEC61966, as quoted in KDFS14, sRGB transfer functions]

/** Linear light of an sRGB-encoded value; both 1 at white. Negative values are mirrored, values above 1 go on along the
 *  curve: what overshoots can be measured. Within 5 ulp. */
export function decodeSrgb(value: number): number {
  if (value < 0) return -decodeSrgb(-value);
  if (value <= 0.04045) return value / 12.92;
  const base = (value + 0.055) / 1.055;
  // base^2.4 = base^2 (base^(1/5))^2.
  const root = fifthRoot(base);
  return base * base * (root * root);
}

/** sRGB-encoded value of linear light, mirrored and extended as `decodeSrgb`. Not for rounding: codes are found by
 *  thresholds. Within 6 ulp up to 1. */
export function encodeSrgb(linear: number): number {
  if (linear < 0) return -encodeSrgb(-linear);
  if (linear <= 0.0031308) return linear * 12.92;
  // linear^(5/12) = (linear^(1/3))^(5/4).
  const root = cubeRoot(linear);
  return 1.055 * root * Math.sqrt(Math.sqrt(root)) - 0.055;
}

/** What each code means in the pipeline, by code, 256 or 65536 entries: linear light 0..1 for `srgb`; for `linear` the code
 *  itself, so that averages of integers stay exact. The table is shared: do not write to it. */
export function decodeTable(depth: Depth, transfer: Transfer): Float32Array {
  const key = `${transfer}${depth}` as const;
  let table = tables.get(key);
  if (table === undefined) {
    const max = maxCode(depth);
    table = new Float32Array(max + 1);
    for (let code = 0; code <= max; code++) table[code] = transfer === 'srgb' ? decodeSrgb(code / max) : code;
    tables.set(key, table);
  }
  return table;
}

const tables = new Map<`${Transfer}${Depth}`, Float32Array>();
