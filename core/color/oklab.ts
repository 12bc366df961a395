import { cubeRoot } from './portable.ts';

/** Lightness 0..1 for colors that a screen shows, and two opponent axes, about -0.4..0.4 for them. */
export interface Oklab {
  readonly lightness: number;
  readonly a: number;
  readonly b: number;
}

/** OKLab of linear light with the sRGB primaries, white at 1. Light beyond 0..1 is taken as it is.  [Ottosson20] */
export function oklabOfLight(red: number, green: number, blue: number): Oklab {
  return fromCones(
    0.4122214708 * red + 0.5363325363 * green + 0.0514459929 * blue,
    0.2119034982 * red + 0.6806995451 * green + 0.1073969566 * blue,
    0.0883024619 * red + 0.2817188376 * green + 0.6299787005 * blue,
  );
}

/** OKLab of CIE XYZ with white D65 at Y = 1.  [Ottosson20] */
export function oklabOfXyz(x: number, y: number, z: number): Oklab {
  return fromCones(
    0.8189330101 * x + 0.3618667424 * y - 0.1288597137 * z,
    0.0329845436 * x + 0.9293118715 * y + 0.0361456387 * z,
    0.0482003018 * x + 0.2643662691 * y + 0.633851707 * z,
  );
}

/** Distance of two colors: about 0.02 is just seen, black and white are 1 apart. */
export function oklabDistance(one: Oklab, other: Oklab): number {
  const [lightness, a, b] = [one.lightness - other.lightness, one.a - other.a, one.b - other.b];
  return Math.sqrt(lightness * lightness + a * a + b * b);
}

function fromCones(long: number, medium: number, short: number): Oklab {
  const [l, m, s] = [signedRoot(long), signedRoot(medium), signedRoot(short)];
  return {
    lightness: 0.2104542553 * l + 0.793617785 * m - 0.0040720468 * s,
    a: 1.9779984951 * l - 2.428592205 * m + 0.4505937099 * s,
    b: 0.0259040371 * l + 0.7827717662 * m - 0.808675766 * s,
  };
}

function signedRoot(value: number): number {
  return value < 0 ? -cubeRoot(-value) : cubeRoot(value);
}
