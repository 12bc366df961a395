// What the page and the sheet both need to show texels on a screen.

/** A 16-bit code in 8 bits: floor(v 255 / 65535 + 1/2).  [PNG3, Sample depth rescaling] */
export function eightBits(code: number): number {
  return Math.floor((code * 255) / 65535 + 0.5);
}

/** Toward a lamp, as a unit vector, from a point of -1..1 across and up; 0, 0 is straight above. */
export function lampDirection(lamp: { readonly x: number; readonly y: number }): {
  readonly x: number;
  readonly y: number;
  readonly z: number;
} {
  const radius = Math.sqrt(lamp.x * lamp.x + lamp.y * lamp.y);
  const scale = radius > LOWEST_LAMP ? LOWEST_LAMP / radius : 1;
  const [x, y] = [lamp.x * scale, lamp.y * scale];
  return { x, y, z: Math.sqrt(1 - x * x - y * y) };
}

/** The lamp never sinks below some ten degrees, where nothing but ridges would be lit. */
const LOWEST_LAMP = 0.985;
