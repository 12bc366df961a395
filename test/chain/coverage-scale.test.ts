import fc from 'fast-check';
import { expect, it } from 'vitest';
import { measureCoverage, sampleCount, type WrapPair } from '../../core/chain/coverage.ts';
import { type CoverageScale, findScale } from '../../core/chain/coverage-scale.ts';
import { leastPassing, scaledCode, type UnscaledAlpha } from '../../core/chain/scaled-alpha.ts';
import { type Depth, maxCode, newCodes } from '../../core/raster/raster.ts';
import { depths, oneOf, seeds, wraps } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';
import { holds } from '../laws/holds.ts';

const sides = fc.integer({ min: 1, max: 24 });
const extents = fc.oneof(
  { weight: 24, arbitrary: fc.record({ width: sides, height: sides }) },
  // Counted by texels.
  { weight: 1, arbitrary: fc.constant({ width: 331, height: 199 }) },
);

it('finds what counting every stored code anew finds', () => {
  const cases = fc.record({
    seed: seeds,
    extent: extents,
    depth: depths,
    wrap: wraps,
    // Few distinct alphas, many, and a soft blob's.
    steps: oneOf([2, 5, 65536]),
    slope: oneOf([0, 1, 9]),
    cutoff: oneOf([0, 0.004, 0.3, 0.5, 1]),
    wanted: oneOf([0, 0.1, 1 / 3, 0.5, 0.875, 1]),
  });
  holds(cases, 200, ({ seed, extent, depth, wrap, steps, slope, cutoff, wanted }) => {
    const draw = numbers(seed);
    const alpha: UnscaledAlpha = {
      extent,
      values: Uint16Array.from({ length: extent.width * extent.height }, (_, i) => {
        const x = i % extent.width;
        const soft = slope === 0 ? draw() : Math.min(1, (slope * x) / extent.width) * (0.9 + 0.1 * draw());
        return Math.round((Math.floor(soft * steps) / steps) * 65535);
      }),
    };
    const passing = Math.ceil(cutoff * maxCode(depth));
    expect(findScale(alpha, depth, passing, wrap, wanted)).toEqual(countedAnew(alpha, depth, passing, wrap, wanted));
  });
});

it('finds the least value that passes', () => {
  holds(fc.tuple(fc.double({ min: 1 / 4, max: 16, noNaN: true }), depths, oneOf([0, 1, 128, 255])), 200, (drawn) => {
    const [scale, depth, passing] = drawn;
    let least = 0;
    while (least < 65536 && scaledCode(least, scale, depth) < passing) least++;
    expect(leastPassing(passing, scale, depth)).toBe(least);
  });
});

/** 24 bisections on [1/4, 16], each of which stores the whole level. */
function countedAnew(
  { extent, values }: UnscaledAlpha,
  depth: Depth,
  passing: number,
  wrap: WrapPair,
  wanted: number,
): CoverageScale {
  const samples = sampleCount(extent);
  const count = (scale: number): number => {
    const codes = newCodes(depth, values.length);
    for (let i = 0; i < values.length; i++) codes[i] = scaledCode(values[i], scale, depth);
    return Math.round(measureCoverage({ extent, depth, codes, stride: 1, start: 0 }, passing, wrap) * samples);
  };
  const goal = wanted * samples;
  let [low, high] = [1 / 4, 16];
  if (count(low) >= goal) high = low;
  else if (count(high) <= goal) low = high;
  for (let step = 0; step < 24 && low !== high; step++) {
    const middle = (low + high) / 2;
    if (count(middle) >= goal) high = middle;
    else low = middle;
  }
  const [below, above] = [count(low), count(high)];
  const [nearer, scale] = goal - below < above - goal ? [below, low] : [above, high];
  return { scale: count(1) === nearer ? 1 : scale, residual: (nearer - goal) / samples, tie: above - below > 1 };
}
