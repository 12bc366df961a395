import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { openPng } from '../../core/codec/png/open.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { asJudged, decodeRgba, firstDifference, judgeRgba } from '../fixtures/judge.ts';
import { chunk, concat, ihdr, type PngRecipe, writePng } from '../fixtures/rawpng.ts';

/** Color types with their bit depths and channels. [PNG3, table 12] */
const FORMS = [
  ...[1, 2, 4, 8, 16].map((bitDepth) => ({ colorType: 0, bitDepth, channels: 1 })),
  ...[8, 16].map((bitDepth) => ({ colorType: 2, bitDepth, channels: 3 })),
  ...[1, 2, 4, 8].map((bitDepth) => ({ colorType: 3, bitDepth, channels: 1 })),
  ...[8, 16].map((bitDepth) => ({ colorType: 4, bitDepth, channels: 2 })),
  ...[8, 16].map((bitDepth) => ({ colorType: 6, bitDepth, channels: 4 })),
];

function noise(bits: number): PngRecipe['sample'] {
  return (x, y, channel) => (Math.imul(x * 7 + y * 131 + channel * 17 + 1, 0x9e3779b1) >>> 7) & ((1 << bits) - 1);
}

function palette(bits: number): Uint8Array {
  return chunk(
    'PLTE',
    Array.from({ length: 3 << bits }, (_, index) => (index * 53) & 255),
  );
}

const recipe = fc.record({
  form: fc.constantFrom(...FORMS),
  width: fc.integer({ min: 1, max: 20 }),
  height: fc.integer({ min: 1, max: 20 }),
  interlaced: fc.constantFrom(0 as const, 1 as const),
  filters: fc.array(fc.integer({ min: 0, max: 4 }), { minLength: 1, maxLength: 5 }),
  idatBytes: fc.integer({ min: 1, max: 300 }),
});

test('every form, filter, interlace and cut of the data reads as it was written and as the judge reads it', async () => {
  await fc.assert(
    fc.asyncProperty(recipe, async ({ form, width, height, interlaced, filters, idatBytes }) => {
      const { bitDepth, colorType, channels } = form;
      const sample = noise(bitDepth);
      const ahead = colorType === 3 ? [palette(bitDepth)] : [];
      const filter = (row: number) => filters[row % filters.length];
      const file = writePng({ ...form, width, height, interlaced, sample, filter, ahead, idatBytes });
      const raster = await decodeImage(openPng(file, inflate));

      const factor = bitDepth < 8 && colorType !== 3 ? 255 / (2 ** bitDepth - 1) : 1;
      const expected = Array.from({ length: width * height * channels }, (_, index) => {
        const texel = Math.floor(index / channels);
        return sample(texel % width, Math.floor(texel / width), index % channels) * factor;
      });
      expect(Array.from(raster.kind === 'indexed' ? raster.indices : raster.codes)).toEqual(expected);
      expect(firstDifference(await decodeRgba(openPng(file, inflate)), judgeRgba(file))).toBeNull();
    }),
    { numRuns: 300 },
  );
});

describe('A single transparent color', () => {
  const ramp = (x: number, y: number, channel: number) => x + 16 * y + channel;

  test.each([
    { colorType: 0, bitDepth: 4, body: [0, 2], size: 4 },
    { colorType: 0, bitDepth: 8, body: [0, 35], size: 4 },
    { colorType: 2, bitDepth: 8, body: [0, 18, 0, 19, 0, 20], size: 4 },
  ])('becomes alpha 0 and stays a color: $colorType at $bitDepth bits', async ({ colorType, bitDepth, body, size }) => {
    const mask = 2 ** bitDepth - 1;
    const sample = (x: number, y: number, channel: number) => ramp(x, y, channel) & mask;
    for (const interlaced of [0, 1] as const) {
      const ahead = [chunk('tRNS', body)];
      const file = writePng({ width: size, height: size, bitDepth, colorType, interlaced, sample, ahead });
      const ours = await decodeRgba(openPng(file, inflate));
      expect(firstDifference(asJudged(ours, file), judgeRgba(file))).toBeNull();
      const at = Array.from({ length: size * size }, (_, texel) => texel * 4).filter(
        (texel) => ours.codes[texel + 3] === 0,
      );
      const key = body.filter((_, index) => index % 2 === 1).map((code) => (code * 255) / mask);
      expect(at.length).toBeGreaterThan(0);
      for (const texel of at) expect(ours.codes[texel]).toBe(key[0]);
    }
  });

  test('is compared on all 16 bits', async () => {
    // 0x1234 and 0x1235 are one code once they are brought to 8 bits.
    const ahead = [chunk('tRNS', [0x12, 0x34])];
    const sample = (x: number) => 0x1234 + x;
    const file = writePng({ width: 2, height: 1, bitDepth: 16, colorType: 0, sample, ahead });
    const raster = await decodeImage(openPng(file, inflate));
    expect(raster).toMatchObject({ channels: 2, depth: 16, codes: Uint16Array.of(0x1234, 0, 0x1235, 65535) });
  });

  test('has its bits above the bit depth dropped', async () => {
    // [PNG3, 11.3.1.1]: only the low-order bits count where the depth is below 16.
    const ahead = [chunk('tRNS', [0xab, 0xf2])];
    const file = writePng({ width: 4, height: 1, bitDepth: 2, colorType: 0, sample: (x) => x, ahead });
    const raster = await decodeImage(openPng(file, inflate));
    expect(raster).toMatchObject({ channels: 2, codes: Uint8Array.of(0, 255, 85, 255, 170, 0, 255, 255) });
  });
});

describe('A palette', () => {
  test('keeps the alphas of tRNS and is opaque beyond them', async () => {
    const ahead = [chunk('PLTE', [1, 2, 3, 4, 5, 6, 7, 8, 9]), chunk('tRNS', [0, 128])];
    const file = writePng({ width: 3, height: 1, bitDepth: 2, colorType: 3, sample: (x) => x, ahead });
    const source = openPng(file, inflate);
    expect(source.header).toMatchObject({ channels: 4, depth: 8 });
    expect(await decodeImage(source)).toMatchObject({
      kind: 'indexed',
      indexBits: 2,
      alphaCount: 2,
      indices: Uint8Array.of(0, 1, 2),
      palette: Uint8Array.of(1, 2, 3, 0, 4, 5, 6, 128, 7, 8, 9, 255),
    });
  });

  test('beside true color is a suggestion and changes nothing', () => {
    const ahead = [chunk('PLTE', [1, 2, 3])];
    const file = writePng({ width: 1, height: 1, bitDepth: 8, colorType: 2, sample: () => 9, ahead });
    expect(openPng(file, inflate).header).toMatchObject({ channels: 3, indexed: null });
  });
});

describe('Color chunks', () => {
  const words = (...values: number[]) =>
    values.flatMap((value) => [24, 16, 8, 0].map((shift) => (value >> shift) & 255));
  const primaries = [31270, 32900, 64000, 33000, 30000, 60000, 15000, 6000];
  const profile = [...Buffer.from('Odd\u0007 profile\0', 'latin1'), 0, 1, 2, 3];
  const tags = [
    chunk('cHRM', words(...primaries)),
    chunk('cICP', [12, 13, 0, 1]),
    chunk('iCCP', profile),
    chunk('sRGB', [1]),
    chunk('gAMA', words(45455)),
  ];
  const base = { width: 1, height: 1, bitDepth: 8, colorType: 2, sample: () => 200 };

  test('are told and not obeyed', async () => {
    const source = openPng(writePng({ ...base, ahead: tags }), inflate);
    expect(source.header.colorChunks).toEqual([
      { name: 'cHRM', value: primaries.join(' ') },
      { name: 'cICP', value: '12 13 0 1' },
      { name: 'iCCP', value: 'Odd profile' },
      { name: 'sRGB', value: '1' },
      { name: 'gAMA', value: '45455' },
    ]);
    expect(await decodeImage(source)).toMatchObject({ codes: Uint8Array.of(200, 200, 200) });
  });

  test('of the wrong length, after PLTE or after IDAT are not heeded', () => {
    const ahead = [chunk('sRGB', []), chunk('PLTE', [1, 2, 3]), chunk('sRGB', [0])];
    const file = writePng({ ...base, ahead, behind: [chunk('gAMA', words(45455))] });
    expect(openPng(file, inflate).header.colorChunks).toEqual([]);
  });
});

test('bytes after IEND are counted and not read', async () => {
  const file = writePng({ width: 2, height: 2, bitDepth: 8, colorType: 0, sample: noise(8) });
  const source = openPng(concat([file, new Uint8Array(7).fill(255)]), inflate);
  expect(source.header.trailingBytes).toBe(7);
  expect(await decodeImage(source)).toEqual(await decodeImage(openPng(file, inflate)));
});

test('a view into a larger buffer reads as the file alone', async () => {
  for (const colorType of [0, 6]) {
    const file = writePng({ width: 9, height: 9, bitDepth: 16, colorType, sample: noise(16), interlaced: 1 });
    const view = concat([new Uint8Array(3).fill(137), file, new Uint8Array(5)]).subarray(3, 3 + file.length);
    expect(view.byteOffset).toBe(3);
    expect(openPng(view, inflate).header.trailingBytes).toBe(0);
    expect(await decodeImage(openPng(view, inflate))).toEqual(await decodeImage(openPng(file, inflate)));
  }
});

test('rows can be asked for again, and left half way', async () => {
  const source = openPng(writePng({ width: 64, height: 64, bitDepth: 8, colorType: 6, sample: noise(8) }), inflate);
  const first = await decodeImage(source);
  for await (const row of source.rows()) if (row.y === 3) break;
  expect(await decodeImage(source)).toEqual(first);
});

test('decoding without interlace holds two lines, with it the image', () => {
  const base = { width: 100, height: 50, bitDepth: 8, colorType: 6, sample: noise(8) };
  expect(openPng(writePng(base), inflate).decodeBytes).toBe(2 * (4 + 400));
  expect(openPng(writePng({ ...base, interlaced: 1 }), inflate).decodeBytes).toBe(100 * 50 * 4);
});

test('the test writer makes headers that the judge accepts', () => {
  // Guards the fixture: a header of 13 bytes in a frame of 12.
  expect(ihdr({ width: 1, height: 1, bitDepth: 8, colorType: 0 })).toHaveLength(25);
});
