import { exponential } from '../color/portable.ts';
import type { Kernel } from './table.ts';

/** Where the bell is cut, in sigmas: the weight there is 3.4e-4 of the middle one. */
const CUT = 4;

/** exp(-x^2 / (2 sigma^2)), cut at 4 sigma. No ringing, blurs; does not interpolate. Support 4 sigma texels. The normal
 *  density without its constant, which normalised taps do not need. */
export const gaussian: Kernel = {
  name: 'gaussian',
  params: [{ name: 'sigma', unit: 'texels', min: 0.25, max: 4, default: 0.5 }],
  source: 'Wang04',
  interpolates: false,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: (params) => CUT * params.sigma,
  weight: (x, params) => {
    const z = x / params.sigma;
    return Math.abs(z) < CUT ? exponential((-z * z) / 2) : 0;
  },
};
