import { besselI0, sinc } from '../color/portable.ts';
import type { Kernel } from './table.ts';

// Windowed sinc kernels. Their weights do not sum to 1 at every phase (Lanczos2 by up to 1.9 %), so taps are normalised.

/** sinc(x) sinc(x/2). Support 2 texels.  [Duchon79; Turkowski90] */
export const lanczos2: Kernel = lanczos('lanczos2', 2);

/** sinc(x) sinc(x/3). Support 3 texels. Sharp, rings: overshoots a step by 11.8 %.  [Duchon79; Turkowski90] */
export const lanczos3: Kernel = lanczos('lanczos3', 3);

/** sinc(x) sinc(x/4). Support 4 texels.  [Duchon79; Turkowski90] */
export const lanczos4: Kernel = lanczos('lanczos4', 4);

/** sinc(x) I0(alpha sqrt(1 - (x/width)^2)) / I0(alpha). Support `width` texels. Larger alpha blurs more and rings less;
 *  0 cuts the sinc off sharply. alpha is the argument of I0, not a multiple of pi.  [Kaiser74, I0-sinh window] */
export const kaiser: Kernel = {
  name: 'kaiser',
  params: [
    { name: 'alpha', unit: 'number', min: 0, max: 16, default: 4 },
    { name: 'width', unit: 'texels', min: 1, max: 8, default: 3 },
  ],
  source: 'Kaiser74',
  interpolates: true,
  minifies: true,
  magnifies: true,
  kind: 'weights',
  support: (params) => params.width,
  weight: (x, params) => (Math.abs(x) < params.width ? sinc(x) * kaiserWindow(x / params.width, params.alpha) : 0),
};

/** The window over -1..1: 1 in the middle, 1 / I0(alpha) at the ends.  [Kaiser74] */
export function kaiserWindow(x: number, alpha: number): number {
  return besselI0(alpha * Math.sqrt(Math.max(0, 1 - x * x))) / besselI0(alpha);
}

function lanczos(name: string, lobes: number): Kernel {
  return {
    name,
    params: [],
    source: 'Duchon79, Turkowski90',
    interpolates: true,
    minifies: true,
    magnifies: true,
    kind: 'weights',
    support: () => lobes,
    weight: (x) => (Math.abs(x) < lobes ? sinc(x) * sinc(x / lobes) : 0),
  };
}
