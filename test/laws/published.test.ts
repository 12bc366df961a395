import { describe, expect, it } from 'vitest';
import { flat, painted, picture } from '../fixtures/picture.ts';
import { both, kernel, treatment } from '../fixtures/treatment.ts';
import { weighAxis } from '../reference/axis.ts';
import { doubles } from '../reference/doubles.ts';
import { weightKernel } from '../reference/kernel.ts';
import { decodeNormal, roughen, spread } from '../reference/normal.ts';
import { decodeSrgb, encodeSrgb } from '../reference/transfer.ts';
import { builders } from './builders.ts';
import { filters } from './filters.ts';

// Numbers that were published, or that follow exactly from a published formula, each beside its source.

const clamped = { x: 'clamp-to-edge', y: 'clamp-to-edge' } as const;

describe('the reference itself', () => {
  it.each([
    // IEC 61966-2-1 in the Khronos Data Format Specification 1.4, evaluated with 25 digits.
    [1, 0.0003035269835488375],
    [10, 0.003035269835488375],
    [11, 0.003346535763899161],
    [32, 0.01444384359609254],
    [64, 0.05126945837404324],
    [127, 0.2122307574140552],
    // web-platform-tests, css-color srgb-linear-001 prints 0.21586.
    [128, 0.2158605001138992],
    [187, 0.4969329950608704],
    [188, 0.5028864580325687],
    [192, 0.5271151257058131],
    [254, 0.9911020971138298],
  ])('decodes sRGB %i to %f', (code, linear) => {
    // Two roundings of Math.pow in double precision.
    expect(Math.abs(decodeSrgb(code / 255) - linear)).toBeLessThan(4 * 2 ** -53);
    expect(Math.round(encodeSrgb(linear) * 255)).toBe(code);
  });

  it.each([
    // Kaiser 1974, the window I0(4 sqrt(1 - (x/3)^2)) / I0(4); ten digits.
    [0.5, 0.9528950441],
    [1, 0.821609134],
    [1.5, 0.6334317798],
    [2, 0.4254113605],
    [2.5, 0.2345145844],
  ])('has the Kaiser window at %f', (x, window) => {
    const sinc = x % 1 === 0 ? null : Math.sin(Math.PI * x) / (Math.PI * x);
    if (sinc === null) return expect(weightKernel(kernel('kaiser'))?.weight(x)).toBeCloseTo(0, 12);
    expect(Math.abs((weightKernel(kernel('kaiser'))?.weight(x) ?? 0) / sinc - window)).toBeLessThan(5e-11);
  });

  it.each([
    // Exact taps of a two to one minification, centered: left half, outermost first. Cubics from Mitchell and Netravali 1988 and
    // Keys 1981 in rationals; lanczos2 and kaiser in double precision, eight digits.
    ['box', [1 / 2], 1e-15],
    ['triangle', [1 / 8, 3 / 8], 1e-15],
    ['hermite', [5 / 64, 27 / 64], 1e-15],
    ['catmull-rom', [-3 / 256, -9 / 256, 29 / 256, 111 / 256], 1e-15],
    ['mitchell', [-17 / 2304, -27 / 2304, 295 / 2304, 901 / 2304], 1e-15],
    ['b-spline', [1 / 768, 27 / 768, 121 / 768, 235 / 768], 1e-15],
    ['lanczos2', [-0.00886333, -0.04194003, 0.11650009, 0.43430327], 5e-9],
    ['lanczos3', [0.00368914, 0.01505614, -0.03399863, -0.06663732, 0.13550528, 0.44638539], 5e-9],
    ['kaiser', [0.00630681, 0.01623236, -0.03391876, -0.06568918, 0.13399173, 0.44307705], 5e-9],
  ])('weighs two to one with %s as published', (name, half, tolerance) => {
    const taps = weighAxis(kernel(name), 64, 32)[16];
    const expected = [...half, ...[...half].reverse()];
    expect(taps.map((tap) => tap.index)).toEqual(expected.map((_, k) => 33 - half.length + k));
    taps.forEach((tap, k) => {
      expect(Math.abs(tap.weight - expected[k])).toBeLessThanOrEqual(tolerance);
    });
  });

  it.each([
    // Toksvig 2004, s' = s / (1 + s (1 - L) / L).
    [0.9, 32, 7.02439024],
    [0.5, 100, 0.99009901],
    [0.99, 100, 49.74874372],
    [0.95, 16, 8.68571429],
    [1, 20, 20],
  ])('roughens by L = %f, s = %f to s = %f', (length, s, expected) => {
    // glTF 2.0, appendix B: alpha = r^2; a lobe of exponent s has alpha^2 = 2 / s.
    const alphaSquared = roughen(2 / s, length) ** 4;
    // Where alpha^2 would exceed 1 the surface is as rough as can be: s = 2.
    expect(2 / alphaSquared).toBeCloseTo(Math.max(2, expected), 7);
  });

  it('finds the spread of the four normals', () => {
    expect(spread(0.8)).toBeCloseTo(0.25, 15);
  });

  it.each([
    // z = sqrt(max(0, 1 - x^2 - y^2)); six digits.
    [200, 90, 0.568627, -0.294118, 0.768217],
    [128, 128, 0.003922, 0.003922, 0.999985],
  ])('rebuilds z of the codes %i, %i', (x, y, nx, ny, nz) => {
    const normal = decodeNormal(x / 255, y / 255, null);
    [nx, ny, nz].forEach((component, axis) => {
      expect(Math.abs(normal[axis] - component)).toBeLessThan(1e-6);
    });
  });

  it.each([
    [255, 128],
    [218, 218],
    [0, 0],
  ])('has z = 0 where the codes %i, %i leave no room for it', (x, y) => {
    expect(decodeNormal(x / 255, y / 255, null)[2]).toBe(0);
  });
});

describe.each(filters)('$name, one resample', (filter) => {
  it.each([
    // Overlap of areas, as in Guthe and Heckbert 2005: weights (n - x), n, (x + 1) over 2n + 1.
    [3, 1, 0, [1, 1, 1]],
    [5, 2, 0, [2, 2, 1]],
    [5, 2, 1, [1, 2, 2]],
    [7, 3, 0, [3, 3, 1]],
    [7, 3, 1, [2, 3, 2]],
    [7, 3, 2, [1, 3, 3]],
    [9, 4, 0, [4, 4, 1]],
    [9, 4, 1, [3, 4, 2]],
    [9, 4, 2, [2, 4, 3]],
    [9, 4, 3, [1, 4, 4]],
  ])('box takes %i texels to %i: texel %i weighs them %j', (from, to, target, weights) => {
    weights.forEach((weight, k) => {
      const impulse = doubles(from, 1, 1);
      impulse.values[2 * target + k] = 1;
      const { values } = filter.filter(impulse, { width: to, height: 1 }, both('box'), clamped);
      expect(Math.abs(values[target] - weight / from)).toBeLessThanOrEqual(2 ** -24);
    });
  });

  it.each([
    // Vulkan, "Texel Cubic Filtering", and the kernels' own formulas at a quarter: taps from the left.
    ['triangle', [0, 3, 1, 0], 4],
    ['hermite', [0, 27, 5, 0], 32],
    ['catmull-rom', [-9, 111, 29, -3], 128],
    ['mitchell', [-27, 901, 295, -17], 1152],
    ['b-spline', [27, 235, 121, 1], 384],
  ])('%s interpolates a quarter of the way by %j / %i', (name, taps, whole) => {
    // Twice as many texels: target 2 i + 1 lies a quarter behind texel i.
    taps.forEach((weight, k) => {
      const impulse = doubles(12, 1, 1);
      impulse.values[4 + k] = 1;
      const { values } = filter.filter(impulse, { width: 24, height: 1 }, both(name), clamped);
      expect(Math.abs(values[11] - weight / whole)).toBeLessThanOrEqual(2 ** -24);
    });
  });

  it.each([
    // Unit step in a two to one level, edge between texels of a pair's border and inside a pair.
    ['catmull-rom', 3 / 256, 12 / 256],
    ['mitchell', 17 / 2304, 44 / 2304],
    ['lanczos2', 0.0088633, 0.0508034],
    ['lanczos3', 0.0152534, 0.0818907],
    ['box', 0, 0],
    ['triangle', 0, 0],
  ])('%s overshoots a step two to one by %f (odd edge) and %f (even edge)', (name, odd, even) => {
    const overshoot = (edge: number): number => {
      const step = doubles(64, 1, 1);
      step.values.fill(1, edge);
      return Math.max(...filter.filter(step, { width: 32, height: 1 }, both(name), clamped).values) - 1;
    };
    const found = [overshoot(32), overshoot(33)].sort((a, b) => a - b);
    const expected = [odd, even].sort((a, b) => a - b);
    // Seven digits are printed; float32 sums stay within 2^-22.
    found.forEach((value, k) => {
      expect(Math.abs(value - expected[k])).toBeLessThanOrEqual(5e-7);
    });
  });
});

describe.each(builders)('$name, chains', (builder) => {
  it.each([
    // Averages in linear light, IEC 61966-2-1. A power law of 2.2 would give 186 for the first.
    [[0, 255], 188],
    [[0, 0, 0, 255], 137],
    [[0, 255, 255, 255], 225],
    [[0, 128], 92],
    [[64, 192], 146],
    [[100, 200], 160],
  ])('averages %j to %i', (codes, mean) => {
    const row = picture({ width: codes.length, height: 1 }, 1, 8, codes);
    for (const name of ['box', 'even'] as const) {
      const levels = builder.levels(row, treatment({ kernel: both(name) }));
      expect(levels[levels.length - 1].codes[0]).toBe(mean);
    }
  });

  it.each([
    [[0, 255], 128],
    [[64, 192], 128],
    [[100, 200], 150],
  ])('averages %j to %i in code space', (codes, mean) => {
    const row = picture({ width: codes.length, height: 1 }, 1, 8, codes);
    expect(builder.levels(row, treatment({ kernel: both('box'), light: 'code' }))[1].codes[0]).toBe(mean);
  });

  it('leaves data as it is: no transfer function touches it', () => {
    const row = picture({ width: 2, height: 1 }, 1, 8, [0, 254]);
    expect(builder.levels(row, treatment({ content: 'data' }))[1].codes[0]).toBe(127);
  });

  it.each([
    // IEEE 754, roundTiesToEven: halves of linear codes go to the even code.
    [[0, 1], 0],
    [[1, 2], 2],
    [[2, 3], 2],
    [[254, 255], 254],
  ])('rounds the mean of data %j to %i', (codes, mean) => {
    const row = picture({ width: 2, height: 1 }, 1, 8, codes);
    expect(builder.levels(row, treatment({ content: 'data' }))[1].codes[0]).toBe(mean);
  });

  it('renormalises the mean of four normals', () => {
    // (+-.6, 0, .8) and (0, +-.6, .8): mean (0, 0, .8), stored as (0, 0, 1).
    const code = (v: number): number => Math.round(((v + 1) / 2) * 65535);
    const four = [
      [0.6, 0, 0.8],
      [-0.6, 0, 0.8],
      [0, 0.6, 0.8],
      [0, -0.6, 0.8],
    ].map((normal) => normal.map(code));
    const image = painted({ width: 2, height: 2 }, 3, 16, (x, y) => four[y * 2 + x]);
    const [x, y, z] = builder.levels(image, treatment({ content: 'normal' }))[1].codes;
    // 32767.5 lies between two codes, and so do the four sources.
    for (const flatCode of [x, y]) expect(Math.abs(flatCode - 32767.5)).toBeLessThanOrEqual(1.5);
    expect(z).toBe(65535);
  });

  it('gives up no light on a checkerboard, down to the last level', () => {
    const board = painted({ width: 16, height: 16 }, 1, 8, (x, y) => [(x + y) % 2 === 0 ? 0 : 255]);
    for (const level of builder.levels(board, treatment({ kernel: both('box') })).slice(1)) {
      expect(level.codes).toEqual(flat(level.extent, 8, [188]).codes);
    }
  });
});
