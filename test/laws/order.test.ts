import fc from 'fast-check';
import { expect, it } from 'vitest';
import { methodOf } from '../../core/chain/method.ts';
import { kernels, LINEAR, oneOf, REPEATING, seeds, sizes } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';
import { treatment } from '../fixtures/treatment.ts';
import { doubles } from '../reference/doubles.ts';
import { wrapIndex } from '../reference/wrap.ts';
import { engineFilter } from './filters.ts';
import { holds } from './holds.ts';

// The order of sums decides the last bit of every float, and so it decides codes. It is written down: float32, from the
// outermost pair of taps inward, (l + r) w where the phase is symmetric, l wl + r wr elsewhere, a middle tap last.

it('adds the taps of a row in the written order, bit for bit', () => {
  const cases = fc.tuple(seeds, sizes, sizes, kernels(LINEAR), oneOf(REPEATING));
  holds(cases, 200, ([seed, from, to, kernel, wrap]) => {
    const kernelPair = { minify: kernel, magnify: kernel };
    const wraps = { x: wrap, y: wrap };
    const method = methodOf(
      { width: from, height: 1 },
      { width: to, height: 1 },
      treatment({ kernel: kernelPair }),
      'it',
    );
    if (method.kind !== 'rows') return;
    const next = numbers(seed);
    const row = doubles(from, 1, 1);
    for (let x = 0; x < from; x++) row.values[x] = Math.fround(next() / 2 ** 31 - 1);
    const { values } = engineFilter.filter(row, { width: to, height: 1 }, kernelPair, wraps);
    for (let j = 0; j < to; j++) {
      const { first, count, start, weights } = method.x;
      const texels = Array.from({ length: count[j] }, (_, k) => row.values[wrapIndex(first[j] + k, from, wrap) ?? 0]);
      expect(values[j]).toBe(addInward(texels, Array.from(weights.subarray(start[j], start[j] + count[j]))));
    }
  });
});

it('filters along x before y', () => {
  holds(fc.tuple(seeds, kernels(LINEAR)), 30, ([seed, kernel]) => {
    const pair = { minify: kernel, magnify: kernel };
    const wrap = { x: 'repeat', y: 'mirror-repeat' } as const;
    const next = numbers(seed);
    const image = doubles(13, 11, 2);
    for (let i = 0; i < image.values.length; i++) image.values[i] = Math.fround(next() / 2 ** 31 - 1);
    const along = engineFilter.filter(image, { width: 6, height: 11 }, pair, wrap);
    const both = engineFilter.filter(image, { width: 6, height: 5 }, pair, wrap);
    expect(both.values).toEqual(engineFilter.filter(along, { width: 6, height: 5 }, pair, wrap).values);
  });
});

function addInward(texels: readonly number[], weights: readonly number[]): number {
  const f = Math.fround;
  const last = weights.length - 1;
  const symmetric = weights.every((weight, k) => weight === weights[last - k]);
  let sum = 0;
  for (let k = 0; k < last - k; k++) {
    const pair = symmetric
      ? f(f(texels[k] + texels[last - k]) * weights[k])
      : f(f(texels[k] * weights[k]) + f(texels[last - k] * weights[last - k]));
    sum = f(sum + pair);
  }
  return last % 2 === 0 ? f(sum + f(texels[last / 2] * weights[last / 2])) : sum;
}
