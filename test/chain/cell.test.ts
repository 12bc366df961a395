import { expect, it } from 'vitest';
import { placeInCell } from '../../core/chain/cell.ts';
import { targetPlace } from '../../core/chain/levels.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import { picture, texelAt } from '../fixtures/picture.ts';

const place = { whole: { width: 3, height: 3 }, picture: { width: 2, height: 1 }, left: 0, top: 1 };

it.each([
  // Fitted by the tighter axis, rounded, centered with the odd texel to the right and below.
  [[10, 10], [48, 48], [48, 48], 0, 0],
  [[16, 32], [48, 48], [24, 48], 12, 0],
  [[3, 2], [8, 8], [8, 5], 0, 1],
  [[100, 1], [10, 10], [10, 1], 0, 4],
  [[100, 10], [7, 20], [7, 1], 0, 9],
] as const)('a picture of %j in a cell of %j is %j', ([width, height], cell, [wide, high], left, top) => {
  expect(targetPlace({ width, height }, { name: 'c', cell })).toEqual({
    whole: { width: cell[0], height: cell[1] },
    picture: { width: wide, height: high },
    left,
    top,
  });
});

it('leaves a picture that fills its cell as it is', () => {
  const art = picture({ width: 1, height: 1 }, 3, 8, [1, 2, 3]);
  const filling = { whole: art.extent, picture: art.extent, left: 0, top: 0 };
  expect(placeInCell(art, filling, null)).toBe(art);
});

it.each([
  [4, 8, [1, 2, 3, 200, 4, 5, 6, 100], [1, 2, 3, 0], [4, 5, 6, 0]],
  [2, 16, [1000, 60000, 2000, 5], [1000, 0], [2000, 0]],
] as const)(
  'takes the margin’s color from the nearest texel: %i channels at %i bits',
  (channels, depth, codes, left, right) => {
    const art = picture({ width: 2, height: 1 }, channels, depth, codes);
    const cell = placeInCell(art, place, channels - 1) as StraightRaster;
    for (const y of [0, 2]) {
      expect([0, 1, 2].map((x) => texelAt(cell, x, y))).toEqual([left, right, right]);
    }
    expect([0, 1, 2].map((x) => texelAt(cell, x, 1))).toEqual([codes.slice(0, channels), codes.slice(channels), right]);
  },
);

it('leaves the margin 0 where every channel has another use', () => {
  const packed = picture({ width: 2, height: 1 }, 4, 8, [1, 2, 3, 4, 5, 6, 7, 8]);
  const cell = placeInCell(packed, place, null) as StraightRaster;
  expect(cell.channels).toBe(4);
  expect(texelAt(cell, 0, 0)).toEqual([0, 0, 0, 0]);
  expect(texelAt(cell, 1, 1)).toEqual([5, 6, 7, 8]);
});

it('gives a picture without alpha one', () => {
  const cell = placeInCell(picture({ width: 2, height: 1 }, 1, 16, [7, 9]), place, null) as StraightRaster;
  expect(Array.from(cell.codes)).toEqual([7, 0, 9, 0, 9, 0, 7, 65535, 9, 65535, 9, 0, 7, 0, 9, 0, 9, 0]);
});

it('gives indices the first clear entry', () => {
  const palette = Uint8Array.of(1, 1, 1, 255, 2, 2, 2, 0, 3, 3, 3, 0);
  const art: IndexedRaster = {
    kind: 'indexed',
    extent: place.picture,
    indexBits: 2,
    palette,
    alphaCount: 3,
    indices: Uint8Array.of(0, 2),
  };
  const cell = placeInCell(art, place, 3) as IndexedRaster;
  expect(Array.from(cell.indices)).toEqual([1, 1, 1, 0, 2, 1, 1, 1, 1]);
  expect(cell.palette).toBe(palette);
});

it('leaves nothing round a premultiplied picture', () => {
  const art = {
    ...picture({ width: 2, height: 1 }, 4, 8, [1, 2, 3, 200, 4, 5, 6, 100]),
    kind: 'premultiplied',
  } as const;
  const cell = placeInCell(art, place, 3);
  expect(cell.kind).toBe('premultiplied');
  expect('codes' in cell && texelAt({ ...cell, kind: 'straight' } as StraightRaster, 0, 0)).toEqual([0, 0, 0, 0]);
});
