import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { haloSteps, type KnownRanges, measureHalo, type Range } from '../../core/finding/halo.ts';
import { expandIndexed, type IndexedRaster, type StraightRaster } from '../../core/raster/raster.ts';
import { kernels, LINEAR, oneOf, POSITIVE, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { holds } from '../laws/holds.ts';
import { encodeSrgb } from '../reference/transfer.ts';

const data = treatment({
  content: 'data',
  alpha: { use: 'data' },
  kernel: both('catmull-rom'),
  levels: { first: 1, last: 1 },
});

/** Gray, `low` before texel `at` of each row, `high` from there on. */
function step(at: number, low: number, high: number, width = 16): StraightRaster {
  return painted({ width, height: 1 }, 1, 8, (x) => [x < at ? low : high]);
}

describe('a step edge under catmull-rom, 2:1', () => {
  // Taps at distances 1/4, 3/4, 5/4, 7/4 of a target texel: 111, 29, -9, -3 of 256. 16 texels become 8.
  it.each([
    // Odd: the edge cuts target texel 3, so that texel 2 is the nearest whose range lies on one side; its taps at 5/4 and
    // 7/4 reach across.
    [7, 12 / 256],
    // Even: the range of both texels at the edge reaches across; of texel 2 only the tap at 7/4 does.
    [8, 3 / 256],
  ])('on texel %i overshoots by %f of its height', (at, share) => {
    for (const [low, high] of [
      [0, 255],
      [255, 0],
      [100, 140],
    ] as const) {
      const [halo] = measureHalo(step(at, low, high), data);
      expect(halo.image).toBe(1);
      expect(Math.abs(halo.worst - share * Math.abs(high - low))).toBeLessThan(1e-4);
    }
  });

  it('is placed at the texel that overshoots most', () => {
    const [halo] = measureHalo(step(7, 10, 250), data);
    expect([2, 4]).toContain(halo.x);
    expect(halo.y).toBe(0);
    const column = painted({ width: 1, height: 16 }, 1, 8, (_, y) => [y < 7 ? 10 : 250]);
    const [turned] = measureHalo(column, data);
    expect([turned.x, turned.y]).toEqual([0, halo.x]);
  });

  it('shares out what overshoots by more than half a code, and what clamping changes', () => {
    // The texels beside the edge, one on each side, of eight.
    const [inside] = measureHalo(step(7, 50, 200), data);
    expect(inside).toMatchObject({ share: 2 / 8, clipped: 0 });
    const [outside] = measureHalo(step(7, 0, 255), data);
    expect(outside).toMatchObject({ share: 2 / 8, clipped: 2 / 8 });
    const [faint] = measureHalo(step(7, 100, 110), data);
    expect(faint.share).toBe(0);
    expect(faint.worst).toBeGreaterThan(0);
  });

  it('counts 16-bit codes as 257th parts', () => {
    const deep = painted({ width: 16, height: 1 }, 1, 16, (x) => [257 * (x < 7 ? 50 : 200)]);
    expect(Math.abs(measureHalo(deep, data)[0].worst - (12 / 256) * 150)).toBeLessThan(1e-3);
  });

  it('is measured in codes where light is filtered', () => {
    const one = { ...data, content: 'color' as const, transfer: 'srgb' as const };
    const light = (code: number): number =>
      code / 255 <= 0.04045 ? code / 255 / 12.92 : ((code / 255 + 0.055) / 1.055) ** 2.4;
    const [low, high] = [light(50), light(200)];
    // Both sides: the dark one undershoots, the bright one overshoots.
    const under = 50 - encodeSrgb(low - (12 / 256) * (high - low)) * 255;
    const over = encodeSrgb(high + (12 / 256) * (high - low)) * 255 - 200;
    expect(Math.abs(measureHalo(step(7, 50, 200), one)[0].worst - Math.max(under, over))).toBeLessThan(1e-3);
  });
});

it('is none for kernels without negative lobes, at every level and target', () => {
  const cases = fc.tuple(
    seeds,
    smallExtents,
    kernels(POSITIVE),
    wraps,
    oneOf(['srgb', 'linear'] as const),
    oneOf([1, 2, 3, 4] as const),
  );
  holds(cases, 60, ([seed, extent, kernel, wrap, transfer, channels]) => {
    const noise = noiseRaster(seed, extent, channels, 8, 'extremes');
    const raster = channels % 2 === 0 ? withAlpha(noise, seed, 3, 3) : noise;
    const one = treatment({
      transfer,
      wrap,
      kernel: { minify: kernel, magnify: kernel },
      targets: [{ name: '0.75x', scale: 0.75 }],
    });
    // Float32 sums of codes up to 255, and the quotient by alpha: 1e-3 of a code, as everywhere.
    for (const { worst, share, clipped } of measureHalo(raster, one)) {
      expect(worst).toBeLessThan(1e-3);
      expect([share, clipped]).toEqual([0, 0]);
    }
  });
});

describe('what is not seen', () => {
  it('does not count: color under alpha 0 neither widens the range nor is measured', () => {
    const make = (hidden: number): StraightRaster =>
      painted({ width: 32, height: 1 }, 4, 8, (x) => (x < 16 ? [x < 7 ? 50 : 200, 0, 0, 255] : [hidden, 0, 0, 0]));
    const one = treatment({ transfer: 'linear', kernel: both('catmull-rom'), levels: { first: 1, last: 1 } });
    const found = [0, 120, 255].map((hidden) => measureHalo(make(hidden), one));
    expect(found[1]).toEqual(found[0]);
    expect(found[2]).toEqual(found[0]);
    // The clear half has no visible texel: shares are of the rest.
    expect(found[0][0].share).toBeGreaterThan(0);
  });

  it('does not count beside what is seen', () => {
    // Texels 3 and 10 are clear and lie in the ranges of the two texels that overshoot. Alpha is low, so that its own step
    // is less than that of color.
    const make = (hidden: number): StraightRaster =>
      painted({ width: 16, height: 1 }, 4, 8, (x) =>
        x === 3 || x === 10 ? [hidden, 0, 0, 0] : [x < 7 ? 50 : 200, 0, 0, 20],
      );
    const one = treatment({ transfer: 'linear', kernel: both('catmull-rom'), levels: { first: 1, last: 1 } });
    const [black, white] = [0, 255].map((hidden) => measureHalo(make(hidden), one)[0]);
    expect(white).toEqual(black);
    expect(black.worst).toBeGreaterThan(0.5);
  });

  it('counts color as far as it shows: the thinner the alpha, the less', () => {
    const step = (alpha: number): StraightRaster =>
      painted({ width: 16, height: 1 }, 4, 8, (x) => [x < 7 ? 50 : 200, 0, 0, alpha]);
    const one = treatment({ transfer: 'linear', kernel: both('catmull-rom'), levels: { first: 1, last: 1 } });
    const [opaque, thin] = [255, 51].map((alpha) => measureHalo(step(alpha), one)[0].worst);
    // 12/256 of a step of 150 codes; 51 is a fifth of 255. Float32 carries 24 bits.
    expect(opaque).toBeCloseTo((150 * 12) / 256, 4);
    expect(thin).toBeCloseTo(opaque / 5, 4);
  });

  it('widens the range where it is weighed in', () => {
    const art = painted({ width: 16, height: 1 }, 4, 8, (x) => (x < 8 ? [50, 50, 50, 255] : [200, 200, 200, 0]));
    const one = treatment({
      transfer: 'linear',
      kernel: both('box'),
      alpha: { weight: false },
      levels: { first: 1, last: 2 },
    });
    for (const { worst } of measureHalo(art, one)) expect(worst).toBe(0);
  });

  it('leaves nothing of an image that is all clear', () => {
    const clear = painted({ width: 8, height: 8 }, 4, 8, (x) => [x * 30, 0, 0, 0]);
    for (const halo of measureHalo(clear, treatment({ kernel: both('lanczos3') }))) {
      expect(halo).toMatchObject({ worst: 0, share: 0, clipped: 0 });
    }
  });

  it('nor do normals, which are made unit', () => {
    const normals = noiseRaster(1, { width: 16, height: 16 }, 3, 8, 'extremes');
    for (const { worst } of measureHalo(normals, treatment({ content: 'normal', kernel: both('lanczos3') }))) {
      expect(worst).toBe(0);
    }
  });
});

describe('the list', () => {
  it('has what is shipped and made from weights, levels first', () => {
    const one = treatment({
      kernel: both('catmull-rom'),
      levels: { first: 2, last: 3 },
      targets: [{ name: '2x', scale: 2 }],
    });
    const raster = noiseRaster(1, { width: 16, height: 16 }, 3, 8, 'noise');
    expect(measureHalo(raster, one).map(({ image }) => image)).toEqual([2, 3, '2x']);
    expect(measureHalo(raster, { ...one, kernel: both('nearest') })).toEqual([]);
  });

  it('is the same for indexed pictures and their colors', () => {
    const art: IndexedRaster = {
      kind: 'indexed',
      extent: { width: 8, height: 8 },
      indexBits: 2,
      palette: Uint8Array.of(0, 0, 0, 0, 255, 0, 0, 255, 0, 255, 0, 255, 90, 0, 255, 255),
      alphaCount: 1,
      indices: Uint8Array.from({ length: 64 }, (_, i) => (i * 5 + (i >> 3)) % 4),
    };
    const one = treatment({ kernel: both('lanczos3') });
    expect(measureHalo(art, one)).toEqual(measureHalo(expandIndexed(art), one));
  });

  it('has the worst of a sheet’s cells, and the mean of their shares', () => {
    const sheet = painted({ width: 32, height: 1 }, 1, 8, (x) => [x < 16 ? 7 : x < 23 ? 50 : 200]);
    const one = { ...data, grid: { cell: [16, 1] as const, gutter: 0 }, levels: { first: 0, last: null } };
    expect(measureHalo(sheet, one)).toEqual([]);
    const tall = painted({ width: 32, height: 16 }, 1, 8, (x) => [x < 16 ? 7 : x < 23 ? 50 : 200]);
    const [halo] = measureHalo(tall, { ...one, grid: { cell: [16, 16], gutter: 0 }, levels: { first: 1, last: 1 } });
    expect(halo.image).toBe(1);
    expect(Math.abs(halo.worst - (12 / 256) * 150)).toBeLessThan(1e-4);
    expect(halo.share).toBe(1 / 8);
    // In the sheet, not in its cell.
    expect([8 + 2, 8 + 4]).toContain(halo.x);
  });
});

it('never says that fewer texels overshoot than are clipped', () => {
  const cases = fc.tuple(seeds, smallExtents, kernels(LINEAR), wraps);
  holds(cases, 40, ([seed, extent, kernel, wrap]) => {
    const raster = noiseRaster(seed, extent, 1, 8, 'extremes');
    for (const { share, clipped, worst } of measureHalo(raster, {
      ...data,
      wrap,
      kernel: { minify: kernel, magnify: kernel },
      levels: { first: 1, last: null },
    })) {
      for (const each of [share, clipped]) expect(each >= 0 && each <= 1).toBe(true);
      if (share > 0) expect(worst).toBeGreaterThan(0.5);
    }
  });
});

it('is left every few rows, while ranges are bounded as well as while rows are filtered', () => {
  const raster = noiseRaster(3, { width: 2048, height: 512 }, 1, 8, 'noise');
  const settings = treatment({ kernel: both('lanczos3'), levels: { first: 0, last: 1 } });
  const known = keptRanges();
  const stops = (): number => [...haloSteps(raster, settings, undefined, undefined, known)].length;
  const first = stops();
  expect(known.kept).toBe(1);
  // Ranges are known the second time: what is left are 2^20 texels, filtered 2^17 at a time. Each of their two bounds compares four rows for
  // each that it makes, 2^21 codes, 2^20 at a time.
  const rows = stops();
  expect(known.kept).toBe(1);
  expect(rows).toBe(8);
  expect(first - rows).toBeGreaterThanOrEqual(4);
});

it('is the same against ranges that another kernel left', () => {
  const raster = withAlpha(noiseRaster(4, { width: 45, height: 31 }, 4, 8, 'extremes'), 2, 3, 3);
  const known = keptRanges();
  for (const name of ['lanczos3', 'catmull-rom']) {
    const settings = treatment({ kernel: both(name) });
    const steps = haloSteps(raster, settings, undefined, undefined, known);
    let step = steps.next();
    while (step.done !== true) step = steps.next();
    expect(step.value).toEqual(measureHalo(raster, settings));
  }
  expect(known.kept).toBe(1);
});

function keptRanges(): KnownRanges & { readonly kept: number } {
  const ranges = new Map<string, readonly Range[]>();
  return {
    get: (key) => ranges.get(key),
    put: (key, range) => void ranges.set(key, range),
    get kept() {
      return ranges.size;
    },
  };
}
