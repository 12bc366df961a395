import type { Kernel, KernelParam } from './table.ts';

// Piecewise cubics of the two-parameter family. All but the general `keys` are points of it; their weights sum to 1 at
// every phase before any normalising.  [Mitchell88, the B-C family]

/** Cubic with zero tangents at the samples, 2|x|^3 - 3x^2 + 1. Support 1 texel. No overshoot, interpolates.
 *  [Mitchell88, the B-C family at B = C = 0] */
export const hermite: Kernel = {
  name: 'hermite',
  params: [],
  source: 'Mitchell88',
  interpolates: true,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: () => 1,
  weight: (x) => familyWeight(x, 0, 0),
};

/** Catmull-Rom spline, B = 0, C = 1/2, the same as `keys` at a = -1/2. Sharp, interpolates, overshoots a step by 2/27.
 *  Support 2 texels.  [CatmullRom74; Vulkan, Texel Cubic Filtering] */
export const catmullRom: Kernel = {
  name: 'catmull-rom',
  params: [],
  source: 'CatmullRom74, Vulkan',
  interpolates: true,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: () => 2,
  weight: (x) => familyWeight(x, 0, 1 / 2),
};

/** Cubic convolution with the slope a at distance 1. Interpolates, overshoots a step by 4|a|/27; a = -1/2 is the one of
 *  third order. Support 2 texels.  [Keys81, the cubic convolution kernel] */
export const keys: Kernel = {
  name: 'keys',
  params: [{ name: 'a', unit: 'number', min: -2, max: 0, default: -0.5 }],
  source: 'Keys81',
  interpolates: true,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: () => 2,
  weight: (x, params) => familyWeight(x, 0, -params.a),
};

/** Mitchell-Netravali cubic, B = C = 1/3. Slight blur, little ringing; does not interpolate. Support 2 texels. Weight at
 *  0 is 8/9. On the line B + 2C = 1 it is of second order, which its authors advise.  [Mitchell88, the B-C family] */
export const mitchell: Kernel = {
  name: 'mitchell',
  params: [familyParam('b'), familyParam('c')],
  source: 'Mitchell88',
  interpolates: false,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: () => 2,
  weight: (x, params) => familyWeight(x, params.b, params.c),
};

/** Cubic B-spline, B = 1, C = 0. The smoothest; never negative, blurs. Support 2 texels.
 *  [Mitchell88, the B-C family; Vulkan, Texel Cubic Filtering] */
export const bSpline: Kernel = {
  name: 'b-spline',
  params: [],
  source: 'Mitchell88, Vulkan',
  interpolates: false,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: () => 2,
  weight: (x) => familyWeight(x, 1, 0),
};

/** k(x) of the family; (B, C) = (0, -a) is the cubic convolution with slope a. */
function familyWeight(x: number, b: number, c: number): number {
  const t = Math.abs(x);
  if (t < 1) return (((12 - 9 * b - 6 * c) * t + (-18 + 12 * b + 6 * c)) * t * t + (6 - 2 * b)) / 6;
  if (t < 2) return ((((-b - 6 * c) * t + (6 * b + 30 * c)) * t + (-12 * b - 48 * c)) * t + (8 * b + 24 * c)) / 6;
  return 0;
}

function familyParam(name: string): KernelParam {
  return { name, unit: 'number', min: 0, max: 1, default: 1 / 3 };
}
