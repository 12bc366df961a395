import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { methodOf } from '../../core/chain/method.ts';
import type { Extent } from '../../core/raster/raster.ts';
import { AREA, extents, kernels, LINEAR, seeds, sizes, smallExtents, WEIGHTS, wraps } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';
import { treatment } from '../fixtures/treatment.ts';
import { type Doubles, doubles, transposed } from '../reference/doubles.ts';
import { filters, gathered, mostTaps } from './filters.ts';
import { holds } from './holds.ts';

// Laws of one resample on values that were never rounded to codes.

const cases = fc.record({
  seed: seeds,
  from: smallExtents,
  to: smallExtents,
  kernel: kernels(LINEAR),
  wrap: wraps,
});

it('has taps that sum to exactly one', () => {
  holds(fc.tuple(kernels(LINEAR), sizes, sizes), 300, ([kernel, from, to]) => {
    const square = (n: number): Extent => ({ width: n, height: n });
    const method = methodOf(square(from), square(to), treatment({ kernel: { minify: kernel, magnify: kernel } }), 'it');
    if (method.kind !== 'rows') return;
    const { count, start, weights } = method.x;
    for (let j = 0; j < to; j++) {
      // Multiples of 2^-24: double precision adds them exactly.
      const sum = weights
        .subarray(start[j], start[j] + count[j])
        .reduce((total, weight) => total + weight * 2 ** 24, 0);
      expect(sum).toBe(2 ** 24);
    }
  });
});

it('does not drift: taps are centered on their target texels in the mean', () => {
  holds(fc.tuple(kernels(LINEAR), sizes, sizes), 200, ([kernel, from, to]) => {
    if (kernel.name === 'box' && to > from) return;
    const square = (n: number): Extent => ({ width: n, height: n });
    const method = methodOf(square(from), square(to), treatment({ kernel: { minify: kernel, magnify: kernel } }), 'it');
    if (method.kind !== 'rows') return;
    const { first, count, start, weights } = method.x;
    let drift = 0;
    for (let j = 0; j < to; j++) {
      let centroid = 0;
      for (let k = 0; k < count[j]; k++) centroid += weights[start[j] + k] * (first[j] + k + 0.5);
      drift += centroid - ((j + 0.5) * from) / to;
    }
    // Mirrored phases cancel exactly; what is left is the rounding of these sums, of values up to 64.
    expect(Math.abs(drift / to)).toBeLessThanOrEqual(1e-12);
  });
});

describe.each(filters)('$name', (filter) => {
  const run = (image: Doubles, to: Extent, { kernel, wrap }: Pick<Case, 'kernel' | 'wrap'>): Doubles =>
    filter.filter(image, to, { minify: kernel, magnify: kernel }, wrap);
  const bound = (from: Extent, to: Extent): number =>
    gathered(filter, Math.max(mostTaps(from.width, to.width), mostTaps(from.height, to.height)));

  it('keeps a constant: the taps of every phase sum to one', () => {
    holds(fc.tuple(cases, extents, extents), 150, ([one, from, to]) => {
      const image = doubles(from.width, from.height, 1);
      image.values.fill(1);
      const result = run(image, to, one);
      near(result, { ...result, values: new Float64Array(result.values.length).fill(1) }, bound(from, to));
    });
  });

  it('copies an axis of equal extents', () => {
    holds(cases, 100, (one) => {
      const image = noise(one.seed, one.from, 2);
      expect(run(image, one.from, one).values).toEqual(image.values);
      const tall = run(image, { width: one.from.width, height: one.to.height }, one);
      const lone = column(image, 0);
      expect(column(tall, 0).values).toEqual(run(lone, { width: 1, height: one.to.height }, one).values);
    });
  });

  it('mirrors its result when the source is mirrored', () => {
    holds(cases, 150, (one) => {
      // Magnifying, box is nearest, which has ties.
      if (one.kernel.name === 'box' && (one.to.width > one.from.width || one.to.height > one.from.height)) return;
      const image = noise(one.seed, one.from, 2);
      const expected = mirrored(run(image, one.to, one));
      // Mirrored taps are equal and a pair's sum has no order, so the engine is exact.
      const allowed = filter.rounding === 2 ** -53 ? bound(one.from, one.to) : 0;
      near(run(mirrored(image), one.to, one), expected, allowed);
    });
  });

  it('transposes its result when the source is transposed', () => {
    holds(cases, 100, (one) => {
      const image = noise(one.seed, one.from, 2);
      const turned = run(transposed(image), turnedExtent(one.to), { ...one, wrap: { x: one.wrap.y, y: one.wrap.x } });
      near(transposed(turned), run(image, one.to, one), 2 * bound(one.from, one.to));
    });
  });

  it('with repeat, equals the middle of the tiled image', () => {
    holds(cases, 100, ({ seed, from, to, kernel }) => {
      const repeat = { kernel, wrap: { x: 'repeat', y: 'repeat' } } as const;
      const image = noise(seed, from, 1);
      const tiled = run(tile(image), { width: to.width * 3, height: to.height * 3 }, repeat);
      near(middle(tiled, to), run(image, to, repeat), 2 * bound(from, to));
    });
  });

  it('is linear: the result of a sum is the sum of the results', () => {
    holds(cases, 100, (one) => {
      const a = noise(one.seed, one.from, 1);
      const b = noise(one.seed + 1, one.from, 1);
      const mixed = { ...a, values: a.values.map((value, i) => Math.fround(value / 2 - b.values[i] / 4)) };
      const [ofA, ofB, ofMix] = [a, b, mixed].map((image) => run(image, one.to, one));
      const sum = { ...ofA, values: ofA.values.map((value, i) => value / 2 - ofB.values[i] / 4) };
      // The mixture itself is rounded to float32 before it is filtered.
      near(ofMix, sum, 2 * bound(one.from, one.to) + 2 ** -24);
    });
  });

  it('keeps the mean with box at all sizes', () => {
    holds(cases, 100, ({ seed, from, to, wrap }) => {
      const smaller = { width: Math.min(from.width, to.width), height: Math.min(from.height, to.height) };
      const image = noise(seed, from, 1);
      for (const name of AREA) {
        const result = run(image, smaller, { kernel: { name, params: {} }, wrap });
        expect(Math.abs(mean(result) - mean(image))).toBeLessThanOrEqual(bound(from, smaller));
      }
    });
  });

  it('keeps the mean with every weights kernel for even extents and repeat', () => {
    holds(fc.tuple(seeds, kernels(WEIGHTS), sizes, sizes), 100, ([seed, kernel, halfWidth, halfHeight]) => {
      const to = { width: Math.ceil(halfWidth / 2), height: Math.ceil(halfHeight / 2) };
      const from = { width: to.width * 2, height: to.height * 2 };
      const image = noise(seed, from, 1);
      const result = run(image, to, { kernel, wrap: { x: 'repeat', y: 'repeat' } });
      expect(Math.abs(mean(result) - mean(image))).toBeLessThanOrEqual(bound(from, to));
    });
  });

  it('reads a wrapped axis as the image that the wrap describes', () => {
    holds(cases, 60, ({ seed, from, to, kernel }) => {
      // A clamped or mirrored image equals the middle of one that really is continued so.
      for (const wrap of ['clamp-to-edge', 'mirror-repeat'] as const) {
        const image = noise(seed, { width: from.width, height: 1 }, 1);
        const long = continued(image, wrap, 8);
        const at = to.width * 8;
        const result = run(long, { width: to.width * 17, height: 1 }, { kernel, wrap: { x: 'repeat', y: 'repeat' } });
        const cut = { ...image, width: to.width, values: result.values.slice(at, at + to.width) };
        near(
          run(image, { width: to.width, height: 1 }, { kernel, wrap: { x: wrap, y: wrap } }),
          cut,
          2 * bound(from, to),
        );
      }
    });
  });

  it('weighs a transparent border in the sum of the taps', () => {
    holds(cases, 60, ({ seed, from, to, kernel }) => {
      const image = noise(seed, { width: from.width, height: 1 }, 1);
      const long = doubles(from.width * 17, 1, 1);
      long.values.set(image.values, from.width * 8);
      const result = run(long, { width: to.width * 17, height: 1 }, { kernel, wrap: { x: 'repeat', y: 'repeat' } });
      const cut = { ...image, width: to.width, values: result.values.slice(to.width * 8, to.width * 9) };
      const wrap = { x: 'clamp-to-border', y: 'clamp-to-border' } as const;
      near(run(image, { width: to.width, height: 1 }, { kernel, wrap }), cut, 2 * bound(from, to));
    });
  });
});

type Case = typeof cases extends fc.Arbitrary<infer T> ? T : never;

/** Values -1..1 that float32 holds exactly. */
function noise(seed: number, extent: Extent, channels: number): Doubles {
  const next = numbers(seed);
  const image = doubles(extent.width, extent.height, channels);
  for (let i = 0; i < image.values.length; i++) image.values[i] = Math.fround(next() / 2 ** 31 - 1);
  return image;
}

function near(actual: Doubles, expected: Doubles, allowed: number): void {
  let worst = 0;
  for (let i = 0; i < expected.values.length; i++) {
    worst = Math.max(worst, Math.abs(actual.values[i] - expected.values[i]));
  }
  expect(actual.values.length).toBe(expected.values.length);
  expect(worst).toBeLessThanOrEqual(allowed);
}

function mean(image: Doubles): number {
  return image.values.reduce((sum, value) => sum + value, 0) / image.values.length;
}

function turnedExtent({ width, height }: Extent): Extent {
  return { width: height, height: width };
}

function pick(image: Doubles, extent: Extent, from: (x: number, y: number) => readonly [number, number]): Doubles {
  const result = doubles(extent.width, extent.height, image.channels);
  for (let y = 0; y < extent.height; y++) {
    for (let x = 0; x < extent.width; x++) {
      const [u, v] = from(x, y);
      for (let c = 0; c < image.channels; c++) {
        result.values[(y * extent.width + x) * image.channels + c] =
          image.values[(v * image.width + u) * image.channels + c];
      }
    }
  }
  return result;
}

function mirrored(image: Doubles): Doubles {
  return pick(image, image, (x, y) => [image.width - 1 - x, image.height - 1 - y]);
}

function column(image: Doubles, x: number): Doubles {
  return pick(image, { width: 1, height: image.height }, (_, y) => [x, y]);
}

function tile(image: Doubles): Doubles {
  const extent = { width: image.width * 3, height: image.height * 3 };
  return pick(image, extent, (x, y) => [x % image.width, y % image.height]);
}

function middle(image: Doubles, extent: Extent): Doubles {
  return pick(image, extent, (x, y) => [x + extent.width, y + extent.height]);
}

/** One row with `times` lengths of itself, continued by the wrap mode, on either side. */
function continued(image: Doubles, wrap: 'clamp-to-edge' | 'mirror-repeat', times: number): Doubles {
  const n = image.width;
  return pick(image, { width: n * (2 * times + 1), height: 1 }, (x) => {
    const i = x - n * times;
    if (wrap === 'clamp-to-edge') return [Math.min(n - 1, Math.max(0, i)), 0];
    const m = ((i % (2 * n)) + 2 * n) % (2 * n);
    return [m < n ? m : 2 * n - 1 - m, 0];
  });
}
