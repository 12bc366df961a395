import { converter, differenceEuclidean } from 'culori';
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { type Oklab, oklabDistance, oklabOfLight, oklabOfXyz } from '../../core/color/oklab.ts';
import { decodeSrgb } from '../../core/color/transfer.ts';

const oklabOfCodes = (...codes: [number, number, number]): Oklab => {
  const [red, green, blue] = codes.map((code) => decodeSrgb(code / 255));
  return oklabOfLight(red, green, blue);
};

// Half of the last digit that the table prints.
const TABLE = 5e-4;

// [Ottosson20], the table of XYZ and OKLab pairs.
test.each([
  [
    [0.95, 1, 1.089],
    [1, 0, 0],
  ],
  [
    [1, 0, 0],
    [0.45, 1.236, -0.019],
  ],
  [
    [0, 1, 0],
    [0.922, -0.671, 0.263],
  ],
  [
    [0, 0, 1],
    [0.153, -1.415, -0.449],
  ],
] as const)('XYZ %j is OKLab %j', ([x, y, z], [lightness, a, b]) => {
  const found = oklabOfXyz(x, y, z);
  expect(Math.abs(found.lightness - lightness)).toBeLessThanOrEqual(TABLE);
  expect(Math.abs(found.a - a)).toBeLessThanOrEqual(TABLE);
  expect(Math.abs(found.b - b)).toBeLessThanOrEqual(TABLE);
});

// culori's matrices have ten digits too, and are not quite the same: half of the sixth digit.
const SIXTH_DIGIT = 5e-7;

test.each([
  ['red', [255, 0, 0], [0.627955, 0.224863, 0.125846]],
  ['green', [0, 255, 0], [0.86644, -0.233888, 0.179498]],
  ['blue', [0, 0, 255], [0.452014, -0.032457, -0.311528]],
] as const)('sRGB %s', (_, [red, green, blue], [lightness, a, b]) => {
  const found = oklabOfCodes(red, green, blue);
  expect(Math.abs(found.lightness - lightness)).toBeLessThanOrEqual(2 * SIXTH_DIGIT);
  expect(Math.abs(found.a - a)).toBeLessThanOrEqual(2 * SIXTH_DIGIT);
  expect(Math.abs(found.b - b)).toBeLessThanOrEqual(2 * SIXTH_DIGIT);
});

const code = fc.integer({ min: 0, max: 255 });
const color = fc.tuple(code, code, code);

test('colors and their distances agree with culori', () => {
  const judge = converter('oklab');
  const distance = differenceEuclidean('oklab');
  const rgb = ([r, g, b]: readonly number[]) => ({ mode: 'rgb' as const, r: r / 255, g: g / 255, b: b / 255 });
  fc.assert(
    fc.property(color, color, (one, other) => {
      const found = oklabOfCodes(...one);
      const told = judge(rgb(one));
      expect(Math.abs(found.lightness - told.l)).toBeLessThan(1e-6);
      expect(Math.abs(found.a - told.a)).toBeLessThan(1e-6);
      expect(Math.abs(found.b - told.b)).toBeLessThan(1e-6);
      const far = oklabDistance(found, oklabOfCodes(...other));
      expect(Math.abs(far - distance(rgb(one), rgb(other)))).toBeLessThan(4e-6);
    }),
  );
});

test('grays have no hue, negative light is mirrored', () => {
  // The rows of the matrices sum to 1 within 1e-9, and a cube root near 0 makes that 1e-3 of it at most.
  const gray = oklabOfCodes(128, 128, 128);
  expect(gray.lightness).toBeCloseTo(0.599871, 6);
  expect(Math.abs(gray.a) + Math.abs(gray.b)).toBeLessThan(1e-6);
  const below = oklabOfLight(-0.2, -0.2, -0.2);
  expect(below.lightness).toBe(-oklabOfLight(0.2, 0.2, 0.2).lightness);
});
