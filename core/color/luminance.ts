/** Relative luminance of linear light with the sRGB primaries, in the unit of its arguments. The standard's four-digit
 *  weights, which sum to exactly 1.  [IEC61966; WCAG22, relative luminance] */
export function luminance(red: number, green: number, blue: number): number {
  return LUMINANCE_RED * red + LUMINANCE_GREEN * green + LUMINANCE_BLUE * blue;
}

export const LUMINANCE_RED = 0.2126;
export const LUMINANCE_GREEN = 0.7152;
export const LUMINANCE_BLUE = 0.0722;
