import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { Encoder, encodeThresholds, roundedCode, roundHalfEven, srgbEncoder } from '../../core/color/encoder.ts';
import { decodeSrgb, decodeTable, encodeSrgb } from '../../core/color/transfer.ts';
import { nextFloat } from './ulps.ts';

describe.each([8, 16] as const)('%d bits', (depth) => {
  const max = 2 ** depth - 1;
  const encoder = srgbEncoder(depth);
  const thresholds = encodeThresholds(depth);
  const codes = Array.from({ length: max + 1 }, (_, code) => code);

  test('decode then encode is identity on all codes', () => {
    const table = decodeTable(depth, 'srgb');
    expect(codes.filter((code) => encoder.codeOf(table[code]) !== code)).toEqual([]);
  });

  test('a threshold is the least float32 from which the code is the next one', () => {
    expect(thresholds).toHaveLength(max);
    const wrong = codes.slice(0, max).filter((code) => {
      const exact = decodeSrgb((code + 0.5) / max);
      const below = nextFloat(thresholds[code], -1);
      const isLeast = thresholds[code] >= exact && below < exact;
      const above = nextFloat(thresholds[code], 1);
      const found = [below, thresholds[code], above].map((value) => encoder.codeOf(value) - code);
      return !isLeast || found.join() !== '0,1,1';
    });
    expect(wrong).toEqual([]);
  });

  test('the code is the number of thresholds at or below a value', () => {
    const counted = (value: number): number => thresholds.reduce((count, each) => count + (each <= value ? 1 : 0), 0);
    fc.assert(
      fc.property(fc.float({ min: Math.fround(-0.1), max: Math.fround(1.1), noNaN: true }), (value) => {
        expect(encoder.codeOf(value)).toBe(counted(value));
      }),
    );
  });

  test('the code is the rounded encoding in double precision, but next to a boundary', () => {
    // A float32 threshold lies within 2^-23 of the exact one, which is below max 2.4 2^-23 < 0.02 codes of 16 bits.
    const near = 0.02;
    fc.assert(
      fc.property(fc.double({ min: 0, max: 1, noNaN: true }), (value) => {
        const exact = encodeSrgb(Math.fround(value)) * max;
        if (Math.abs(exact - Math.floor(exact) - 0.5) > near) expect(encoder.codeOf(value)).toBe(Math.round(exact));
      }),
      { numRuns: 2000 },
    );
  });

  test('every number and none has a code', () => {
    const { POSITIVE_INFINITY, NEGATIVE_INFINITY, NaN: none, MIN_VALUE, MAX_VALUE } = Number;
    for (const value of [none, NEGATIVE_INFINITY, -1, -0, 0, MIN_VALUE, 1e-40]) expect(encoder.codeOf(value)).toBe(0);
    for (const value of [1, nextFloat(1, 1), 2, MAX_VALUE, POSITIVE_INFINITY]) expect(encoder.codeOf(value)).toBe(max);
    expect(encoder.codeOf(nextFloat(1, -1))).toBe(max);
  });

  test('buckets hold few thresholds', () => {
    const { starts } = new Encoder(depth);
    const most = starts.slice(1).reduce((worst, start, bucket) => Math.max(worst, start - starts[bucket]), 0);
    expect(most).toBe(depth === 8 ? 1 : 3);
  });
});

test('an 8-bit code is a 16-bit code', () => {
  // c/255 = 257 c / 65535: both depths mean the same light.
  const wide = decodeTable(16, 'srgb');
  expect(decodeTable(8, 'srgb')).toEqual(Float32Array.from({ length: 256 }, (_, code) => wide[code * 257]));
});

describe('linear codes', () => {
  test.each([
    [0.5, 0],
    [1.5, 2],
    [2.5, 2],
    [253.5, 254],
    [254.5, 254],
    [254.50002, 255],
    [127.49999, 127],
    [-3, 0],
    [300, 255],
    [Number.NaN, 0],
    [Number.POSITIVE_INFINITY, 255],
    [Number.NEGATIVE_INFINITY, 0],
  ])('%d rounds to %d', (value, code) => {
    expect(roundedCode(value, 255)).toBe(code);
  });

  test('every code and every half of 16 bits', () => {
    const codes = Array.from({ length: 65535 }, (_, code) => code);
    expect(codes.filter((code) => roundedCode(code, 65535) !== code)).toEqual([]);
    const even = (code: number) => (code % 2 === 0 ? code : code + 1);
    expect(codes.filter((code) => roundedCode(code + 0.5, 65535) !== even(code))).toEqual([]);
  });

  test('the nearest integer', () => {
    fc.assert(
      fc.property(fc.double({ min: -1e6, max: 1e6, noNaN: true }), (value) => {
        expect(Math.abs(roundHalfEven(value) - value)).toBeLessThanOrEqual(0.5);
        expect(Number.isInteger(roundHalfEven(value))).toBe(true);
      }),
    );
  });
});
