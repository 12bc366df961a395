// The piecewise sRGB functions with the standard's rounded constants: IEC 61966-2-1, as the Khronos Data Format
// Specification 1.4 and CSS Color 4 quote it. Both work on 0..1.

export function decodeSrgb(encoded: number): number {
  return encoded <= 0.04045 ? encoded / 12.92 : ((encoded + 0.055) / 1.055) ** 2.4;
}

export function encodeSrgb(linear: number): number {
  return linear <= 0.0031308 ? linear * 12.92 : 1.055 * linear ** (1 / 2.4) - 0.055;
}

/** A value 0..1 (or beyond: clamped) as a code with its fraction, 0..max. */
export function encodeFraction(value: number, transfer: 'srgb' | 'linear', max: number): number {
  const clamped = Math.min(1, Math.max(0, value));
  return (transfer === 'srgb' ? encodeSrgb(clamped) : clamped) * max;
}

/** The nearest code: halves up where a transfer function was applied, to the even code elsewhere. */
export function roundCode(fraction: number, transfer: 'srgb' | 'linear'): number {
  const below = Math.floor(fraction);
  const rest = fraction - below;
  if (rest !== 0.5) return rest < 0.5 ? below : below + 1;
  return transfer === 'srgb' || below % 2 === 1 ? below + 1 : below;
}
