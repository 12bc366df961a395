import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { INTERPOLATING, oneOf, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';
import { both } from '../fixtures/treatment.ts';
import { type Doubles, doubles } from '../reference/doubles.ts';
import { wrapIndex } from '../reference/wrap.ts';
import { filters, gathered } from './filters.ts';
import { holds } from './holds.ts';

// What the trade says of its everyday kernels. Taps of a magnified axis: at most 8.

const clamped = { x: 'clamp-to-edge', y: 'clamp-to-edge' } as const;

describe.each(filters)('$name', (filter) => {
  const bound = gathered(filter, 8);

  it('nearest makes no value that the source lacks', () => {
    holds(fc.tuple(seeds, smallExtents, smallExtents, wraps), 100, ([seed, from, to, wrap]) => {
      const image = noise(seed, from.width, from.height);
      const seen = new Set(image.values);
      for (const value of filter.filter(image, to, both('nearest'), wrap).values) expect(seen.has(value)).toBe(true);
    });
  });

  it('bilinear stays within its four neighbors', () => {
    holds(fc.tuple(seeds, smallExtents, fc.integer({ min: 1, max: 5 }), wraps), 60, ([seed, from, grow, wrap]) => {
      const image = noise(seed, from.width, from.height);
      const to = { width: from.width + grow, height: from.height + 2 * grow };
      const result = filter.filter(image, to, both('triangle'), wrap);
      for (let y = 0; y < to.height; y++) {
        for (let x = 0; x < to.width; x++) {
          const near = fourNeighbors(
            image,
            ((x + 0.5) * from.width) / to.width,
            ((y + 0.5) * from.height) / to.height,
            wrap,
          );
          const value = result.values[y * to.width + x];
          expect(value).toBeGreaterThanOrEqual(Math.min(...near) - bound);
          expect(value).toBeLessThanOrEqual(Math.max(...near) + bound);
        }
      }
    });
  });

  it.each([...INTERPOLATING, 'monotone'])('%s passes through its samples', (name) => {
    holds(fc.tuple(seeds, smallExtents, wraps, oneOf([3, 5])), 30, ([seed, from, wrap, factor]) => {
      const image = noise(seed, from.width, from.height);
      const to = { width: from.width * factor, height: from.height * factor };
      const result = filter.filter(image, to, both(name), wrap);
      for (let y = 0; y < from.height; y++) {
        for (let x = 0; x < from.width; x++) {
          const center = (factor - 1) / 2;
          const value = result.values[(y * factor + center) * to.width + x * factor + center];
          expect(Math.abs(value - image.values[y * from.width + x])).toBeLessThanOrEqual(bound);
        }
      }
    });
  });

  it.each([
    ['triangle', 4],
    ['catmull-rom', 16],
    ['mitchell', 16],
    ['b-spline', 16],
    ['lanczos3', 36],
  ])('%s draws on %i texels', (name, count) => {
    // The target texel at (20, 20) of a fourfold enlargement lies at 4.625 between centers, far from every edge.
    let drawn = 0;
    for (let texel = 0; texel < 121; texel++) {
      const impulse = doubles(11, 11, 1);
      impulse.values[texel] = 1;
      const result = filter.filter(impulse, { width: 44, height: 44 }, both(name), clamped);
      if (Math.abs(result.values[20 * 44 + 20]) > 1e-6) drawn++;
    }
    expect(drawn).toBe(count);
  });

  it('a cubic takes its slope at a sample from the neighbors on either side', () => {
    // Sixty-four fold: two targets straddle the sample at 64 * 4 + 31.5; the chord between them differs from the tangent by
    // less than (1/64)^2 / 4 times the third derivative (below 24 for values within -1..1 times 6 * 4 coefficients).
    const row = noise(11, 9, 1);
    const result = filter.filter(row, { width: 576, height: 1 }, both('catmull-rom'), clamped);
    const chord = (result.values[64 * 4 + 32] - result.values[64 * 4 + 31]) * 64;
    expect(Math.abs(chord - (row.values[5] - row.values[3]) / 2)).toBeLessThan(24 / 64 / 2 + 64 * bound);
  });

  it('a cubic is smoother than bilinear', () => {
    // Largest change of slope between neighboring targets of a wave enlarged sixteen times.
    const wave = doubles(32, 1, 1);
    for (let i = 0; i < 32; i++) wave.values[i] = Math.fround(0.5 + 0.4 * Math.sin((i * Math.PI) / 4));
    const bend = (name: string): number => {
      const { values } = filter.filter(wave, { width: 512, height: 1 }, both(name), { x: 'repeat', y: 'repeat' });
      let worst = 0;
      for (let i = 1; i < 511; i++) worst = Math.max(worst, Math.abs(values[i + 1] - 2 * values[i] + values[i - 1]));
      return worst;
    };
    expect(bend('catmull-rom')).toBeLessThan(bend('triangle') / 4);
  });

  it.each([
    // Overshoot of a unit step when interpolating; closed forms worked out from each kernel's formula.
    { name: 'catmull-rom', factor: 3, overshoot: 2 / 27, at: '1/3' },
    { name: 'mitchell', factor: 7, overshoot: 16 / 441, at: '3/7' },
    { name: 'triangle', factor: 3, overshoot: 0, at: 'nowhere' },
    { name: 'hermite', factor: 3, overshoot: 0, at: 'nowhere' },
    { name: 'b-spline', factor: 3, overshoot: 0, at: 'nowhere' },
    { name: 'monotone', factor: 3, overshoot: 0, at: 'nowhere' },
  ])('$name overshoots a step by $overshoot at $at', ({ name, factor, overshoot }) => {
    const step = doubles(16, 1, 1);
    step.values.fill(1, 8);
    const { values } = filter.filter(step, { width: 16 * factor, height: 1 }, both(name), clamped);
    expect(Math.abs(Math.max(...values) - 1 - overshoot)).toBeLessThanOrEqual(bound);
    expect(Math.abs(Math.min(...values) + overshoot)).toBeLessThanOrEqual(bound);
  });

  it('monotone never leaves the two samples it lies between', () => {
    holds(
      fc.tuple(seeds, fc.integer({ min: 2, max: 20 }), fc.integer({ min: 2, max: 6 })),
      100,
      ([seed, n, factor]) => {
        const row = noise(seed, n, 1);
        const { values } = filter.filter(row, { width: n * factor, height: 1 }, both('monotone'), clamped);
        for (let j = 0; j < values.length; j++) {
          const i = Math.floor((j + 0.5) / factor - 0.5);
          const ends = [Math.max(0, i), Math.min(n - 1, i + 1)].map((at) => row.values[at]);
          expect(values[j]).toBeGreaterThanOrEqual(Math.min(...ends) - bound);
          expect(values[j]).toBeLessThanOrEqual(Math.max(...ends) + bound);
        }
      },
    );
  });
});

function fourNeighbors(
  image: Doubles,
  u: number,
  v: number,
  wrap: {
    readonly x: 'clamp-to-edge' | 'repeat' | 'mirror-repeat' | 'clamp-to-border';
    readonly y: 'clamp-to-edge' | 'repeat' | 'mirror-repeat' | 'clamp-to-border';
  },
): number[] {
  const x = Math.floor(u - 0.5);
  const y = Math.floor(v - 0.5);
  return [y, y + 1].flatMap((row) =>
    [x, x + 1].map((column) => {
      const at = wrapIndex(row, image.height, wrap.y) ?? 0;
      return image.values[at * image.width + (wrapIndex(column, image.width, wrap.x) ?? 0)];
    }),
  );
}

function noise(seed: number, width: number, height: number): Doubles {
  const next = numbers(seed);
  const image = doubles(width, height, 1);
  for (let i = 0; i < image.values.length; i++) image.values[i] = Math.fround(next() / 2 ** 31 - 1);
  return image;
}
