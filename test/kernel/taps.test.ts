import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { defaultParams } from '../../core/kernel/table.ts';
import { buildTaps, isSymmetric, maxTaps, type Taps, tapBytes } from '../../core/kernel/taps.ts';
import { weighAxis } from '../reference/axis.ts';
import { anyParams, extents, kernelNamed, tapped, tapsOf } from './cases.ts';

const UNIT = 2 ** 24;

/** A tap is its exact weight rounded up or down to 1 / 2^24; double precision is far finer. */
const ROUNDED = 1 / UNIT;

function build(name: string, from: number, to: number): Taps {
  const kernel = kernelNamed(name);
  return buildTaps(kernel, defaultParams(kernel), from, to);
}

const over = (divisor: number, ...parts: number[]): number[] => parts.map((part) => part / divisor);
const mirrored = (half: readonly number[]): number[] => [...half, ...half.slice().reverse()];

function expectWithin(actual: readonly number[], expected: readonly number[], tolerance: number): void {
  expect(actual).toHaveLength(expected.length);
  actual.forEach((value, k) => {
    expect(Math.abs(value - expected[k]), `tap ${k} of ${actual}`).toBeLessThan(tolerance);
  });
}

describe('taps of 2:1', () => {
  // Exact, derived: the kernel stretched to twice its width at distances 1/4, 3/4, ...; those over 2^24 come out exact.
  test.each<[string, number[], number]>([
    ['box', over(2, 1), 0],
    ['triangle', over(8, 1, 3), 0],
    ['hermite', over(64, 5, 27), 0],
    ['catmull-rom', over(256, -3, -9, 29, 111), 0],
    ['mitchell', over(2304, -17, -27, 295, 901), ROUNDED],
    ['b-spline', over(768, 1, 27, 121, 235), ROUNDED],
  ])('%s, exact', (name, half, tolerance) => {
    const taps = tapsOf(build(name, 64, 32), 7);
    if (tolerance === 0) expect(taps).toEqual(mirrored(half));
    else expectWithin(taps, mirrored(half), tolerance);
  });

  // Derived, printed to eight decimals.
  test.each<[string, number[]]>([
    ['lanczos2', [-0.00886333, -0.04194003, 0.11650009, 0.43430327]],
    ['lanczos3', [0.00368914, 0.01505614, -0.03399863, -0.06663732, 0.13550528, 0.44638539]],
    ['kaiser', [0.00630681, 0.01623236, -0.03391876, -0.06568918, 0.13399173, 0.44307705]],
  ])('%s, decimal', (name, half) => {
    expectWithin(tapsOf(build(name, 64, 32), 7), mirrored(half), ROUNDED + 5e-9);
  });

  // Independent and published: C. Bloom, "Optimal Halve for Doubling Filter", 2011, five decimals; there our lanczos2 is
  // called lanczos4 for its taps.
  test.each<[string, number[]]>([
    ['triangle', [0.125, 0.375]],
    ['mitchell', [-0.00738, -0.01172, 0.12804, 0.39106]],
    ['lanczos2', [-0.00886, -0.04194, 0.1165, 43430e-5]],
  ])('%s, as published', (name, half) => {
    expectWithin(tapsOf(build(name, 64, 32), 7), mirrored(half), ROUNDED + 5e-6);
  });

  // Overshoot of a step with its edge on an even or odd source texel: running sums of the taps, two apart. Exact but for the
  // rounding of at most eight taps; Lanczos derived to seven decimals.
  test.each<[string, number, number, number]>([
    ['catmull-rom', 3 / 256, 12 / 256, 8 * ROUNDED],
    ['mitchell', 17 / 2304, 44 / 2304, 8 * ROUNDED],
    ['lanczos2', 0.0088633, 0.0508034, 8 * ROUNDED + 5e-8],
    ['lanczos3', 0.0152534, 0.0818907, 12 * ROUNDED + 5e-8],
  ])('%s overshoots a step by %d or %d', (name, small, large, tolerance) => {
    const sums: number[] = [];
    for (const weight of tapsOf(build(name, 64, 32), 7)) sums.push((sums.at(-1) ?? 0) + weight);
    const peaks = [0, 1].map((parity) => Math.max(...sums.filter((_, k) => k % 2 === parity)) - 1);
    expectWithin(
      peaks.sort((a, b) => a - b),
      [small, large],
      tolerance,
    );
  });
});

describe('box for odd extents: (n - x, n, x + 1) / (2n + 1), exact overlap of areas', () => {
  test.each<[number, number, number[][]]>([
    [3, 1, [[1, 1, 1]]],
    [
      5,
      2,
      [
        [2, 2, 1],
        [1, 2, 2],
      ],
    ],
    [
      7,
      3,
      [
        [3, 3, 1],
        [2, 3, 2],
        [1, 3, 3],
      ],
    ],
    [
      9,
      4,
      [
        [4, 4, 1],
        [3, 4, 2],
        [2, 4, 3],
        [1, 4, 4],
      ],
    ],
  ])('%d to %d', (from, to, rows) => {
    const taps = build('box', from, to);
    rows.forEach((row, x) => {
      expect(taps.first[x]).toBe(2 * x);
      expectWithin(tapsOf(taps, x), over(from, ...row), ROUNDED);
    });
  });

  test('any odd extent', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 8191 }), (n) => {
        const taps = build('box', 2 * n + 1, n);
        for (const x of [0, n >> 1, n - 1]) expectWithin(tapsOf(taps, x), over(2 * n + 1, n - x, n, x + 1), ROUNDED);
      }),
    );
  });

  test('each source texel has the same share in the whole level', () => {
    // So the mean stays: a box of two that drops the last column would give it none. Rounding: two taps a source texel.
    fc.assert(
      fc.property(extents, ([a, b]) => {
        const [to, from] = [Math.min(a, b), Math.max(a, b)];
        const taps = build('box', from, to);
        const shares = new Float64Array(from);
        for (let j = 0; j < to; j++) {
          tapsOf(taps, j).forEach((weight, k) => {
            shares[taps.first[j] + k] += weight;
          });
        }
        expect(shares.filter((share) => Math.abs(share - to / from) >= 2 * ROUNDED)).toEqual(new Float64Array());
      }),
    );
  });
});

describe('area and point', () => {
  test('even at 3 to 5, by hand', () => {
    const taps = build('even', 3, 5);
    expect(Array.from(taps.first)).toEqual([0, 0, 1, 1, 2]);
    [[1], over(3, 2, 1), [1], over(3, 1, 2), [1]].forEach((row, j) => {
      expectWithin(tapsOf(taps, j), row, ROUNDED);
    });
  });

  test('box magnifying is nearest, even minifying is box', () => {
    fc.assert(
      fc.property(extents, ([a, b]) => {
        const [small, large] = [Math.min(a, b), Math.max(a, b)];
        expect(build('box', small, large)).toEqual(build('nearest', small, large));
        expect(build('even', large, small)).toEqual(build('box', large, small));
      }),
    );
  });

  test('nearest is floor(u)', () => {
    // By hand: centers 7/6, 21/6, 35/6 of 7 to 3; 5 to 8.
    expect(Array.from(build('nearest', 7, 3).first)).toEqual([1, 3, 5]);
    expect(Array.from(build('nearest', 5, 8).first)).toEqual([0, 0, 1, 2, 2, 3, 4, 4]);
    // At 2:1 the center lies on an edge and floor takes the right texel.
    expect(Array.from(build('nearest', 6, 3).first)).toEqual([1, 3, 5]);
  });
});

describe.each(tapped.map((kernel) => [kernel.name, kernel] as const))('%s', (_, kernel) => {
  const cases = fc.tuple(extents, anyParams(kernel)).map(([[from, to], params]) => buildTaps(kernel, params, from, to));

  test('taps sum to exactly 1 and are whole multiples of 2^-24', () => {
    fc.assert(
      fc.property(cases, (taps) => {
        for (let j = 0; j < taps.to; j++) {
          let sum = 0;
          for (const weight of tapsOf(taps, j)) {
            if (!Number.isInteger(weight * UNIT)) throw new RangeError(`${weight} is no multiple`);
            sum += weight * UNIT;
          }
          if (sum !== UNIT) throw new RangeError(`target ${j} of ${taps.from} to ${taps.to} sums to ${sum}`);
        }
      }),
      { numRuns: 60 },
    );
  });

  test('taps agree with the reference in double precision', () => {
    fc.assert(
      fc.property(extents, anyParams(kernel), ([from, to], params) => {
        if (from * to > 90000) return;
        const taps = buildTaps(kernel, params, from, to);
        weighAxis({ name: kernel.name, params }, from, to).forEach((expected, j) => {
          const left = new Map(expected.map((tap) => [tap.index, tap.weight]));
          const weights = tapsOf(taps, j);
          // Above 1 float32 holds even multiples alone, and what is left over goes to the others.
          const most = weights.some((weight) => weight > 1) ? 2 * ROUNDED : ROUNDED;
          const errors = weights.map((weight, k) => weight - (left.get(taps.first[j] + k) ?? 0));
          for (const k of weights.keys()) left.delete(taps.first[j] + k);
          const wrong = [...errors, ...left.values()].filter((error) => Math.abs(error) >= most);
          if (wrong.length > 0) throw new RangeError(`target ${j} of ${from} to ${to} is off by ${wrong}`);
        });
      }),
      { numRuns: 40 },
    );
  });

  test('equal extents are a copy', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 16384 }), anyParams(kernel), (n, params) => {
        const taps = buildTaps(kernel, params, n, n);
        expect(Array.from(taps.weights)).toEqual([1]);
        expect(taps.first.every((first, j) => first === j && taps.count[j] === 1)).toBe(true);
      }),
      { numRuns: 10 },
    );
  });

  // nearest decides ties by floor, and box is nearest when magnifying: neither mirrors there.
  const mirroring = cases.filter((taps) => kernel.name !== 'box' || taps.to <= taps.from);

  test.skipIf(kernel.kind === 'point')('the mirrored target has the mirrored taps, exactly', () => {
    fc.assert(
      fc.property(mirroring, (taps) => {
        for (let j = 0; j < taps.to; j++) {
          const other = taps.to - 1 - j;
          const last = taps.first[other] + taps.count[other] - 1;
          if (taps.first[j] !== taps.from - 1 - last) throw new RangeError(`target ${j} starts elsewhere`);
          if (tapsOf(taps, j).join() !== tapsOf(taps, other).reverse().join())
            throw new RangeError(`target ${j} differs`);
          if (2 * j === taps.to - 1 && !isSymmetric(taps, j)) throw new RangeError('the middle target is lopsided');
        }
      }),
      { numRuns: 40 },
    );
  });

  test.skipIf(kernel.kind === 'point')('taps do not drift', () => {
    fc.assert(
      fc.property(mirroring, (taps) => {
        let drift = 0;
        for (let j = 0; j < taps.to; j++) {
          const center = ((2 * j + 1) * taps.from) / (2 * taps.to) - 0.5;
          tapsOf(taps, j).forEach((weight, k) => {
            drift += weight * (taps.first[j] + k - center);
          });
        }
        // Mirrored targets cancel but for the rounding of the sum in double precision: 1e-12 is a texel's 2^-40.
        expect(Math.abs(drift / taps.to)).toBeLessThan(1e-12);
      }),
      { numRuns: 40 },
    );
  });

  test('phases repeat: n to m is the start of 3n to 3m', () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 100 }), fc.integer({ min: 1, max: 100 }), (from, to) => {
        const one = buildTaps(kernel, defaultParams(kernel), from, to);
        const three = buildTaps(kernel, defaultParams(kernel), 3 * from, 3 * to);
        const firsts = Array.from({ length: 3 * to }, (_, j) => one.first[j % to] + from * Math.floor(j / to));
        expect(Array.from(three.first)).toEqual(firsts);
        const wrong = firsts.filter((_, j) => tapsOf(three, j).join() !== tapsOf(one, j % to).join());
        expect(wrong).toEqual([]);
      }),
      { numRuns: 20 },
    );
  });

  test('the largest extents', () => {
    for (const [from, to] of [
      [16384, 1],
      [16384, 16383],
      [1, 16384],
    ]) {
      const taps = buildTaps(kernel, defaultParams(kernel), from, to);
      const sums = Array.from({ length: to }, (_, j) => tapsOf(taps, j).reduce((sum, weight) => sum + weight, 0));
      expect(sums.filter((sum) => sum !== 1)).toEqual([]);
    }
  });
});

test('fractions of one size go to mirrored pairs, an odd remainder to the middle', () => {
  // 2^24 = 5 * 3355443 + 1 and 2^24 = 7 * 2396745 + 1: the middle tap takes the one unit left over.
  expect(tapsOf(build('box', 5, 1), 0).map((weight) => weight * UNIT)).toEqual([
    3355443, 3355443, 3355444, 3355443, 3355443,
  ]);
  // 2^24 = 11 * 1525201 + 5: the middle takes one, the two outermost pairs the other four.
  expect(tapsOf(build('box', 11, 1), 0).map((weight) => weight * UNIT - 1525201)).toEqual([
    1, 1, 0, 0, 0, 1, 0, 0, 0, 1, 1,
  ]);
});

test('a tap above 1 is held exactly and the sum stays 1', () => {
  // A sinc cut at 2 texels: close to a source center its middle weight is about 1 - 1.6 t^2, the sum about 1 - t / 2.
  const taps = buildTaps(kernelNamed('kaiser'), { alpha: 0, width: 2 }, 5, 101);
  const all = Array.from({ length: 101 }, (_, j) => tapsOf(taps, j));
  expect(all.filter((weights) => Math.max(...weights) > 1).length).toBeGreaterThan(10);
  expect(all.filter((weights) => weights.reduce((sum, weight) => sum + weight * UNIT, 0) !== UNIT)).toEqual([]);
});

test('sizes that helpers tell', () => {
  const taps = build('catmull-rom', 8, 4);
  expect(maxTaps(taps)).toBe(8);
  expect(tapBytes(taps)).toBe(3 * 4 * 4 + 8 * 4);
});

test.each<[string, Record<string, number>, number, number, RegExp]>([
  ['box', {}, 0, 4, /^Expected integer 1\.\.16384 for from but received 0$/],
  ['box', {}, 4, 16385, /^Expected integer 1\.\.16384 for to but received 16385$/],
  ['box', {}, 4.5, 4, /for from but received 4.5$/],
  ['keys', { a: 0.5 }, 4, 2, /^Expected -2\.\.0 for keys\.a but received 0\.5$/],
  ['kaiser', { alpha: 4 }, 4, 2, /^Expected 1\.\.8 for kaiser\.width but received undefined$/],
  ['gaussian', { sigma: Number.NaN }, 4, 2, /for gaussian\.sigma but received NaN$/],
])('%s %j from %d to %d is refused', (name, params, from, to, message) => {
  const call = () => buildTaps(kernelNamed(name), params, from, to);
  expect(call).toThrow(RangeError);
  expect(call).toThrow(message);
});

test.each(['monotone', 'detail', 'majority', 'epx'])('%s has no taps', (name) => {
  expect(() => build(name, 4, 2)).toThrow(TypeError);
});

describe('taps that were made before', () => {
  test('are shared by who asks for the same, and by nobody else', () => {
    const kernel = kernelNamed('mitchell');
    const params = defaultParams(kernel);
    const taps = buildTaps(kernel, params, 64, 32);
    expect(buildTaps(kernel, { ...params }, 64, 32)).toBe(taps);
    const [name] = Object.keys(params);
    for (const other of [
      buildTaps(kernel, { ...params, [name]: params[name] / 2 }, 64, 32),
      buildTaps(kernelNamed('b-spline'), defaultParams(kernelNamed('b-spline')), 64, 32),
    ]) {
      expect([other.from, other.to]).toEqual([64, 32]);
      expect(tapsOf(other, 7)).not.toEqual(tapsOf(taps, 7));
    }
    expect([buildTaps(kernel, params, 64, 16).to, buildTaps(kernel, params, 63, 32).from]).toEqual([16, 63]);
  });

  test('are few', () => {
    const kernel = kernelNamed('box');
    const first = buildTaps(kernel, {}, 1000, 1);
    for (let from = 2; from < 100; from++) buildTaps(kernel, {}, from, 1);
    expect(buildTaps(kernel, {}, 1000, 1)).not.toBe(first);
    const large = buildTaps(kernel, {}, 16383, 8191);
    expect(buildTaps(kernel, {}, 16383, 8191)).not.toBe(large);
  });
});
