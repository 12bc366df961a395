import { clamp, mix } from './shape.ts';

/** sRGB codes 0..255, not rounded. Painters mix what they see, so mixing happens on codes. */
export type Color = readonly [red: number, green: number, blue: number];

export function hex(text: string): Color {
  const code = (at: number): number => Number.parseInt(text.slice(at, at + 2), 16);
  return [code(1), code(3), code(5)];
}

export function mixColor(a: Color, b: Color, t: number): Color {
  return [mix(a[0], b[0], t), mix(a[1], b[1], t), mix(a[2], b[2], t)];
}

/** A function from 0..1 to colors evenly spaced from dark to light. */
export function ramp(...stops: readonly string[]): (t: number) => Color {
  const colors = stops.map(hex);
  return (t) => {
    const at = clamp(t) * (colors.length - 1);
    const first = Math.min(Math.floor(at), colors.length - 2);
    return mixColor(colors[first], colors[first + 1], at - first);
  };
}

/** The same color with every code scaled. */
export function scaled([red, green, blue]: Color, by: number): Color {
  return [red * by, green * by, blue * by];
}
