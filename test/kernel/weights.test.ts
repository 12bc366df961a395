import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { kaiserWindow } from '../../core/kernel/sinc.ts';
import { defaultParams } from '../../core/kernel/table.ts';
import { anyParams, weighing, weightOf, weightsAt } from './cases.ts';

// Values are of order 1 and polynomials have fewer than ten operations: ten half ulps of 1, and a margin of 4.
const POLYNOMIAL = 20 * 2 ** -52;

function expectClose(actual: readonly number[], expected: readonly number[], tolerance: number): void {
  expect(actual).toHaveLength(expected.length);
  const worst = actual.reduce((most, value, k) => Math.max(most, Math.abs(value - expected[k])), 0);
  expect(worst, `${actual} for ${expected}`).toBeLessThanOrEqual(tolerance);
}

const over = (divisor: number, ...parts: number[]): number[] => parts.map((part) => part / divisor);

// Exact rationals, derived from k(x) of Mitchell and Netravali 1988 and of Keys 1981.
test.each<[string, Record<string, number> | undefined, number, number[]]>([
  ['triangle', undefined, 1 / 2, over(2, 1, 1)],
  ['triangle', undefined, 1 / 4, over(4, 3, 1)],
  ['hermite', undefined, 1 / 2, over(2, 1, 1)],
  ['hermite', undefined, 1 / 4, over(32, 27, 5)],
  ['catmull-rom', undefined, 1 / 2, over(16, -1, 9, 9, -1)],
  ['catmull-rom', undefined, 1 / 4, over(128, -9, 111, 29, -3)],
  ['catmull-rom', undefined, 1 / 3, over(27, -2, 21, 9, -1)],
  ['mitchell', undefined, 1 / 2, over(144, -5, 77, 77, -5)],
  ['mitchell', undefined, 1 / 4, over(1152, -27, 901, 295, -17)],
  ['b-spline', undefined, 1 / 2, over(48, 1, 23, 23, 1)],
  ['b-spline', undefined, 1 / 4, over(384, 27, 235, 121, 1)],
  ['keys', { a: -3 / 4 }, 1 / 2, over(32, -3, 19, 19, -3)],
  ['keys', { a: -1 }, 1 / 2, over(8, -1, 5, 5, -1)],
])('%s %j at t = %d', (name, params, t, expected) => {
  expectClose(weightsAt(name, t, expected.length / 2, params), expected, POLYNOMIAL);
});

describe('the matrices of the Vulkan specification, Texel Cubic Filtering, times [1 t t^2 t^3]', () => {
  test.each<[string, Record<string, number> | undefined, number, number[][]]>([
    [
      'catmull-rom',
      undefined,
      2,
      [
        [0, 2, 0, 0],
        [-1, 0, 1, 0],
        [2, -5, 4, -1],
        [-1, 3, -3, 1],
      ],
    ],
    [
      'b-spline',
      undefined,
      6,
      [
        [1, 4, 1, 0],
        [-3, 0, 3, 0],
        [3, -6, 3, 0],
        [-1, 3, -3, 1],
      ],
    ],
    [
      'mitchell',
      undefined,
      18,
      [
        [1, 16, 1, 0],
        [-9, 0, 9, 0],
        [15, -36, 27, -6],
        [-7, 21, -21, 7],
      ],
    ],
    // "Zero tangent cardinal". The specification prints +1 as the last entry; then the weights would sum to 1 - t^3 / 2.
    [
      'keys',
      { a: -1 },
      2,
      [
        [0, 2, 0, 0],
        [-2, 0, 2, 0],
        [4, -4, 2, -2],
        [-2, 2, -2, 2],
      ],
    ],
  ])('%s %j', (name, params, divisor, matrix) => {
    for (let n = 0; n < 64; n++) {
      const t = n / 64;
      const expected = [0, 1, 2, 3].map(
        (column) => matrix.reduce((sum, row, power) => sum + row[column] * t ** power, 0) / divisor,
      );
      expectClose(weightsAt(name, t, 2, params), expected, POLYNOMIAL);
      expect(Math.abs(expected.reduce((sum, each) => sum + each, 0) - 1)).toBeLessThan(POLYNOMIAL);
    }
  });
});

test('keys at a = -1/2 is catmull-rom, mitchell at its corners is hermite, b-spline and catmull-rom', () => {
  for (let n = -128; n <= 128; n++) {
    const x = n / 64;
    expect(weightOf('keys', x, { a: -1 / 2 })).toBe(weightOf('catmull-rom', x));
    expect(weightOf('mitchell', x, { b: 0, c: 0 })).toBe(weightOf('hermite', x));
    expect(weightOf('mitchell', x, { b: 1, c: 0 })).toBe(weightOf('b-spline', x));
    expect(weightOf('mitchell', x, { b: 0, c: 1 / 2 })).toBe(weightOf('catmull-rom', x));
  }
});

test('cubics and the triangle sum to 1 at every phase', () => {
  fc.assert(
    fc.property(fc.double({ min: 0, max: 1, noNaN: true }), fc.double({ min: 0, max: 1, noNaN: true }), (t, b) => {
      for (const name of ['triangle', 'hermite', 'catmull-rom', 'b-spline'] as const) {
        expectClose([weightsAt(name, t, 2).reduce((sum, each) => sum + each)], [1], POLYNOMIAL);
      }
      const sums = [weightsAt('keys', t, 2, { a: -2 * b }), weightsAt('mitchell', t, 2, { b, c: 1 - b })];
      // Terms reach 16 at a = -2 and 48 c / 6 at c = 1.
      for (const sum of sums) expectClose([sum.reduce((total, each) => total + each)], [1], 16 * POLYNOMIAL);
    }),
  );
});

test('kernels are even and 0 from their support on', () => {
  for (const kernel of weighing) {
    fc.assert(
      fc.property(anyParams(kernel), fc.double({ min: 0, max: 20, noNaN: true }), (params, x) => {
        expect(kernel.weight(-x, params)).toBe(kernel.weight(x, params));
        if (x >= kernel.support(params)) expect(Math.abs(kernel.weight(x, params))).toBe(0);
      }),
    );
  }
});

describe('windowed sincs', () => {
  // Closed forms from sinc: k(1/2), k(3/2), k(5/2). A few ulp of 1 for two sines and three divisions.
  const SINC = 8 * 2 ** -52;

  test('lanczos2', () => {
    const expected = [(4 * Math.SQRT2) / Math.PI ** 2, (-4 * Math.SQRT2) / (9 * Math.PI ** 2)];
    expectClose([weightOf('lanczos2', 0.5), weightOf('lanczos2', 1.5)], expected, SINC);
    expectClose([2 * (expected[0] + expected[1])], [1.0189496324], 5e-11);
  });

  test('lanczos3', () => {
    const squared = Math.PI ** 2;
    const expected = [6 / squared, -4 / (3 * squared), 6 / (25 * squared)];
    expectClose(
      [0.5, 1.5, 2.5].map((x) => weightOf('lanczos3', x)),
      expected,
      SINC,
    );
    expectClose([weightsAt('lanczos3', 0.5, 3).reduce((sum, each) => sum + each)], [736 / (75 * squared)], SINC);
  });

  test.each<[string, number, number, number]>([
    // Range of the sum of weights over all phases, derived by a scan, printed to six decimals.
    ['lanczos2', 2, 1, 1.01895],
    ['lanczos3', 3, 0.994299, 1],
    ['kaiser', 3, 1, 1.004146],
  ])('%s does not sum to 1 by itself', (name, reach, low, high) => {
    const sums = Array.from({ length: 1001 }, (_, n) => weightsAt(name, n / 1000, reach).reduce((a, b) => a + b));
    expectClose([Math.min(...sums), Math.max(...sums)], [low, high], 5e-7);
  });

  test('kaiser window, alpha 4 over 3 texels', () => {
    // I0(4 sqrt(1 - (x/3)^2)) / I0(4), Kaiser 1974, computed with 25 digits and printed to ten.
    const window = [0.5, 1, 1.5, 2, 2.5, 3].map((x) => kaiserWindow(x / 3, 4));
    const printed = [0.9528950441, 0.821609134, 0.6334317798, 0.4254113605, 0.2345145844, 0.0884805261];
    expectClose(window, printed, 5e-11);
    expectClose([weightOf('kaiser', 1.5)], [(-2 / (3 * Math.PI)) * 0.6334317798], 5e-11);
  });

  test('kaiser with alpha 0 is the bare sinc', () => {
    expectClose([weightOf('kaiser', 0.5, { alpha: 0, width: 2 })], [2 / Math.PI], SINC);
  });
});

test('gaussian, sigma 1.5, the 11 taps of Wang et al. 2004', () => {
  // Normalised over 11 taps, derived, eight decimals.
  const row = Array.from({ length: 11 }, (_, k) => weightOf('gaussian', k - 5, { sigma: 1.5 }));
  const sum = row.reduce((total, each) => total + each);
  const half = [0.00102838, 0.00759876, 0.03600077, 0.10936069, 0.21300554, 0.26601172];
  expectClose(
    row.map((each) => each / sum),
    [...half, ...half.slice(0, 5).reverse()],
    5e-9,
  );
});

describe('overshoot of a unit step between texels 0 and 1', () => {
  /** The interpolated step at t, with normalised weights. */
  const stepAt = (name: string, t: number, params?: Record<string, number>): number => {
    const weights = weightsAt(name, t, 4, params);
    const total = weights.reduce((sum, each) => sum + each);
    return weights.slice(4).reduce((sum, each) => sum + each) / total;
  };
  const peak = (name: string, params?: Record<string, number>): number =>
    Array.from({ length: 10001 }, (_, n) => stepAt(name, n / 10000, params)).reduce((most, each) =>
      Math.max(most, each),
    );

  // Behind the edge: t is measured from texel 1, the first that holds 1, to texel 2; here from 0 to 1 by mirroring.
  const beyond = (name: string, t: number, params?: Record<string, number>): number => {
    const weights = Array.from({ length: 10 }, (_, k) => weightOf(name, k - 4 - t, params));
    const total = weights.reduce((sum, each) => sum + each);
    return weights.slice(4).reduce((sum, each) => sum + each) / total - 1;
  };
  const highest = (name: string, params?: Record<string, number>): number =>
    Array.from({ length: 20001 }, (_, n) => beyond(name, n / 20000, params)).reduce((most, each) =>
      Math.max(most, each),
    );

  // Derived exactly: 4 |a| / 27 at t = 1/3 for Keys, 16/441 at t = 3/7 for Mitchell.
  test.each<[string, Record<string, number> | undefined, number, number]>([
    ['catmull-rom', undefined, 2 / 27, 1 / 3],
    ['keys', { a: -0.75 }, 1 / 9, 1 / 3],
    ['keys', { a: -1 }, 4 / 27, 1 / 3],
    ['mitchell', undefined, 16 / 441, 3 / 7],
  ])('%s %j: %d', (name, params, overshoot, t) => {
    expect(Math.abs(beyond(name, t, params) - overshoot)).toBeLessThan(POLYNOMIAL);
    expect(highest(name, params)).toBeLessThan(overshoot + POLYNOMIAL);
  });

  test.each(['triangle', 'hermite', 'b-spline', 'gaussian'])('%s: none', (name) => {
    expect(highest(name)).toBeLessThan(POLYNOMIAL);
    expect(peak(name)).toBeLessThan(1 + POLYNOMIAL);
  });

  // By scan, four decimals of a per cent; the scan's step of 1/20000 adds less.
  test.each([
    ['lanczos2', 0.085363],
    ['lanczos3', 0.117811],
    ['kaiser', 0.111346],
  ])('%s: %d', (name, overshoot) => {
    expect(Math.abs(highest(name) - overshoot)).toBeLessThan(1e-6);
  });
});

test('every kernel has a weight above 0 at its middle, whatever its parameters', () => {
  for (const kernel of weighing) {
    fc.assert(fc.property(anyParams(kernel), (params) => kernel.weight(0, params) > 0));
    expect(kernel.weight(0, defaultParams(kernel))).toBeGreaterThan(0);
  }
});
