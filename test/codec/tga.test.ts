import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { openTga } from '../../core/codec/tga/open.ts';
import { concat } from '../fixtures/rawpng.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { type Origin, type TgaRecipe, tgaTrailer, writeTga } from '../fixtures/tga.ts';

const EXTENT = { width: 5, height: 3 };

/** Sixteen texels' worth of bits that differ from place to place, with runs in the upper row. */
function noisy(x: number, y: number): number {
  return y === 0 ? 0x8421 : Math.imul(x + 7 * y + 1, 0x9e3779b1) >>> 0;
}

/** round(v * 255 / 31). */
const five = (code: number) => Math.round(((code & 31) * 255) / 31);
const word = (value: number) => [five(value >> 10), five(value >> 5), five(value)];
const bytes = (value: number) => [(value >>> 16) & 255, (value >>> 8) & 255, value & 255];

/** Every kind of texel: what a stored number means in codes. [TGA2, "Image type field", "Image data field"] */
const FORMS: readonly (readonly [
  name: string,
  bits: number,
  attributes: number,
  kind: number,
  codes: (value: number) => number[],
])[] = [
  ['color, 15 bits', 15, 0, 2, word],
  ['color, 16 bits, no attribute bit', 16, 0, 2, word],
  ['color, 16 bits, alpha', 16, 1, 2, (value) => [...word(value), value & 0x8000 ? 255 : 0]],
  ['color, 24 bits', 24, 0, 2, bytes],
  ['color, 32 bits, no attribute bits', 32, 0, 2, bytes],
  ['color, 32 bits, alpha', 32, 8, 2, (value) => [...bytes(value), value >>> 24]],
  ['gray, 8 bits', 8, 0, 3, (value) => [value & 255]],
  ['gray and alpha, 16 bits', 16, 8, 3, (value) => [value & 255, (value >> 8) & 255]],
];

const ORIGINS: readonly Origin[] = ['top-left', 'top-right', 'bottom-left', 'bottom-right'];

async function decode(recipe: TgaRecipe) {
  return decodeImage(openTga(writeTga(recipe)));
}

function everyTexel<T>({ width, height }: { width: number; height: number }, of: (x: number, y: number) => T): T[] {
  return Array.from({ length: width * height }, (_, texel) => of(texel % width, Math.floor(texel / width)));
}

describe.each(FORMS)('%s', (_name, texelBits, attributeBits, kind, codes) => {
  const expected = everyTexel(EXTENT, (x, y) => codes(noisy(x, y))).flat();

  test.each(ORIGINS)('comes from the top left, stored from the %s', async (origin) => {
    for (const type of [kind, kind + 8]) {
      const raster = await decode({ ...EXTENT, type, texelBits, attributeBits, origin, texel: noisy });
      expect(raster).toMatchObject({ kind: 'straight', extent: EXTENT, depth: 8, channels: codes(0).length });
      expect('codes' in raster && Array.from(raster.codes)).toEqual(expected);
    }
  });
});

test('five bits fill eight: 27 becomes 222', async () => {
  // [PNG3, 12.4 "Sample depth scaling"]: 27 of 31 is 222 of 255.
  const raster = await decode({ width: 1, height: 1, type: 2, texelBits: 16, texel: () => 27 });
  expect(raster).toMatchObject({ codes: Uint8Array.of(0, 0, 222) });
});

describe('Color maps', () => {
  const entries = [0x112233, 0x445566, 0x778899];
  const base: TgaRecipe = {
    ...EXTENT,
    type: 1,
    texelBits: 8,
    texel: (x, y) => (x + y) % 3,
    map: { first: 0, entryBits: 24, entries },
  };

  test.each([1, 9])('keep their order and indices in type %i', async (type) => {
    const source = openTga(writeTga({ ...base, type, id: [1, 2, 3] }));
    expect(source.header).toMatchObject({ channels: 3, depth: 8, indexed: { indexBits: 8, alphaCount: 0 } });
    expect(await decodeImage(source)).toMatchObject({
      kind: 'indexed',
      indices: Uint8Array.from(everyTexel(EXTENT, (x, y) => (x + y) % 3)),
      palette: Uint8Array.of(0x11, 0x22, 0x33, 255, 0x44, 0x55, 0x66, 255, 0x77, 0x88, 0x99, 255),
      alphaCount: 0,
    });
  });

  test('count indices from their first entry', async () => {
    const map = { first: 100, entryBits: 24, entries };
    const raster = await decode({ ...base, map, texel: (x) => 100 + (x % 3) });
    expect(raster).toMatchObject({ indices: Uint8Array.from(everyTexel(EXTENT, (x) => x % 3)) });
  });

  test('give alpha where entries carry it', async () => {
    const map = { first: 0, entryBits: 32, entries: [0x80112233, 0xff445566, 0] };
    const raster = await decode({ ...base, map, attributeBits: 8 });
    const palette = Uint8Array.of(0x11, 0x22, 0x33, 0x80, 0x44, 0x55, 0x66, 0xff, 0, 0, 0, 0);
    expect(raster).toMatchObject({ kind: 'indexed', palette, alphaCount: 3 });
    const opaque = await decode({ ...base, map, attributeBits: 0 });
    expect(opaque).toMatchObject({ kind: 'indexed', alphaCount: 0 });
  });

  test.each([
    ['indices have 16 bits', 16, 20],
    ['they have more entries than 8 bits can name', 8, 300],
    ['both', 16, 300],
  ])('are expanded where %s', async (_case, texelBits, length) => {
    const many = Array.from({ length }, (_, entry) => entry * 0x101);
    const map = { first: 5, entryBits: 24, entries: many };
    const raster = await decode({ ...base, texelBits, map, texel: (x, y) => 5 + 19 - x - y });
    expect(raster).toMatchObject({
      kind: 'straight',
      channels: 3,
      codes: Uint8Array.from(everyTexel(EXTENT, (x, y) => bytes((19 - x - y) * 0x101)).flat()),
    });
  });

  test('beside a picture that has no use for one are passed over', async () => {
    const raster = await decode({ ...base, type: 3, texel: (x, y) => x + 10 * y });
    expect(raster).toMatchObject({ channels: 1, codes: Uint8Array.from(everyTexel(EXTENT, (x, y) => x + 10 * y)) });
  });

  test.each([
    ['below', 4],
    ['beyond', 8],
  ])('have no entry %s theirs', async (_where, index) => {
    const map = { first: 5, entryBits: 24, entries };
    const texel = (x: number, y: number) => (x === 3 && y === 1 ? index : 5);
    expect(await problemOf(() => decode({ ...base, map, texel, origin: 'bottom-right' }))).toMatchObject({
      code: 'tga-palette-index',
      values: { x: 3, y: 1, found: index, first: 5, last: 7 },
    });
  });
});

test('run-length packets of any cut, across rows too, give the same texels', async () => {
  await fc.assert(
    fc.asyncProperty(
      fc.integer({ min: 1, max: 40 }),
      fc.integer({ min: 1, max: 12 }),
      fc.array(fc.integer({ min: 1, max: 128 }), { minLength: 0, maxLength: 60 }),
      fc.constantFrom(...ORIGINS),
      async (width, height, packets, origin) => {
        const texel = (x: number, y: number) => ((x >> 2) * 31 + (y >> 1)) & 255;
        const plain = { width, height, texelBits: 24, origin, texel };
        expect(await decode({ ...plain, type: 10, packets })).toEqual(await decode({ ...plain, type: 2 }));
      },
    ),
    { numRuns: 100 },
  );
});

describe('What does not fit is refused in numbers', () => {
  const base: TgaRecipe = { ...EXTENT, type: 2, texelBits: 24, texel: noisy };
  const dataEnd = 18 + 5 * 3 * 3;
  const flat: TgaRecipe = { width: 4, height: 4, type: 11, texelBits: 8, texel: () => 7, packets: [16] };
  const patched = (recipe: TgaRecipe, offset: number, byte: number) => {
    const file = writeTga(recipe);
    file[offset] = byte;
    return file;
  };

  const cases: readonly (readonly [name: string, file: Uint8Array, code: string, values: Record<string, unknown>])[] = [
    ['an empty file', new Uint8Array(0), 'file-empty', {}],
    ['half a header', writeTga(base).subarray(0, 17), 'tga-truncated', { part: 'header', found: 17, expected: 18 }],
    ['image type 0', patched(base, 2, 0), 'tga-header', { field: 'image type', found: 0 }],
    ['image type 32', patched(base, 2, 32), 'tga-header', { field: 'image type', found: 32 }],
    ['color map type 2', patched(base, 1, 2), 'tga-header', { field: 'color map type', found: 2 }],
    ['indices without a map', patched(base, 2, 1), 'tga-header', { field: 'color map type', found: 0, allowed: '1' }],
    ['color of 8 bits', patched(base, 16, 8), 'tga-header', { field: 'bits a texel', found: 8 }],
    ['interleaved rows', patched(base, 17, 0x40), 'tga-header', { field: 'interleave', found: 1 }],
    ['deep gray', writeTga({ ...base, type: 3, texelBits: 16 }), 'tga-header', { found: 0, allowed: '8' }],
    [
      'a map of 8-bit entries',
      writeTga({ ...base, type: 1, texelBits: 8, map: { first: 0, entryBits: 8, entries: [1] } }),
      'tga-header',
      { field: 'bits a color map entry', found: 8 },
    ],
    [
      'a map of no entries',
      writeTga({ ...base, type: 1, texelBits: 8, map: { first: 0, entryBits: 24, entries: [] } }),
      'tga-header',
      { field: 'color map length', found: 0 },
    ],
    ['no width', patched(base, 12, 0), 'extent-out-of-range', { width: 0, height: 3, min: 1, max: 16384 }],
    ['16640 texels of height', patched(base, 15, 65), 'extent-out-of-range', { width: 5, height: 16643 }],
    [
      'half a map',
      writeTga({ ...base, type: 1, texelBits: 8, map: { first: 0, entryBits: 24, entries: [1, 2] } }).subarray(0, 20),
      'tga-truncated',
      { part: 'color map', found: 20, expected: 24 },
    ],
    ['a row too few', patched(base, 14, 4), 'tga-truncated', { found: dataEnd, expected: dataEnd + 15 }],
    [
      'a byte too few',
      writeTga(base).subarray(0, dataEnd - 1),
      'tga-truncated',
      { found: dataEnd - 1, expected: dataEnd },
    ],
    [
      'a byte too many',
      writeTga({ ...base, trailer: new Uint8Array(1) }),
      'tga-surplus',
      { found: 1, offset: dataEnd },
    ],
    ['a packet too few', patched(flat, 14, 5), 'tga-truncated', { found: 20, expected: 22 }],
    ['half a packet', writeTga(flat).subarray(0, 19), 'tga-truncated', { found: 19, expected: 20 }],
    ['a packet too long', patched(flat, 18, 0x80 | 16), 'tga-packet', { offset: 18, found: 1 }],
    ['premultiplied color', writeTga({ ...base, trailer: tgaTrailer(dataEnd, 4) }), 'tga-premultiplied', {}],
  ];

  test.each(cases)('%s', async (_name, file, code, values) => {
    expect(await problemOf(() => decodeImage(openTga(file)))).toMatchObject({ code, values });
  });

  test('but an extension area and a footer are in order', async () => {
    const source = openTga(writeTga({ ...base, trailer: tgaTrailer(dataEnd, 3) }));
    expect(source.header.trailingBytes).toBe(495 + 26);
    expect(await decodeImage(source)).toEqual(await decode(base));
  });
});

test('a view into a larger buffer reads as the file alone', async () => {
  const recipe: TgaRecipe = { ...EXTENT, type: 10, texelBits: 32, attributeBits: 8, texel: noisy };
  const inBuffer = (file: Uint8Array) =>
    concat([new Uint8Array(3).fill(255), file, new Uint8Array(5)]).subarray(3, 3 + file.length);
  const file = writeTga(recipe);
  expect(inBuffer(file).byteOffset).toBe(3);
  expect(await decodeImage(openTga(inBuffer(file)))).toEqual(await decodeImage(openTga(file)));
  const premultiplied = writeTga({ ...recipe, trailer: tgaTrailer(file.length, 4) });
  expect(await problemOf(() => openTga(inBuffer(premultiplied)))).toMatchObject({ code: 'tga-premultiplied' });
});
