import { differenceEuclidean } from 'culori';
import fc from 'fast-check';
import { expect, test } from 'vitest';
import { oklabDistance, oklabOfLight } from '../../core/color/oklab.ts';
import { decodeSrgb } from '../../core/color/transfer.ts';
import type { Meaning, Picture } from '../../core/proof/want.ts';
import type { ChannelCount, Depth } from '../../core/raster/raster.ts';
import { newCodes } from '../../core/raster/raster.ts';
import { comparePictures } from '../../core/review/difference.ts';
import { JUST_SEEN, labDistance } from '../../core/review/lab.ts';

const color: Meaning = { transfer: 'srgb', color: true, alpha: null, premultiplied: false, normal: null };
const clear: Meaning = { ...color, alpha: 3 };
const data: Meaning = { ...color, transfer: 'linear', color: false };

function row(meaning: Meaning, channels: ChannelCount, codes: readonly number[], depth: Depth = 8): Picture {
  const stored = newCodes(depth, codes.length);
  stored.set(codes);
  return { extent: { width: codes.length / channels, height: 1 }, channels, depth, codes: stored, meaning };
}

const differ = (before: Picture, after: Picture, passing: number | null = null) =>
  comparePictures({ picture: before, passing }, { picture: after, passing });

const code = fc.integer({ min: 0, max: 255 });
const texel = fc.tuple(code, code, code);

test('distances from the table of roots are the exact ones', () => {
  // Published pairs of XYZ and OKLab stand in test/color/oklab.test.ts, against the function that this is held to.
  fc.assert(
    fc.property(texel, texel, (one, other) => {
      const [a, b] = [one.map((each) => decodeSrgb(each / 255)), other.map((each) => decodeSrgb(each / 255))];
      const exact = oklabDistance(oklabOfLight(a[0], a[1], a[2]), oklabOfLight(b[0], b[1], b[2]));
      expect(Math.abs(labDistance(a[0], a[1], a[2], b[0], b[1], b[2]) - exact)).toBeLessThan(1e-5);
    }),
  );
});

test('opaque colors are as far apart as culori says', () => {
  const judge = differenceEuclidean('oklab');
  const of = ([r, g, b]: readonly number[]) => ({ mode: 'rgb' as const, r: r / 255, g: g / 255, b: b / 255 });
  fc.assert(
    fc.property(texel, texel, (one, other) => {
      const { worst } = differ(row(color, 3, one), row(color, 3, other));
      // culori's matrix is of Ottosson's later, rounder form.
      expect(Math.abs(worst - judge(of(one), of(other)))).toBeLessThan(2e-4);
    }),
  );
});

test('black and white are 1 apart, and two neighboring grays are not seen', () => {
  expect(differ(row(color, 3, [0, 0, 0]), row(color, 3, [255, 255, 255])).worst).toBeCloseTo(1, 5);
  const grays = differ(row(color, 1, [128]), row(color, 1, [130]));
  expect(grays.worst).toBeLessThan(JUST_SEEN);
  expect(grays.seen).toBe(0);
});

test('texels are counted, boxed, and the worst is placed', () => {
  const before = row(color, 3, [9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9, 9]);
  const after = row(color, 3, [9, 9, 9, 9, 9, 12, 9, 250, 9, 9, 9, 9]);
  expect(differ(before, after)).toMatchObject({
    texels: 2,
    share: 0.5,
    color: 2,
    alpha: 0,
    hidden: 0,
    worstCodes: 241,
    meanCodes: (3 + 241) / 4,
    at: { x: 2, y: 0 },
    seen: 0.25,
    box: { left: 1, top: 0, width: 2, height: 1 },
  });
});

test('color that nobody sees is hidden, whatever it is', () => {
  const hidden = differ(row(clear, 4, [1, 2, 3, 0]), row(clear, 4, [200, 0, 90, 0]));
  expect(hidden).toMatchObject({ texels: 1, hidden: 1, color: 0, worst: 0, seen: 0, worstCodes: 0 });
});

test('alpha is seen on white where color is black, and on black where it is white', () => {
  for (const level of [0, 255]) {
    const {
      worst,
      alpha,
      color: colors,
    } = differ(row(clear, 4, [level, level, level, 255]), row(clear, 4, [level, level, level, 0]));
    expect([worst, alpha, colors]).toEqual([expect.closeTo(1, 5), 1, 0]);
  }
});

test('alpha of a mask is compared after its test', () => {
  const [high, higher, low] = [200, 255, 100].map((alpha) => row(clear, 4, [255, 255, 255, alpha]));
  expect(differ(high, higher, 128)).toMatchObject({ worst: 0, alpha: 1 });
  expect(differ(high, low, 128).worst).toBeCloseTo(1, 5);
});

test('depth and channels do not make a difference by themselves', () => {
  const gray = row(color, 1, [0, 77, 255]);
  const wide = row(color, 1, [0, 77 * 257, 65535], 16);
  const opaque = row(clear, 4, [0, 0, 0, 255, 77, 77, 77, 255, 255, 255, 255, 255]);
  expect(differ(gray, wide).texels).toBe(0);
  expect(differ(gray, opaque).texels).toBe(0);
});

test('numbers are apart by shares of their range, normals by half their chord', () => {
  expect(differ(row(data, 1, [0]), row(data, 1, [51])).worst).toBeCloseTo(0.2, 12);
  const normal: Meaning = { ...data, normal: { x: 0, y: 1, z: 2 } };
  const [left, right] = [row(normal, 3, [0, 128, 128]), row(normal, 3, [255, 128, 128])];
  // 128 is 1/255 off the middle, so the two are not quite opposite.
  expect(differ(left, right).worst).toBeCloseTo(1, 4);
});

test('a mark is made for every texel that differs', () => {
  const marks: [number, number][] = [];
  const seen = (codes: readonly number[]) => ({ picture: row(color, 1, codes), passing: null });
  comparePictures(seen([1, 2, 3, 4]), seen([1, 0, 3, 255]), (x, y, distance) => {
    if (distance !== null && distance > 0) marks.push([x, y]);
  });
  expect(marks).toEqual([
    [1, 0],
    [3, 0],
  ]);
});

test('pictures of two extents are a mistake', () => {
  expect(() => differ(row(color, 1, [1]), row(color, 1, [1, 2]))).toThrow(RangeError);
});
