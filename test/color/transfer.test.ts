import { converter } from 'culori';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { decodeSrgb, decodeTable, encodeSrgb } from '../../core/color/transfer.ts';
import { ulpsBetween } from './ulps.ts';

const toLinear = converter('lrgb');

/** What decodeSrgb promises, and what the engine's own power function may be off by, in ulp. */
const STATED = 5;
const JUDGE = 1;

// Derived in double precision from the formula as the Khronos Data Format Specification 1.4 and CSS Color 4 quote it; codes 1,
// 128 and 188 also with 25 digits. 1e-15 is 9 ulp from 0.5 to 1, within which 5 of ours and the rounding of a printed value lie.
test.each([
  [1, 0.0003035269835488375],
  [10, 0.003035269835488375],
  [11, 0.003346535763899161],
  [32, 0.01444384359609254],
  [64, 0.05126945837404324],
  [127, 0.2122307574140552],
  [128, 0.2158605001138992],
  [187, 0.4969329950608704],
  [188, 0.5028864580325687],
  [192, 0.5271151257058131],
  [254, 0.9911020971138298],
  [255, 1],
])('code %d decodes to %d', (code, linear) => {
  expect(Math.abs(decodeSrgb(code / 255) - linear)).toBeLessThan(1e-15);
});

// The same derivation; six decimals are given, so half of the last one is the tolerance.
test.each([
  [0.0031308, 10.314734],
  [0.01, 25.46247],
  [0.05, 63.189135],
  [0.1, 89.043504],
  [0.18, 117.645813],
  [0.2, 123.554947],
  [0.25, 136.960176],
  [0.5, 187.516031],
  [0.75, 224.61038],
  [0.9, 243.445229],
  [1, 255],
])('linear %d encodes to %d', (linear, code) => {
  expect(Math.abs(encodeSrgb(linear) * 255 - code)).toBeLessThan(5e-7);
});

test('decoding agrees with culori for all 8-bit and 16-bit codes', () => {
  for (const max of [255, 65535]) {
    let worst = 0;
    for (let code = 0; code <= max; code++) {
      const v = code / max;
      worst = Math.max(worst, ulpsBetween(decodeSrgb(v), toLinear({ mode: 'rgb', r: v, g: 0, b: 0 }).r));
    }
    expect(worst).toBeLessThanOrEqual(STATED + JUDGE);
  }
});

test('decode then encode is identity on all codes', () => {
  for (const max of [255, 65535]) {
    const wrong = upTo(max).filter((code) => Math.round(encodeSrgb(decodeSrgb(code / max)) * max) !== code);
    expect(wrong).toEqual([]);
  }
});

test('black and white are exact', () => {
  expect([decodeSrgb(0), decodeSrgb(1), encodeSrgb(0)]).toEqual([0, 1, 0]);
  expect(ulpsBetween(encodeSrgb(1), 1)).toBeLessThanOrEqual(2);
});

test('negative values are mirrored, and both functions go on above 1', () => {
  fc.assert(
    fc.property(fc.double({ min: 1e-6, max: 4, noNaN: true }), (v) => {
      expect(decodeSrgb(-v)).toBe(-decodeSrgb(v));
      expect(encodeSrgb(-v)).toBe(-encodeSrgb(v));
      // 5 and 6 ulp, of which 0.055 taken off a small value makes up to 2.4 times more. At the joint the rounded constants
      // leave a step of 8e-9 that no round trip can close.
      const step = Math.abs(v - 0.04045) < 1e-6 ? 1e-6 : 0;
      expect(Math.abs(encodeSrgb(decodeSrgb(v)) / v - 1)).toBeLessThan(11 * 2.4 * 2 ** -52 + step);
    }),
  );
});

test('the standard has its own rounded constants', () => {
  // From the exact crossing or the tangent-matched constants there would be no step. KDFS 1.4, note on both.
  const line = 0.04045 / 12.92;
  expect(decodeSrgb(0.04045)).toBe(line);
  const step = decodeSrgb(0.04045 * (1 + 2 ** -50)) - line;
  expect(Math.abs(step)).toBeGreaterThan(1e-9);
  expect(Math.abs(step)).toBeLessThan(1e-8);
});

test('no code depends on the older limit 0.03928', () => {
  // WCAG before May 2021; 10 / 255 < 0.03928 < 0.04045 < 11 / 255.
  expect(10 / 255).toBeLessThan(0.03928);
  expect(11 / 255).toBeGreaterThan(0.04045);
});

// Derived: averages of codes in linear light against the averages of the codes themselves. 186 for the first row would be a
// plain power of 2.2.
test.each([
  [[0, 255], 188],
  [[0, 0, 0, 255], 137],
  [[0, 255, 255, 255], 225],
  [[0, 128], 92],
  [[64, 192], 146],
  [[100, 200], 160],
])('the linear average of %j is %d', (codes, average) => {
  const mean = codes.reduce((sum, code) => sum + decodeSrgb(code / 255), 0) / codes.length;
  expect(Math.round(encodeSrgb(mean) * 255)).toBe(average);
});

test('a linear intermediate needs 12 bits', () => {
  // Derived: codes that survive rounding to b bits. Why the pipeline keeps floats and nothing narrower.
  const surviving = (bits: number): number => {
    const max = 2 ** bits - 1;
    const codes = Array.from({ length: 256 }, (_, code) => Math.round(decodeSrgb(code / 255) * max) / max);
    return codes.filter((linear, code) => Math.round(encodeSrgb(linear) * 255) === code).length;
  };
  const distinct = new Set(Array.from({ length: 256 }, (_, code) => Math.round(decodeSrgb(code / 255) * 255)));
  expect(distinct.size).toBe(183);
  expect(surviving(11)).toBeLessThan(256);
  expect(surviving(12)).toBe(256);
});

describe('tables', () => {
  test('srgb holds the rounded decoding of each code, linear the code itself', () => {
    for (const depth of [8, 16] as const) {
      const max = 2 ** depth - 1;
      const srgb = decodeTable(depth, 'srgb');
      const linear = decodeTable(depth, 'linear');
      expect(srgb).toEqual(Float32Array.from(upTo(max), (code) => decodeSrgb(code / max)));
      expect(linear).toEqual(Float32Array.from(upTo(max)));
    }
  });

  test('hold the same bits on every machine', () => {
    // FNV-1a over the bits of the 65536 entries: moves only with the algorithm revision.
    const bits = new Uint32Array(decodeTable(16, 'srgb').buffer);
    expect(bits.reduce((hash, each) => Math.imul(hash ^ each, 0x01000193), 0x811c9dc5 | 0)).toBe(GOLDEN);
  });
});

const GOLDEN = 735579854;

/** The codes 0..max. */
function upTo(max: number): number[] {
  return Array.from({ length: max + 1 }, (_, code) => code);
}
