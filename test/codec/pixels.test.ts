import { createHash } from 'node:crypto';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { hashPixels } from '../../core/codec/pixels.ts';
import { expandIndexed, type IndexedRaster, type Raster, type StraightRaster } from '../../core/raster/raster.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { noiseRaster } from '../fixtures/noise.ts';

const hash = (raster: Raster) => hashPixels(raster, newHash);

// 300 x 200 texels are more than one band of rows.
const extents = fc.oneof(
  fc.record({ width: fc.integer({ min: 1, max: 40 }), height: fc.integer({ min: 1, max: 40 }) }),
  fc.constant({ width: 300, height: 200 }),
  fc.constant({ width: 1, height: 20000 }),
  fc.constant({ width: 20000, height: 2 }),
);
const rasters = fc
  .tuple(fc.integer(), extents, fc.constantFrom(1, 2, 3, 4), fc.constantFrom(8, 16))
  .map(([seed, extent, channels, depth]) => noiseRaster(seed, extent, channels, depth, 'noise'));

test('is SHA-256 of extent, channels, depth and codes, all little-endian', () => {
  fc.assert(
    fc.property(rasters, (raster) => {
      expect(hash(raster)).toBe(byNode(raster));
    }),
    { numRuns: 60 },
  );
});

test('of one red texel', () => {
  // printf '\1\0\0\0\1\0\0\0\3\0\0\0\10\0\0\0\377\0\0' | sha256sum (octal)
  const red: StraightRaster = {
    kind: 'straight',
    extent: { width: 1, height: 1 },
    channels: 3,
    depth: 8,
    codes: Uint8Array.of(255, 0, 0),
  };
  expect(hash(red)).toBe('4f2a9ee82cc8a1d209e90d9184ba56927a9992c06a3efee72956f48e61e8fbfb');
});

describe('tells apart', () => {
  const base = noiseRaster(1, { width: 6, height: 4 }, 3, 8, 'noise');
  test.each<[string, Raster, Raster]>([
    ['width and height', base, { ...base, extent: { width: 4, height: 6 } }],
    ['channels and width', base, { ...base, extent: { width: 9, height: 4 }, channels: 2 }],
    ['depths of equal codes', base, { ...base, depth: 16, codes: Uint16Array.from(base.codes) }],
    ['one code', base, { ...base, codes: base.codes.map((code, at) => (at === 71 ? code ^ 1 : code)) }],
    [
      'high and low bytes',
      { ...base, depth: 16, codes: Uint16Array.from(base.codes, (code) => code) },
      { ...base, depth: 16, codes: Uint16Array.from(base.codes, (code) => code << 8) },
    ],
  ])('%s', (_, one, other) => {
    expect(hash(one)).not.toBe(hash(other));
  });
});

test('an indexed raster agrees with the colors it stands for, in whatever order its palette is', () => {
  fc.assert(
    fc.property(
      extents,
      fc.integer({ min: 1, max: 256 }),
      fc.boolean(),
      fc.integer(),
      (extent, entries, clear, seed) => {
        const palette = noiseRaster(seed, { width: entries, height: 1 }, 4, 8, 'noise').codes as Uint8Array;
        const noise = noiseRaster(seed + 1, extent, 1, 8, 'noise').codes;
        const raster: IndexedRaster = {
          kind: 'indexed',
          extent,
          indexBits: 8,
          indices: Uint8Array.from(noise, (code) => code % entries),
          palette,
          alphaCount: clear ? entries : 0,
        };
        expect(hash(raster)).toBe(hash(expandIndexed(raster)));
        const mirrored: IndexedRaster = {
          ...raster,
          indices: raster.indices.map((index) => entries - 1 - index),
          palette: palette.map((_, at) => palette[4 * (entries - 1 - (at >> 2)) + (at & 3)]),
        };
        expect(hash(mirrored)).toBe(hash(raster));
      },
    ),
    { numRuns: 60 },
  );
});

test('of codes that are a view into a larger buffer', () => {
  const raster = noiseRaster(2, { width: 5, height: 5 }, 2, 16, 'noise');
  const larger = new Uint16Array(70).fill(9);
  larger.set(raster.codes, 11);
  expect(hash({ ...raster, codes: larger.subarray(11, 61) })).toBe(hash(raster));
});

function byNode({ extent, channels, depth, codes }: StraightRaster): string {
  const bytes = Buffer.alloc(16 + codes.length * (depth / 8));
  [extent.width, extent.height, channels, depth].forEach((value, at) => {
    bytes.writeUInt32LE(value, 4 * at);
  });
  codes.forEach((code, at) => {
    if (depth === 8) bytes.writeUInt8(code, 16 + at);
    else bytes.writeUInt16LE(code, 16 + 2 * at);
  });
  return createHash('sha256').update(bytes).digest('hex');
}
