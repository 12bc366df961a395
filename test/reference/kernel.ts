import type { KernelChoice } from '../../core/treatment/treatment.ts';

/** A linear kernel from its paper: weight of a distance in texels, 0 from `support` on. */
export interface ReferenceKernel {
  readonly support: number;
  weight(x: number): number;
}

/** The kernels that weigh by distance; null for the others. */
export function weightKernel({ name, params }: KernelChoice): ReferenceKernel | null {
  switch (name) {
    case 'triangle':
      return kernel(1, (x) => 1 - x);
    case 'hermite':
      return kernel(1, (x) => 2 * x ** 3 - 3 * x ** 2 + 1);
    case 'catmull-rom':
      return keys(-1 / 2);
    case 'keys':
      return keys(params.a);
    case 'mitchell':
      return cubic(params.b, params.c);
    case 'b-spline':
      return cubic(1, 0);
    case 'lanczos2':
      return lanczos(2);
    case 'lanczos3':
      return lanczos(3);
    case 'lanczos4':
      return lanczos(4);
    case 'kaiser':
      return kernel(
        params.width,
        (x) => (sinc(x) * besselI0(params.alpha * Math.sqrt(1 - (x / params.width) ** 2))) / besselI0(params.alpha),
      );
    case 'gaussian':
      return kernel(4 * params.sigma, (x) => Math.exp(-(x ** 2) / (2 * params.sigma ** 2)));
    default:
      return null;
  }
}

/** Keys 1981, equation 4 with free a. */
function keys(a: number): ReferenceKernel {
  return kernel(2, (x) =>
    x < 1 ? (a + 2) * x ** 3 - (a + 3) * x ** 2 + 1 : a * x ** 3 - 5 * a * x ** 2 + 8 * a * x - 4 * a,
  );
}

/** Mitchell and Netravali 1988, equation 8. */
function cubic(b: number, c: number): ReferenceKernel {
  return kernel(2, (x) =>
    x < 1
      ? ((12 - 9 * b - 6 * c) * x ** 3 + (-18 + 12 * b + 6 * c) * x ** 2 + 6 - 2 * b) / 6
      : ((-b - 6 * c) * x ** 3 + (6 * b + 30 * c) * x ** 2 + (-12 * b - 48 * c) * x + 8 * b + 24 * c) / 6,
  );
}

/** Duchon 1979. */
function lanczos(lobes: number): ReferenceKernel {
  return kernel(lobes, (x) => sinc(x) * sinc(x / lobes));
}

function kernel(support: number, ofDistance: (x: number) => number): ReferenceKernel {
  return { support, weight: (x) => (Math.abs(x) < support ? ofDistance(Math.abs(x)) : 0) };
}

function sinc(x: number): number {
  return x === 0 ? 1 : Math.sin(Math.PI * x) / (Math.PI * x);
}

/** Abramowitz and Stegun 1964, 9.6.12: sum of (x^2/4)^k / k!^2. Forty terms reach double precision for x <= 20. */
export function besselI0(x: number): number {
  let term = 1;
  let sum = 1;
  for (let k = 1; k <= 40; k++) {
    term *= (x * x) / 4 / (k * k);
    sum += term;
  }
  return sum;
}
