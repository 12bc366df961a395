import { roundedCode } from '../color/encoder.ts';
import { type Depth, type Extent, maxCode } from '../raster/raster.ts';

/** Alpha before it is stored: 65535 is 1. */
export interface UnscaledAlpha {
  readonly extent: Extent;
  readonly values: Uint16Array;
}

/** The code that `value` of 65535 is stored as when alpha is scaled. No less for a larger value, nor for a larger scale. */
export function scaledCode(value: number, scale: number, depth: Depth): number {
  const max = maxCode(depth);
  return roundedCode(Math.min(1, (scale * value) / 65535) * max, max);
}

/** The code of each value, 0..65535. */
export function scaledCodes(scale: number, depth: Depth): Uint16Array {
  const codes = new Uint16Array(65536);
  for (let value = 0; value < codes.length; value++) codes[value] = scaledCode(value, scale, depth);
  return codes;
}

/** The least value whose code is `passing` or more; 65536 where there is none. */
export function leastPassing(passing: number, scale: number, depth: Depth): number {
  let least = 0;
  let beyond = 65536;
  while (least < beyond) {
    const value = (least + beyond) >> 1;
    if (scaledCode(value, scale, depth) >= passing) beyond = value;
    else least = value + 1;
  }
  return least;
}
