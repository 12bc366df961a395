import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { besselI0, cubeRoot, exponential, fifthRoot, sinc, sinPi } from '../../core/color/portable.ts';
import { ulpsBetween } from './ulps.ts';

// The engine's own Math functions are the judges. V8 takes them from fdlibm, whose stated error is below 1 ulp, so a bound is
// ours plus one.
const JUDGE = 1;

const positive = fc.double({ min: 1e-12, max: 1e12, noNaN: true });

describe('roots', () => {
  test('the fifth root is within 2 ulp', () => {
    fc.assert(
      fc.property(positive, (x) => ulpsBetween(fifthRoot(x), x ** (1 / 5)) <= 2 + FIFTH),
      { numRuns: 2000 },
    );
  });

  test('the cube root is within 2 ulp', () => {
    fc.assert(
      fc.property(positive, (x) => ulpsBetween(cubeRoot(x), Math.cbrt(x)) <= 2 + JUDGE),
      { numRuns: 2000 },
    );
  });

  test('powers of two come out exact', () => {
    for (let power = -40; power <= 40; power++) {
      expect(fifthRoot(2 ** (5 * power))).toBe(2 ** power);
      expect(cubeRoot(2 ** (3 * power))).toBe(2 ** power);
    }
    expect([fifthRoot(0), cubeRoot(0)]).toEqual([0, 0]);
  });
});

// 1/5 is rounded, relatively by 2^-54: x^(1/5) is then off by |ln x| 2^-54 / 5, at most 28 / 5 half ulps, beside the judge.
const FIFTH = 3 + JUDGE;

describe('sine', () => {
  test('integers give exactly 0, halves exactly 1 or -1', () => {
    for (let n = -50; n <= 50; n++) {
      expect(Math.abs(sinPi(n))).toBe(0);
      expect(sinPi(n + 0.5)).toBe(n % 2 === 0 ? 1 : -1);
      expect(Math.abs(sinc(n))).toBe(n === 0 ? 1 : 0);
    }
  });

  test('within 2 ulp up to a quarter turn', () => {
    // Math.sin is given pi x rounded: one ulp of the argument, which sine does not enlarge up to pi/2.
    const argument = 1;
    const turn = fc.double({ min: 1e-9, max: 0.5, noNaN: true });
    fc.assert(
      fc.property(turn, (x) => ulpsBetween(sinPi(x), Math.sin(Math.PI * x)) <= 2 + argument + JUDGE),
      { numRuns: 2000 },
    );
  });

  test('is odd, and repeats exactly every two units', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 8191 }), fc.integer({ min: -9, max: 9 }), (n, turns) => {
        const x = n / 8192;
        expect(sinPi(-x)).toBe(-sinPi(x));
        expect(sinPi(x + 2 * turns)).toBe(sinPi(x));
        expect(sinPi(1 - x)).toBe(sinPi(x));
      }),
    );
  });

  test.each([
    [1 / 6, 1 / 2],
    [1 / 4, Math.SQRT1_2],
    [1 / 3, Math.sqrt(3) / 2],
  ])('sin(pi %d)', (x, sine) => {
    expect(ulpsBetween(sinPi(x), sine)).toBeLessThanOrEqual(2);
  });
});

describe('exponential', () => {
  test('within 2 ulp', () => {
    const exponent = fc.double({ min: -700, max: 700, noNaN: true });
    fc.assert(
      fc.property(exponent, (x) => ulpsBetween(exponential(x), Math.exp(x)) <= 2 + JUDGE),
      { numRuns: 2000 },
    );
  });

  test('ends', () => {
    expect(exponential(0)).toBe(1);
    expect(ulpsBetween(exponential(1), Math.E)).toBeLessThanOrEqual(2);
    expect(exponential(-1000)).toBe(0);
    expect(exponential(1000)).toBe(Number.POSITIVE_INFINITY);
  });
});

describe('I0', () => {
  // Abramowitz and Stegun 1964, table 9.8, e^-x I0(x), as other numerical test suites quote it. 2e-10 and not half of the last
  // digit: the entries for x = 1, 2 and 4 are off by one in the tenth digit.
  test.each([
    [0.1, 0.9071009258],
    [0.5, 0.6450352706],
    [1, 0.4657596077],
    [2, 0.3085083225],
    [2.5, 0.2700464416],
    [3, 0.2430003542],
    [4, 0.2070019211],
    [5, 0.1835408126],
    [20, 0.0897803119],
  ])('table 9.8 at %d', (x, tabulated) => {
    expect(Math.abs(exponential(-x) * besselI0(x) - tabulated)).toBeLessThan(2e-10);
  });

  // Computed with 25 digits; 1e-14 is the bound that besselI0 states.
  test.each([
    [0.1, 1.0025015629340956],
    [0.5, 1.063483370741324],
    [1, 1.266065877752008],
    [2, 2.2795853023360673],
    [2.5, 3.289839144050123],
    [3, 4.880792585865024],
    [4, 11.30192195213633],
    [5, 27.23987182360445],
    [20, 43558282.55955354],
  ])('I0(%d)', (x, exact) => {
    expect(Math.abs(besselI0(x) / exact - 1)).toBeLessThan(1e-14);
  });

  test('is even, and 1 at 0', () => {
    expect(besselI0(0)).toBe(1);
    expect(besselI0(-3)).toBe(besselI0(3));
  });
});
