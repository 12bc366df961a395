import { inflateSync } from 'node:zlib';
import fc from 'fast-check';
import { PNG } from 'pngjs';
import { describe, expect, test } from 'vitest';
import { chooseCompression } from '../../core/codec/compression.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import type { Deflate, DeflateHints } from '../../core/port.ts';
import { expandIndexed, type IndexedRaster, type StraightRaster } from '../../core/raster/raster.ts';
import { crc32 } from '../../extension/node/ports/crc.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { noiseRaster, numbers, type Pattern } from '../fixtures/noise.ts';
import { simdFilters, simdTokens } from '../fixtures/simd.ts';
import { chunkData, readChunks } from './chunks.ts';

const sizes = fc.integer({ min: 1, max: 40 });
const extents = fc.record({ width: sizes, height: sizes });
const patterns = fc.constantFrom<Pattern>('noise', 'middle', 'extremes', 'few');

const straightRasters = fc
  .tuple(fc.integer(), extents, fc.constantFrom(1, 2, 3, 4), fc.constantFrom(8, 16), patterns)
  .map(([seed, extent, channels, depth, pattern]) => noiseRaster(seed, extent, channels, depth, pattern));

const indexedRasters: fc.Arbitrary<IndexedRaster> = fc
  .tuple(fc.integer(), extents, fc.constantFrom(1, 2, 4, 8))
  .chain(([seed, extent, indexBits]) =>
    fc.integer({ min: 1, max: 2 ** indexBits }).chain((entries) =>
      fc.integer({ min: 0, max: entries }).map((alphaCount) => {
        const next = numbers(seed);
        const palette = Uint8Array.from({ length: 4 * entries }, next);
        for (let entry = alphaCount; entry < entries; entry++) palette[4 * entry + 3] = 255;
        const indices = Uint8Array.from({ length: extent.width * extent.height }, () => next() % entries);
        return { kind: 'indexed', extent, indexBits, indices, palette, alphaCount };
      }),
    ),
  );

describe('pngjs reads back', () => {
  test('the codes of every channel count and depth, which the kernels write as the plain filters do', async () => {
    const kernels = { filters: simdFilters(), tokens: simdTokens(), crc32 };
    await fc.assert(
      fc.asyncProperty(straightRasters, async (raster) => {
        const file = await encodePng(raster, deflate);
        expect(judge(file)).toEqual(wide(raster));
        expect(Buffer.compare(await encodePng(raster, deflate, kernels), file)).toBe(0);
      }),
      { numRuns: 200 },
    );
  });

  test('the colors of an indexed raster of every depth', async () => {
    await fc.assert(
      fc.asyncProperty(indexedRasters, async (raster) => {
        expect(judge(await encodePng(raster, deflate))).toEqual(wide(expandIndexed(raster)));
      }),
      { numRuns: 200 },
    );
  });

  test('codes that are a view into a larger buffer', async () => {
    const raster = noiseRaster(3, { width: 7, height: 5 }, 4, 16, 'noise');
    const larger = new Uint16Array(raster.codes.length + 13).fill(0xabcd);
    larger.set(raster.codes, 6);
    const view = { ...raster, codes: larger.subarray(6, 6 + raster.codes.length) };
    expect(await encodePng(view, deflate)).toEqual(await encodePng(raster, deflate));
  });
});

test('an indexed file keeps palette order, tRNS length and index bits', async () => {
  await fc.assert(
    fc.asyncProperty(indexedRasters, async (raster) => {
      const chunks = readChunks(await encodePng(raster, deflate));
      expect(chunks[0].data.subarray(8)).toEqual(Uint8Array.of(raster.indexBits, 3, 0, 0, 0));
      const entries = Array.from({ length: raster.palette.length / 4 }, (_, entry) =>
        raster.palette.subarray(4 * entry, 4 * entry + 4),
      );
      expect([...chunkData(chunks, 'PLTE')!]).toEqual(entries.flatMap((entry) => [...entry.subarray(0, 3)]));
      const alphas = entries.slice(0, raster.alphaCount).map((entry) => entry[3]);
      expect([...(chunkData(chunks, 'tRNS') ?? [])]).toEqual(alphas);
      // The stored indices, row by row, by the specification's packing: leftmost in the high bits, filter 0.
      const rows = inflateSync(chunkData(chunks, 'IDAT')!);
      const rowBytes = 1 + Math.ceil((raster.extent.width * raster.indexBits) / 8);
      const stored = Array.from(raster.indices, (_, texel) => {
        const bit = (texel % raster.extent.width) * raster.indexBits;
        const byte = rows[Math.floor(texel / raster.extent.width) * rowBytes + 1 + (bit >> 3)];
        return (byte >> (8 - raster.indexBits - (bit & 7))) & (2 ** raster.indexBits - 1);
      });
      expect(stored).toEqual([...raster.indices]);
      expect(rows.length).toBe(rowBytes * raster.extent.height);
    }),
  );
});

test('chunks: no color chunk, IEND last, image data in chunks of one length', async () => {
  const chunks = readChunks(await encodePng(noiseRaster(1, { width: 700, height: 600 }, 4, 8, 'noise'), deflate));
  expect(chunks.map((chunk) => chunk.name)).toEqual(['IHDR', 'IDAT', 'IDAT', 'IEND']);
  expect(chunks[1].data.length).toBe(2 ** 20);
});

test('the file does not hang on how the deflate port cuts its pieces', async () => {
  const byBytes: Deflate = async function* (pieces, hints) {
    for await (const piece of deflate(pieces, hints)) for (const byte of piece) yield Uint8Array.of(byte);
  };
  const raster = noiseRaster(8, { width: 90, height: 31 }, 3, 8, 'few');
  expect(await encodePng(raster, byBytes)).toEqual(await encodePng(raster, deflate));
});

test('the same raster twice gives the same bytes', async () => {
  await fc.assert(
    fc.asyncProperty(fc.oneof(straightRasters, indexedRasters), async (raster) => {
      expect(await encodePng(raster, deflate)).toEqual(await encodePng(structuredClone(raster), deflate));
    }),
    { numRuns: 40 },
  );
});

describe('rows go through the filter that the specification recommends', () => {
  // Sums of magnitudes counted by hand; bytes are signed. Gray of 8 bits, so a texel is a byte.
  test.each<[string, number[][], number[]]>([
    [
      'a flat row, then its equal: sub, then up (lower number among equals)',
      [Array(9).fill(90), Array(9).fill(90)],
      [1, 2],
    ],
    ['a ramp: sub', [[10, 20, 30, 40, 50, 60]], [1]],
    ['small codes about zero: none', [[1, 255, 1, 255, 1]], [0]],
    // Row 2 minus floor((left + above) / 2) is 10 then zeros.
    [
      'half of left and above: average',
      [
        [100, 100, 100, 100],
        [60, 80, 90, 95],
      ],
      [1, 3],
    ],
    // left + above - corner predicts a plane exactly but in the first column.
    [
      'a step seen again to the right: Paeth',
      [
        [0, 0, 0, 90, 90, 90, 90],
        [40, 40, 40, 90, 90, 90, 90],
      ],
      [1, 4],
    ],
  ])('%s', async (_, rows, expected) => {
    const extent = { width: rows[0].length, height: rows.length };
    const raster: StraightRaster = {
      kind: 'straight',
      extent,
      channels: 1,
      depth: 8,
      codes: Uint8Array.from(rows.flat()),
    };
    const stored = inflateSync(chunkData(readChunks(await encodePng(raster, deflate)), 'IDAT')!);
    expect(rows.map((_row, y) => stored[y * (1 + extent.width)])).toEqual(expected);
  });

  test('and no other filter of a row sums to less', async () => {
    await fc.assert(
      fc.asyncProperty(straightRasters, async (raster) => {
        if (chooseCompression(raster) === 'labels') return;
        const stored = inflateSync(chunkData(readChunks(await encodePng(raster, deflate)), 'IDAT')!);
        const rowBytes = (raster.extent.width * raster.channels * raster.depth) / 8;
        const plain = bigEndianRows(raster);
        for (let y = 0; y < raster.extent.height; y++) {
          const type = stored[y * (1 + rowBytes)];
          const sums = [0, 1, 2, 3, 4].map((each) =>
            sumByDefinition(plain, y, (raster.channels * raster.depth) / 8, each),
          );
          expect(type).toBe(sums.indexOf(Math.min(...sums)));
        }
      }),
    );
  });
});

describe('compression follows the picture', () => {
  const extent = { width: 256, height: 256 };
  // Slopes that bend, with a grain of three codes, as paint has.
  const next = numbers(4);
  const gradient = paint(
    3,
    (x, y, channel) => 40 + x * 0.3 + ((y * y) >> 10) + ((x * y) >> 11) + channel * 9 + (next() % 3),
  );
  const tile = noiseRaster(5, { width: 32, height: 32 }, 3, 8, 'noise').codes;
  const tiled = paint(3, (x, y, channel) => tile[3 * ((y % 32) * 32 + (x % 32)) + channel]);
  const painted = (x: number, y: number, channel: number) => gradient.codes[3 * (y * 256 + x) + channel];
  const paintedTiles = paint(3, (x, y, channel) => painted(x % 64, y % 64, channel));
  const cutOut = paint(4, (x, y, channel) => (y % 64 < 32 ? 0 : channel < 3 ? painted(x, y, channel) : 255));
  const flat = paint(4, (x, y, channel) => (((x >> 4) ^ (y >> 4)) * (channel + 1) * 7) & 255 & 0xf0);
  const grain = noiseRaster(9, extent, 3, 8, 'middle');

  test.each([
    ['grain', grain, 'painted'],
    ['tiles of noise', tiled, 'repeating'],
    ['a painted tile', paintedTiles, 'repeating'],
    ['a gradient', gradient, 'painted'],
    ['paint between runs', cutOut, 'painted'],
    ['a checkerboard of few colors', flat, 'labels'],
    ['one color', paint(4, () => 17), 'labels'],
    ['a flat height', paint(1, () => 17), 'repeating'],
    ['a single texel', { ...grain, extent: { width: 1, height: 1 }, codes: Uint8Array.of(1, 2, 3) }, 'labels'],
  ] as const)('%s', (_, raster, expected) => {
    expect(chooseCompression(raster)).toBe(expected);
  });

  // Shares of the plain codes, and of the same rows unfiltered at zlib's own default; each a fifth more than measured, since
  // zlibs differ by some hundredths.
  test.each([
    ['a gradient', gradient, 0.36, 0.67],
    ['paint between runs', cutOut, 0.155, 0.65],
    ['tiles of noise', tiled, 0.03, 1.2],
    ['painted tiles', paintedTiles, 0.124, 0.93],
    ['flat art', flat, 0.0085, 1.2],
    ['one color', paint(3, () => 200), 0.0035, 1],
  ] as const)('%s', async (_, raster, ofCodes, ofUnfiltered) => {
    const size = (await encodePng(raster, deflate)).length;
    const unfiltered = bigEndianRows(raster).map((row) => Uint8Array.of(0, ...row));
    const without = await deflatedBytes(unfiltered, { level: 6 });
    expect(size).toBeLessThan(ofCodes * raster.codes.length);
    expect(size).toBeLessThan(ofUnfiltered * without);
  });

  function paint(channels: 1 | 3 | 4, code: (x: number, y: number, channel: number) => number): StraightRaster {
    const codes = new Uint8Array(extent.width * extent.height * channels);
    for (let at = 0; at < codes.length; at++) {
      const texel = Math.floor(at / channels);
      codes[at] = code(texel % extent.width, Math.floor(texel / extent.width), at % channels);
    }
    return { kind: 'straight', extent, channels, depth: 8, codes };
  }
});

describe('a caller who is mistaken is told', () => {
  const indexed: IndexedRaster = {
    kind: 'indexed',
    extent: { width: 2, height: 1 },
    indexBits: 1,
    indices: Uint8Array.of(0, 1),
    palette: Uint8Array.of(1, 2, 3, 255, 4, 5, 6, 255),
    alphaCount: 0,
  };
  test.each([
    ['too few codes', { ...noiseRaster(1, { width: 3, height: 3 }, 3, 8, 'noise'), extent: { width: 3, height: 4 } }],
    ['an empty extent', noiseRaster(1, { width: 0, height: 3 }, 3, 8, 'noise')],
    ['an index outside the palette', { ...indexed, indices: Uint8Array.of(0, 2) }],
    ['a palette beyond the index bits', { ...indexed, palette: new Uint8Array(12) }],
    ['an empty palette', { ...indexed, palette: new Uint8Array(0) }],
    ['more alphas than entries', { ...indexed, alphaCount: 3 }],
  ])('%s', async (_, raster) => {
    await expect(encodePng(raster, deflate)).rejects.toThrow(RangeError);
  });
});

/** What pngjs, an outside judge, sees: extent and RGBA of the file's depth. */
function judge(file: Uint8Array): object {
  const { width, height, data, depth } = PNG.sync.read(Buffer.from(file), { skipRescale: true }) as unknown as {
    width: number;
    height: number;
    data: ArrayLike<number>;
    depth: number;
  };
  return { width, height, deep: depth === 16, codes: Array.from(data) };
}

/** The same for a raster, gray and opacity spelled out. */
function wide({ extent, channels, depth, codes }: StraightRaster): object {
  const max = depth === 8 ? 255 : 65535;
  const lanes = { 1: [0, 0, 0, null], 2: [0, 0, 0, 1], 3: [0, 1, 2, null], 4: [0, 1, 2, 3] }[channels];
  const wider = Array.from({ length: extent.width * extent.height * 4 }, (_, at) => {
    const lane = lanes[at % 4];
    return lane === null ? max : codes[Math.floor(at / 4) * channels + lane];
  });
  return { ...extent, deep: depth === 16, codes: wider };
}

function bigEndianRows({ extent, codes, depth }: StraightRaster): Uint8Array[] {
  const bytes = depth === 8 ? [...codes] : Array.from(codes).flatMap((code) => [code >> 8, code & 255]);
  const rowBytes = bytes.length / extent.height;
  return Array.from({ length: extent.height }, (_, y) =>
    Uint8Array.from(bytes.slice(y * rowBytes, (y + 1) * rowBytes)),
  );
}

/** Filter `type` of row `y` written from the definition: x, a (left), b (above), c (above left), 0 outside. */
function sumByDefinition(rows: Uint8Array[], y: number, step: number, type: number): number {
  return rows[y].reduce((sum, x, at) => {
    const a = rows[y][at - step] ?? 0;
    const b = rows[y - 1]?.[at] ?? 0;
    const c = rows[y - 1]?.[at - step] ?? 0;
    const p = a + b - c;
    const paeth = [a, b, c].reduce((near, each) => (Math.abs(p - each) < Math.abs(p - near) ? each : near));
    const byte = (x - [0, a, b, Math.floor((a + b) / 2), paeth][type]) & 255;
    return sum + Math.min(byte, 256 - byte);
  }, 0);
}

async function deflatedBytes(pieces: Iterable<Uint8Array>, hints: DeflateHints): Promise<number> {
  let bytes = 0;
  for await (const piece of deflate(pieces, hints)) bytes += piece.length;
  return bytes;
}
