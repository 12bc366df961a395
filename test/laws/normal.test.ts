import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { maxCode } from '../../core/raster/raster.ts';
import { depths, kernels, LINEAR, oneOf, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, numbers, withAlpha } from '../fixtures/noise.ts';
import { flat, painted, texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { referenceChain } from '../reference/chain.ts';
import { decodeNormal } from '../reference/normal.ts';
import { builders, engineLevels } from './builders.ts';
import { holds } from './holds.ts';

describe.each(builders)('$name', (builder) => {
  it('writes unit normals at every level below the base', () => {
    holds(fc.tuple(seeds, smallExtents, depths, kernels(LINEAR), wraps), 60, ([seed, extent, depth, kernel, wrap]) => {
      const image = noiseRaster(seed, extent, 3, depth, 'noise');
      const one = treatment({ content: 'normal', kernel: { minify: kernel, magnify: kernel }, wrap });
      const max = maxCode(depth);
      for (const level of builder.levels(image, one).slice(1)) {
        for (let at = 0; at < level.codes.length; at += 3) {
          const length = Math.hypot(...[0, 1, 2].map((c) => (level.codes[at + c] / max) * 2 - 1));
          // Each component is half a code off at most, a code being 2 / max.
          expect(Math.abs(length - 1)).toBeLessThanOrEqual((Math.sqrt(3) / max) * 1.01);
        }
      }
    });
  });

  it('renormalises the base only where it is told to', () => {
    const dull = flat({ width: 2, height: 2 }, 8, [128, 128, 200]);
    const one = treatment({ content: 'normal' });
    expect(builder.levels(dull, one)[0].codes).toEqual(dull.codes);
    const [base] = builder.levels(dull, { ...one, normal: { ...one.normal, base: 'renormalise' } });
    expect(texelAt(base, 1, 1)).toEqual([128, 128, 255]);
  });

  it('carries the un-normalised mean: a level weighs normals by their spread', () => {
    // Left: two normals that nearly cancel (mean length .5). Right: two that agree. Renormalised in between, both halves
    // would count alike.
    const code = (v: number): number => Math.round(((v + 1) / 2) * 65535);
    const tilt = Math.sqrt(3) / 2;
    const row = [
      [0, tilt, 0.5],
      [0, -tilt, 0.5],
      [0.6, 0, 0.8],
      [0.6, 0, 0.8],
    ].map((normal) => normal.map(code));
    const image = painted({ width: 4, height: 1 }, 3, 16, (x) => row[x]);
    const last = texelAt(builder.levels(image, treatment({ content: 'normal' }))[2], 0, 0);
    const mean = [0.6 / 2, 0, (0.5 + 0.8) / 2];
    const length = Math.hypot(...mean);
    mean.forEach((component, axis) => {
      // The sources are half a code off each.
      expect(Math.abs(last[axis] - ((component / length + 1) / 2) * 65535)).toBeLessThanOrEqual(2);
    });
  });

  it('weighs normals by alpha where alpha is opacity, and only there', () => {
    const image = painted({ width: 2, height: 1 }, 4, 8, (x) => (x === 0 ? [255, 128, 128, 0] : [128, 128, 255, 255]));
    const one = treatment({ content: 'normal' });
    expect(texelAt(builder.levels(image, one)[1], 0, 0)).toEqual([128, 128, 255, 128]);
    for (const use of ['mask', 'data'] as const) {
      const [x, , z] = texelAt(builder.levels(image, { ...one, alpha: { ...one.alpha, use } })[1], 0, 0);
      // Both count half: (1, 0, 1) / sqrt 2, give or take what codes cannot say.
      expect(Math.abs(x - z)).toBeLessThanOrEqual(1);
    }
  });

  it('rebuilds z from two channels', () => {
    holds(fc.tuple(seeds, smallExtents, depths), 30, ([seed, extent, depth]) => {
      const next = numbers(seed);
      const max = maxCode(depth);
      const image = painted(extent, 3, depth, () => [next() % (max + 1), next() % (max + 1), 0]);
      const one = treatment({ content: 'normal', normal: { count: 2, base: 'renormalise' } });
      const [base] = builder.levels(image, one);
      for (let y = 0; y < extent.height; y++) {
        for (let x = 0; x < extent.width; x++) {
          const [u, v] = texelAt(image, x, y);
          const expected = decodeNormal(u / max, v / max, null).map((component) => ((component + 1) / 2) * max);
          texelAt(base, x, y).forEach((stored, axis) => {
            // A square root of float32 sums near zero: its error is the root of theirs, 2^-12, half a code of 8 bits.
            expect(Math.abs(stored - expected[axis])).toBeLessThanOrEqual(0.5 + max * 2 ** -12);
          });
        }
      }
    });
  });

  it("raises a packed roughness by the spread of the same file's normals", () => {
    // cos 30 degrees: variance .154701 doubled joins alpha^2 = .5^4.
    const code = (v: number): number => Math.round(((v + 1) / 2) * 65535);
    const image = painted({ width: 2, height: 1 }, 4, 16, (x) => [
      code(x === 0 ? 0.5 : -0.5),
      code(0),
      code(Math.cos(Math.PI / 6)),
      Math.round(0.5 * 65535),
    ]);
    const one = treatment({ content: 'normal', channels: { rgb: 'normal', a: 'roughness' } });
    const rough = texelAt(builder.levels(image, one)[1], 0, 0)[3] / 65535;
    const length = Math.cos(Math.PI / 6);
    // Codes of 16 bits: the length is known to 2e-5, the fourth root halves it again.
    expect(Math.abs(rough - (0.5 ** 4 + (2 * (1 - length)) / length) ** 0.25)).toBeLessThan(1e-4);
  });
});

it('raises a packed roughness as the reference does, whatever the kernel', () => {
  holds(fc.tuple(seeds, smallExtents, kernels(LINEAR), wraps), 40, ([seed, extent, kernel, wrap]) => {
    const image = noiseRaster(seed, extent, 4, 8, 'noise');
    const one = treatment({
      content: 'data',
      channels: { rg: 'normal', b: 'roughness', a: 'data' },
      kernel: { minify: kernel, magnify: kernel },
      wrap,
    });
    const reference = referenceChain(image, one);
    engineLevels(buildChain(image, one)).forEach((level, i) => {
      for (let at = 0; at < level.codes.length; at++) {
        expect(Math.abs(level.codes[at] - reference[i].fractions[at])).toBeLessThanOrEqual(0.5 + 1e-2);
      }
    });
  });
});

it('measures the mean length of normals with box weights, whatever the kernel', () => {
  holds(
    fc.tuple(seeds, smallExtents, kernels(LINEAR), wraps, oneOf(['data', 'opacity'] as const)),
    40,
    ([seed, extent, kernel, wrap, use]) => {
      const image = withAlpha(noiseRaster(seed, extent, 4, 8, 'noise'), seed, 0, 5);
      const one = treatment({ content: 'normal', kernel: { minify: kernel, magnify: kernel }, wrap, alpha: { use } });
      const reference = referenceChain(image, one);
      for (const { level, normalLength } of buildChain(image, one).images) {
        if (level === undefined || level === 0) continue;
        const lengths = Array.from(reference[level].lengths ?? []);
        const known = lengths.filter((length) => !Number.isNaN(length));
        if (known.length < lengths.length) continue;
        const mean = known.reduce((sum, length) => sum + length, 0) / known.length;
        expect(Math.abs((normalLength ?? 0) - mean)).toBeLessThan(1e-5);
      }
    },
  );
});

it('takes box to be as good as any kernel for the last level', () => {
  const up = flat({ width: 8, height: 8 }, 8, [128, 128, 255]);
  for (const level of engineLevels(buildChain(up, treatment({ content: 'normal', kernel: both('kaiser') })))) {
    expect(level.codes).toEqual(flat(level.extent, 8, [128, 128, 255]).codes);
  }
});
