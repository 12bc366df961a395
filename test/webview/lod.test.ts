import { describe, expect, test } from 'vitest';
import { distanceOf, lodAt, lodOfRatio } from '../../webview/page/state/lod.ts';
import { axisScale, extentAt, readSize, readSizes, stopNear, stopsOf } from '../../webview/page/state/scale.ts';

// Doubles through a tangent and a logarithm.
const DOUBLES = 1e-12;

// [Vulkan, Image Operations]: rho is the texels that a pixel steps over, lambda its logarithm to base 2.
test.each([
  [1024, 256, 2],
  [1024, 300, 1.7712],
  [512, 512, 0],
  [256, 512, -1],
])('%i texels over %i pixels are seen at %d', (texels, pixels, lod) => {
  expect(Math.abs(lodOfRatio(texels, pixels) - lod)).toBeLessThan(5e-5);
});

describe('distance', () => {
  const outlook = { texelsPerMeter: 512, fovY: 60, screenHeight: 1080 };

  // LOD = log2(density 2 d tan(fov / 2) / H), computed for 512 texels a meter, 60 degrees, 1080 lines.
  test.each([
    [1, 3.65],
    [2, 7.31],
    [3, 14.61],
    [4, 29.23],
  ])('level %i begins at %d m', (level, meters) => {
    expect(Math.abs(distanceOf(level, outlook) - meters)).toBeLessThan(0.005);
  });

  test('and level are inverse; twice the lines, twice the distance', () => {
    for (const lod of [-1.5, 0, 3.4, 9]) {
      expect(Math.abs(lodAt(distanceOf(lod, outlook), outlook) - lod)).toBeLessThan(DOUBLES);
    }
    const far = distanceOf(2, { ...outlook, screenHeight: 2160 });
    expect(Math.abs(far / distanceOf(2, outlook) - 2)).toBeLessThan(DOUBLES);
  });
});

describe('stops', () => {
  const base = { width: 512, height: 256 };
  const targets = [
    { name: '2x', scale: 2 },
    { name: 'hedge', cell: [48, 48] as const },
  ];

  test('go from large to small, levels at whole numbers', () => {
    const stops = stopsOf(base, targets, [{ name: '100x50', extent: [100, 50] }]);
    expect(stops.map(({ label }) => label)).toEqual([
      '2x',
      '0',
      '1',
      '2',
      '100x50',
      '3',
      'hedge',
      '4',
      '5',
      '6',
      '7',
      '8',
      '9',
    ]);
    expect(stops[0].lod).toBe(-1);
    expect(stops.find(({ label }) => label === 'hedge')).toMatchObject({ extent: { width: 48, height: 48 } });
  });

  test('the scale runs from first to last and back', () => {
    const scale = axisScale(stopsOf(base, targets, []), 1100, 50);
    expect([scale.x(-1), scale.x(9)]).toEqual([50, 1050]);
    expect(scale.lod(scale.x(3.25))).toBeCloseTo(3.25, 12);
    expect(scale.lod(-400)).toBe(-1);
  });

  test('the sight falls to the nearest stop within reach, and to none beyond', () => {
    const stops = stopsOf(base, targets, []);
    expect(stopNear(stops, 3.1, 0.2)?.label).toBe('3');
    expect(stopNear(stops, 3.38, 0.1)?.label).toBe('hedge');
    expect(stopNear(stops, 2.5, 0.1)).toBeNull();
  });
});

test.each([
  ['2x', { name: '2x', scale: 2 }],
  ['.75X', { name: '0.75x', scale: 0.75 }],
  ['1/3x', { name: '1/3x', scale: 1 / 3 }],
  ['1/0x', null],
  ['64', { name: '64x32', extent: [64, 32] }],
  ['64x32', { name: '64x32', extent: [64, 32] }],
  ['48 x 48', { name: '48x48', cell: [48, 48] }],
  ['100 × 51', { name: '100x51', cell: [100, 51] }],
  ['0', null],
  ['', null],
  ['20000', null],
  ['100x', null],
  ['wide', null],
])('`%s` is a size', (text, target) => {
  expect(readSize(text, { width: 512, height: 256 })).toEqual(target);
});

test('several scales are a set of densities; anything else among them is none', () => {
  const base = { width: 64, height: 64 };
  const names = (text: string) => readSizes(text, base)?.map(({ name }) => name) ?? null;
  expect(names('1x 1.5x, 2X 2x')).toEqual(['1x', '1.5x', '2x']);
  expect(names('48x32')).toEqual(['48x32']);
  expect(names('1x wide')).toBeNull();
  expect(names(' ')).toBeNull();
});

test('between levels a texture takes its share of pixels, one at least', () => {
  expect(extentAt({ width: 512, height: 300 }, 1)).toEqual({ width: 256, height: 150 });
  expect(extentAt({ width: 512, height: 4 }, 3.4)).toEqual({ width: 49, height: 1 });
});
