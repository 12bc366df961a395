import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { buildSlopes, slopeAt, slopeRows } from '../../core/resample/slopes.ts';
import { slopeRow } from '../reference/monotone.ts';
import { interiorTangents, interpolate } from './uneven.ts';

const single = Math.fround;

/** A row resampled with clamped edges. */
function resample(row: readonly number[], to: number): number[] {
  const slopes = buildSlopes(row.length, to);
  const read = (i: number): number => row[Math.min(row.length - 1, Math.max(0, i))];
  return Array.from({ length: to }, (_, j) => {
    const left = slopes.left[j];
    return slopeAt(slopes, j, read(left - 1), read(left), read(left + 1), read(left + 2));
  });
}

/** The value half-way between the second and the third of four samples. */
function middle(a: number, b: number, c: number, d: number): number {
  // 2 to 3: the middle target lies between the two samples.
  return slopeAt(buildSlopes(2, 3), 1, a, b, c, d);
}

describe('the reference for uneven spacing', () => {
  // The set known as RPN14, as several test suites give it; Fritsch and Carlson's.
  const x = [7.99, 8.09, 8.19, 8.7, 9.2, 10, 12, 15, 20];
  const y = [0, 2.76429e-5, 4.37498e-2, 0.169183, 0.469428, 0.94374, 0.998636, 0.999919, 0.999994];

  test('has the tangents and values that SciPy 1.10.1 finds for RPN14', () => {
    // Ten decimals of tangents, twelve of values.
    const tangents = [0.0005525087, 0.3358768346, 0.3494491677, 0.5969582389, 0.0603218455, 0.0009003954, 0.0000314247];
    interiorTangents(x, y).forEach((tangent, k) => {
      expect(Math.abs(tangent - tangents[k])).toBeLessThan(5e-11);
    });
    for (const [at, value] of [
      [8.5, 0.116632576939],
      [9, 0.337534326846],
      [9.5, 0.685217945111],
      [11, 0.986043362535],
    ]) {
      expect(Math.abs(interpolate(x, y, at) - value)).toBeLessThan(5e-13);
    }
  });

  test('is the even form where spacing is even', () => {
    const row = fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 4, maxLength: 4 });
    fc.assert(
      fc.property(row, (samples) => {
        // 1 to 3 in steps of one texel: t = 1/2 between samples 1 and 2. Ten roundings of values up to 1.
        const even = slopeRow((i) => samples[i + 1], 2, 3, 1);
        expect(Math.abs(interpolate([0, 1, 2, 3], samples, 1.5) - even)).toBeLessThan(10 * 2 ** -52);
      }),
    );
  });
});

describe('by hand', () => {
  test('0 0 1/4 3/4: tangents 0 and 1/3, half-way 1/12', () => {
    // float32 rounds the tangent, the product with 1/8 and the difference.
    expect(Math.abs(middle(0, 0, 0.25, 0.75) - 1 / 12)).toBeLessThan(3 * 2 ** -26);
  });

  test('a step has no overshoot, and 1/2 in its middle', () => {
    expect(middle(0, 0, 1, 1)).toBe(0.5);
    const row = resample([0, 0, 0, 1, 1, 1], 48);
    expect([Math.min(...row), Math.max(...row)]).toEqual([0, 1]);
  });
});

const float = fc.float({ min: -4, max: 70000, noNaN: true });
const rows = fc.array(float, { minLength: 1, maxLength: 12 });
const sizes = fc.integer({ min: 2, max: 60 });

test('agrees with the reference in double precision', () => {
  fc.assert(
    fc.property(rows, sizes, (row, to) => {
      const read = (i: number): number => row[Math.min(row.length - 1, Math.max(0, i))];
      const largest = Math.max(...row.map(Math.abs));
      resample(row, to).forEach((value, j) => {
        // A tangent is at most twice a difference, a difference at most twice the largest value; weights are below 1/6 and 1.
        // Some ten roundings to 2^-24 of values up to 4 times the largest; products of differences below 2^-63 underflow.
        const most = 40 * 2 ** -24 * largest + 2 ** -60;
        expect(Math.abs(value - slopeRow(read, row.length, to, j))).toBeLessThanOrEqual(most);
      });
    }),
    { numRuns: 300 },
  );
});

test('stays between its two neighbors, and passes through a sample', () => {
  fc.assert(
    fc.property(float, float, float, float, sizes, (a, b, c, d, to) => {
      const slopes = buildSlopes(1, to);
      for (let j = 0; j < to; j++) {
        const value = slopeAt(slopes, j, a, b, c, d);
        expect(value).toBeGreaterThanOrEqual(Math.min(b, c));
        expect(value).toBeLessThanOrEqual(Math.max(b, c));
        expect(value).toBe(single(value));
        // A sum of zeros may lose a sign, which no code shows.
        if (slopes.step[j] === 0) expect(value + 0).toBe((slopes.side[j] < 0 ? b : c) + 0);
      }
    }),
  );
});

test('a rising row rises still', () => {
  fc.assert(
    fc.property(rows, sizes, (row, to) => {
      const rising = row.slice().sort((a, b) => a - b);
      const result = resample(rising, to);
      // Two targets of one interval may each be off by the error above, where the curve is flat.
      const slack = 80 * 2 ** -24 * Math.max(...rising.map(Math.abs));
      expect(result.filter((value, j) => j > 0 && value < result[j - 1] - slack)).toEqual([]);
    }),
  );
});

test('mirrored rows give mirrored rows, a constant stays, both exactly', () => {
  fc.assert(
    fc.property(rows, sizes, float, (row, to, value) => {
      // Both zeros are one number: which of them a clamped value is hangs on the side it comes from.
      const unsigned = (values: readonly number[]): number[] => values.map((each) => each + 0);
      expect(unsigned(resample(row.slice().reverse(), to))).toEqual(unsigned(resample(row, to).reverse()));
      expect(
        resample(
          row.map(() => value),
          to,
        ),
      ).toEqual(new Array(to).fill(value));
    }),
  );
});

test('rows across equal values along', () => {
  fc.assert(
    fc.property(
      fc.array(fc.tuple(float, float, float, float), { minLength: 1, maxLength: 9 }),
      sizes,
      (columns, to) => {
        const slopes = buildSlopes(7, to);
        const pick = (k: number) => Float32Array.from(columns, (column) => column[k]);
        const result = new Float32Array(columns.length);
        const j = to >> 1;
        slopeRows(slopes, j, [pick(0), pick(1), pick(2), pick(3)], result);
        expect(Array.from(result)).toEqual(columns.map(([a, b, c, d]) => slopeAt(slopes, j, a, b, c, d)));
      },
    ),
  );
});

test('positions are exact: mirrored targets mirror', () => {
  fc.assert(
    fc.property(fc.integer({ min: 1, max: 16384 }), fc.integer({ min: 1, max: 500 }), (from, to) => {
      const slopes = buildSlopes(from, to);
      for (const j of [0, to >> 1, to - 1]) {
        const other = to - 1 - j;
        const onSample = slopes.side[j] < 0 && slopes.step[j] === 0;
        if (onSample) continue;
        expect(slopes.left[other]).toBe(from - 2 - slopes.left[j]);
        expect(slopes.side[other] + slopes.side[j]).toBe(0);
        expect(slopes.step[other]).toBe(slopes.step[j]);
      }
    }),
  );
});
