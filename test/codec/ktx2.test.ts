import { inflateSync } from 'node:zlib';
import fc from 'fast-check';
import { read, write } from 'ktx-parse';
import { describe, expect, test } from 'vitest';
import { encodeKtx2 } from '../../core/codec/ktx2/encode.ts';
import { formats, type Ktx2Layout, layoutKtx2, type TexelMeaning } from '../../core/codec/ktx2/format.ts';
import type { Ktx2Level } from '../../core/codec/ktx2/texels.ts';
import type { Deflate } from '../../core/port.ts';
import type { ChannelCount, Extent } from '../../core/raster/raster.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { brokenRules, type Rule, ruleNames } from './ktx2-rules.ts';

const usual: TexelMeaning = {
  content: 'color',
  channels: 4,
  depth: 8,
  transfer: 'srgb',
  alpha: 'opacity',
  normalCount: 3,
  format: 'wide',
};

/** What is written for what: the format's name and the stored channels, `1` for the largest code. */
const table: readonly [string, Partial<TexelMeaning>, string, string][] = [
  ['gray color', { channels: 1 }, 'RGBA8_SRGB', 'rrr1'],
  ['gray and alpha', { channels: 2 }, 'RGBA8_SRGB', 'rrrg'],
  ['RGB', { channels: 3 }, 'RGBA8_SRGB', 'rgb1'],
  ['RGBA', {}, 'RGBA8_SRGB', 'rgba'],
  ['RGBA whose alpha has no use', { alpha: 'none' }, 'RGBA8_SRGB', 'rgb1'],
  ['gray whose alpha has no use', { channels: 2, alpha: 'none' }, 'RGBA8_SRGB', 'rrr1'],
  ['RGBA as a mask', { alpha: 'mask' }, 'RGBA8_SRGB', 'rgba'],
  ['RGBA with data in alpha', { alpha: 'data' }, 'RGBA8_SRGB', 'rgba'],
  ['gray color as it is', { channels: 1, format: 'same' }, 'R8_SRGB', 'r'],
  ['gray and alpha, asked for as it is', { channels: 2, format: 'same' }, 'RGBA8_SRGB', 'rrrg'],
  ['RGB as it is', { channels: 3, format: 'same' }, 'RGB8_SRGB', 'rgb'],
  ['RGBA as it is', { format: 'same' }, 'RGBA8_SRGB', 'rgba'],
  ['linear gray', { channels: 1, transfer: 'linear' }, 'RGBA8_UNORM', 'rrr1'],
  ['linear gray as it is', { channels: 1, transfer: 'linear', format: 'same' }, 'R8_UNORM', 'r'],
  ['linear RGB', { channels: 3, transfer: 'linear' }, 'RGBA8_UNORM', 'rgb1'],
  ['linear RGB as it is', { channels: 3, transfer: 'linear', format: 'same' }, 'RGB8_UNORM', 'rgb'],
  ['linear RGBA', { transfer: 'linear' }, 'RGBA8_UNORM', 'rgba'],
  ['16-bit gray color', { channels: 1, depth: 16 }, 'RGBA16_UNORM', 'rrr1'],
  ['16-bit gray and alpha', { channels: 2, depth: 16 }, 'RGBA16_UNORM', 'rrrg'],
  ['16-bit RGB, asked for as it is', { channels: 3, depth: 16, format: 'same' }, 'RGBA16_UNORM', 'rgb1'],
  ['16-bit RGBA', { depth: 16 }, 'RGBA16_UNORM', 'rgba'],
  ['16-bit RGBA whose alpha has no use', { depth: 16, alpha: 'none' }, 'RGBA16_UNORM', 'rgb1'],
  ['16-bit linear RGBA', { depth: 16, transfer: 'linear' }, 'RGBA16_UNORM', 'rgba'],
  ...(['data', 'height'] as const).flatMap((content): [string, Partial<TexelMeaning>, string, string][] => [
    [`${content} of one channel`, { content, channels: 1 }, 'R8_UNORM', 'r'],
    [`${content} of two channels`, { content, channels: 2, alpha: 'data' }, 'RG8_UNORM', 'rg'],
    [`${content} of two whose second has no use`, { content, channels: 2, alpha: 'none' }, 'RG8_UNORM', 'r1'],
    [`${content} of three channels`, { content, channels: 3 }, 'RGBA8_UNORM', 'rgb1'],
    [`${content} of three, asked for as it is`, { content, channels: 3, format: 'same' }, 'RGBA8_UNORM', 'rgb1'],
    [`${content} of four channels`, { content, alpha: 'data' }, 'RGBA8_UNORM', 'rgba'],
    [`${content} of four whose last has no use`, { content, alpha: 'none' }, 'RGBA8_UNORM', 'rgb1'],
    [`16-bit ${content} of one channel`, { content, channels: 1, depth: 16 }, 'R16_UNORM', 'r'],
    [`16-bit ${content} of two channels`, { content, channels: 2, depth: 16 }, 'RG16_UNORM', 'rg'],
    [`16-bit ${content} of three channels`, { content, channels: 3, depth: 16 }, 'RGBA16_UNORM', 'rgb1'],
    [`16-bit ${content} of four channels`, { content, depth: 16 }, 'RGBA16_UNORM', 'rgba'],
  ]),
  ['normal', { content: 'normal', channels: 3 }, 'RGBA8_UNORM', 'rgb1'],
  ['normal with alpha', { content: 'normal' }, 'RGBA8_UNORM', 'rgba'],
  ['16-bit normal', { content: 'normal', channels: 3, depth: 16 }, 'RGBA16_UNORM', 'rgb1'],
  ['two-channel normal', { content: 'normal', channels: 2, normalCount: 2 }, 'RG8_UNORM', 'rg'],
  ['two-channel normal of an RGB file', { content: 'normal', channels: 3, normalCount: 2 }, 'RG8_UNORM', 'rg'],
  ['16-bit two-channel normal', { content: 'normal', depth: 16, normalCount: 2 }, 'RG16_UNORM', 'rg'],
];

const rows = table.map(([title, change, format, stored]) => ({
  title,
  meaning: { ...usual, ...change },
  format: format as keyof typeof formats,
  stored,
}));

const schemes = ['none', 'zlib'] as const;

test('every format of the table is used', () => {
  expect(new Set(rows.map((row) => row.format))).toEqual(new Set(Object.keys(formats)));
});

describe.each(rows)('$title', ({ meaning, format, stored }) => {
  const layout = layoutKtx2(meaning);

  test(`is ${format}`, () => {
    expect(layout.format).toBe(formats[format]);
    expect(layout.lanes.map((lane) => (lane === 'max' ? '1' : 'rgba'[lane])).join('')).toBe(stored);
  });

  test.each(schemes)(
    'every rule holds and a second reader finds the codes, supercompress %s',
    async (supercompress) => {
      for (const extent of [
        { width: 1, height: 1 },
        { width: 5, height: 3 },
        { width: 8, height: 8 },
        { width: 1, height: 6 },
        { width: 33, height: 2 },
      ]) {
        const all = levelsOf(extent, meaning);
        for (let count = 1; count <= all.length; count++) {
          const levels = all.slice(0, count);
          const file = await encodeKtx2(levels, layout, { supercompress }, deflate);
          expect(brokenRules(file)).toEqual([]);
          expect(storedCodes(file)).toEqual(levels.map((level) => lay(level, stored)));
        }
      }
    },
  );
});

test('any extent: the rules hold, and the writer of ktx-parse lays the same file', async () => {
  const extents = fc.record({ width: fc.integer({ min: 1, max: 40 }), height: fc.integer({ min: 1, max: 40 }) });
  await fc.assert(
    fc.asyncProperty(
      extents,
      fc.constantFrom(...rows),
      fc.constantFrom(...schemes),
      fc.nat(5),
      async (extent, { meaning }, supercompress, less) => {
        const all = levelsOf(extent, meaning);
        const levels = all.slice(0, Math.max(1, all.length - less));
        const file = await encodeKtx2(levels, layoutKtx2(meaning), { supercompress }, deflate);
        expect(brokenRules(file)).toEqual([]);
        expect(write(read(file), { keepWriter: true })).toEqual(file);
      },
    ),
    { numRuns: 150 },
  );
});

describe('places of a 5 x 3 chain', () => {
  // By hand: index 80 + 3 * 24 = 152, then the descriptor of 28 + 16 a sample, then 24 bytes of KTXorientation and 36 of
  // KTXwriter, then 1 x 1, 2 x 1 and 5 x 3 texels, each at a multiple of lcm(texel bytes, 4).
  test.each<[string, Partial<TexelMeaning>, number[], number[], number[][]]>([
    [
      'RGBA8_SRGB',
      {},
      [152, 92],
      [244, 60],
      [
        [316, 60],
        [308, 8],
        [304, 4],
      ],
    ],
    [
      'R8_UNORM',
      { content: 'data', channels: 1 },
      [152, 44],
      [196, 60],
      [
        [264, 15],
        [260, 2],
        [256, 1],
      ],
    ],
    [
      'RGB8_SRGB',
      { channels: 3, format: 'same' },
      [152, 76],
      [228, 60],
      [
        [312, 45],
        [300, 6],
        [288, 3],
      ],
    ],
    [
      'RGBA16_UNORM',
      { depth: 16 },
      [152, 92],
      [244, 60],
      [
        [328, 120],
        [312, 16],
        [304, 8],
      ],
    ],
  ])('%s', async (name, change, dfd, kvd, index) => {
    const meaning = { ...usual, ...change };
    const layout = layoutKtx2(meaning);
    expect(layout.format.name).toBe(name);
    const file = await encodeKtx2(
      levelsOf({ width: 5, height: 3 }, meaning),
      layout,
      { supercompress: 'none' },
      deflate,
    );
    const view = new DataView(file.buffer);
    expect([view.getUint32(48, true), view.getUint32(52, true)]).toEqual(dfd);
    expect([view.getUint32(56, true), view.getUint32(60, true)]).toEqual(kvd);
    expect(
      [0, 1, 2].map((level) => [0, 8].map((part) => Number(view.getBigUint64(80 + 24 * level + part, true)))),
    ).toEqual(index);
  });
});

describe('the descriptor of RGBA8_SRGB', () => {
  // Khronos Data Format Specification 1.4, the sRGB example of the basic descriptor block, with its flags word.
  const words = (flags: number) => [
    [0x5c, 0, 0x00580002, 0x00020101 + flags * 0x01000000, 0, 4, 0],
    [0x00070000, 0, 0, 0xff],
    [0x01070008, 0, 0, 0xff],
    [0x02070010, 0, 0, 0xff],
    [0x1f070018, 0, 0, 0xff],
  ];

  test.each([
    ['straight', 0],
    ['premultiplied', 1],
  ] as const)('%s', async (kind, flags) => {
    const level = { ...noiseRaster(1, { width: 2, height: 2 }, 4, 8, 'noise'), kind } as Ktx2Level;
    const file = await encodeKtx2([level], layoutKtx2(usual), { supercompress: 'none' }, deflate);
    const view = new DataView(file.buffer, 80 + 24);
    expect(Array.from({ length: 23 }, (_, word) => view.getUint32(4 * word, true))).toEqual(words(flags).flat());
    expect(brokenRules(file)).toEqual([]);
  });
});

test('only 16-bit color under a transfer must hold linear light', () => {
  const linear = rows.filter(({ meaning }) => layoutKtx2(meaning).holds === 'linear-light');
  expect(linear.map((row) => row.meaning)).toEqual(
    rows
      .map((row) => row.meaning)
      .filter(({ content, depth, transfer }) => content === 'color' && depth === 16 && transfer === 'srgb'),
  );
});

test('one red channel that is a gray color says so', async () => {
  const meaning: TexelMeaning = { ...usual, channels: 1, format: 'same' };
  const levels = levelsOf({ width: 4, height: 4 }, meaning);
  const keys = read(await encodeKtx2(levels, layoutKtx2(meaning), { supercompress: 'none' }, deflate)).keyValue;
  expect(keys).toEqual({ KTXorientation: 'rd', KTXswizzle: 'rrr1', KTXwriter: 'Sizeproof algorithm 1' });
});

test('the file does not hang on how the deflate port cuts its pieces', async () => {
  const byBytes: Deflate = async function* (pieces, hints) {
    for await (const piece of deflate(pieces, hints)) for (const byte of piece) yield Uint8Array.of(byte);
  };
  const levels = levelsOf({ width: 20, height: 9 }, usual);
  const [one, other] = await Promise.all(
    [deflate, byBytes].map((port) => encodeKtx2(levels, layoutKtx2(usual), { supercompress: 'zlib' }, port)),
  );
  expect(one).toEqual(other);
});

test('codes that are a view into a larger buffer are stored alone', async () => {
  const meaning: TexelMeaning = { ...usual, depth: 16 };
  const level = levelsOf({ width: 3, height: 3 }, meaning)[0];
  const larger = new Uint16Array(level.codes.length + 9).fill(7);
  larger.set(level.codes, 5);
  const view = { ...level, codes: larger.subarray(5, 5 + level.codes.length) };
  const layout = layoutKtx2(meaning);
  expect(await encodeKtx2([view], layout, { supercompress: 'none' }, deflate)).toEqual(
    await encodeKtx2([level], layout, { supercompress: 'none' }, deflate),
  );
});

describe('each rule catches a broken file', () => {
  type Break = (file: Uint8Array, view: DataView) => Uint8Array | undefined;
  const u32 =
    (at: number, value: number): Break =>
    (_, view) =>
      void view.setUint32(at, value, true);
  const u64 =
    (at: number, value: number): Break =>
    (_, view) =>
      void view.setBigUint64(at, BigInt(value), true);
  const byte =
    (at: number, value: number): Break =>
    (file) => {
      file[at] = value;
      return undefined;
    };
  // The file below: 5 x 3 RGBA8_SRGB; places as in the test above.
  const DFD = 152;
  const KVD = 244;
  const breaks: readonly [Rule, string, Break][] = [
    ['identifier', 'the version digit', byte(6, 0x31)],
    ['vkFormat', 'RGBA8_USCALED, which is prohibited', u32(12, 39)],
    ['vkFormat', 'none', u32(12, 0)],
    ['typeSize', 'of 16 bits', u32(16, 2)],
    ['shape', 'no width', u32(20, 0)],
    ['shape', 'a depth', u32(28, 1)],
    ['shape', 'one layer of an array', u32(32, 1)],
    ['shape', 'three faces', u32(36, 3)],
    ['levelCount', 'left to the loader', u32(40, 0)],
    ['levelCount', 'a fourth level of 5 x 3', u32(40, 4)],
    ['scheme', 'Zstandard', u32(44, 2)],
    ['scheme', 'unknown', u32(44, 7)],
    ['global data', 'an offset without data', u64(64, 304)],
    ['global data', 'a length', u64(72, 4)],
    ['dfd place', 'an offset off by 4', u32(48, DFD + 4)],
    ['dfd place', 'a total of 88', u32(DFD, 88)],
    ['dfd block', 'version 1.2', u32(DFD + 8, 0x00580001)],
    ['dfd block', 'one sample short', u32(DFD + 8, 0x00480002)],
    ['dfd color', 'primaries unspecified', byte(DFD + 13, 0)],
    ['dfd color', 'model unspecified', byte(DFD + 12, 0)],
    ['dfd transfer', 'linear under an sRGB format', byte(DFD + 14, 1)],
    ['dfd transfer', 'sRGB under a UNORM format', u32(12, 37)],
    ['dfd flags', 'a flag that is not defined', byte(DFD + 15, 2)],
    ['dfd block size', 'blocks of four texels', byte(DFD + 16, 3)],
    ['dfd block size', 'texels of 3 bytes', byte(DFD + 20, 3)],
    ['dfd samples', 'alpha not linear', byte(DFD + 28 + 3 * 16 + 3, 0x0f)],
    ['dfd samples', 'red and blue exchanged', byte(DFD + 28 + 3, 2)],
    ['dfd samples', 'a range of 254', byte(DFD + 28 + 12, 254)],
    ['kvd place', 'an offset without pairs', u32(60, 0)],
    ['kvd place', 'a length that ends inside a pair', u32(60, 40)],
    [
      'kvd keys',
      'KTXorientation after KTXwriter',
      (file) => {
        const pairs = file.slice(KVD, KVD + 60);
        file.set(pairs.subarray(24), KVD);
        file.set(pairs.subarray(0, 24), KVD + 36);
        return undefined;
      },
    ],
    ['kvd keys', 'a reserved key of our own', byte(KVD + 24 + 4 + 3, 0x57)],
    ['kvd keys', 'padding that is not 0', byte(KVD + 22, 1)],
    ['orientation', 'up', byte(KVD + 4 + 15 + 1, 0x75)],
    ['orientation', 'no NUL', byte(KVD + 4 + 15 + 2, 0x20)],
    ['writer', 'another', byte(KVD + 24 + 4 + 10, 0x73)],
    ['swizzle', 'none of rgba01', (file) => withSwizzle(file, 'rgbx')],
    ['level places', 'an offset off by 4', u64(80, 320)],
    [
      'level places',
      'padding before the smallest',
      (file, view) => {
        const wider = new Uint8Array(file.length + 4);
        wider.set(file.subarray(0, 304));
        wider.set(file.subarray(304), 308);
        const widerView = new DataView(wider.buffer);
        for (const at of [80, 104, 128]) widerView.setBigUint64(at, view.getBigUint64(at, true) + 4n, true);
        return wider;
      },
    ],
    ['level places', 'a byte behind the last level', (file) => Uint8Array.of(...file, 0)],
    ['level places', 'cut short', (file) => file.slice(0, -1)],
    ['level lengths', 'a row short', u64(96, 40)],
    ['level lengths', 'stored and uncompressed length differ', u64(88, 56)],
  ];

  test('there is a broken file for every rule', () => {
    const streams: readonly Rule[] = ['level streams'];
    expect(new Set([...breaks.map(([rule]) => rule), ...streams])).toEqual(new Set(ruleNames));
  });

  test.each(breaks)('%s: %s', async (rule, _, damage) => {
    const file = await encodeKtx2(
      levelsOf({ width: 5, height: 3 }, usual),
      layoutKtx2(usual),
      { supercompress: 'none' },
      deflate,
    );
    expect(brokenRules(file)).toEqual([]);
    const broken = damage(file, new DataView(file.buffer)) ?? file;
    expect(brokenRules(broken)).toContain(rule);
  });

  test('level places: levels of RGB8 aligned to 4 alone', async () => {
    const meaning: TexelMeaning = { ...usual, channels: 3, format: 'same' };
    const levels = levelsOf({ width: 2, height: 1 }, meaning);
    const file = await encodeKtx2(levels, layoutKtx2(meaning), { supercompress: 'none' }, deflate);
    const view = new DataView(file.buffer);
    const [large, small] = [80, 104].map((at) => Number(view.getBigUint64(at, true)));
    expect([large - small, small % 12]).toEqual([12, 0]);
    // The larger level 4 bytes behind the smaller one, as an alignment of 4 would have it.
    const tight = Uint8Array.of(...file.subarray(0, small + 4), ...file.subarray(large));
    new DataView(tight.buffer).setBigUint64(80, BigInt(small + 4), true);
    expect(brokenRules(tight)).toEqual(['level places']);
  });

  test.each<[string, Break]>([
    ['a damaged stream', (file) => Uint8Array.from(file, (byte, at) => (at === file.length - 3 ? byte ^ 0x55 : byte))],
    [
      'a byte behind the stream',
      (file, view) => {
        view.setBigUint64(88, view.getBigUint64(88, true) + 1n, true);
        return Uint8Array.of(...file, 0);
      },
    ],
  ])('level streams: %s', async (_, damage) => {
    const levels = levelsOf({ width: 5, height: 3 }, usual);
    const file = await encodeKtx2(levels, layoutKtx2(usual), { supercompress: 'zlib' }, deflate);
    expect(brokenRules(file)).toEqual([]);
    expect(brokenRules(damage(file, new DataView(file.buffer)) ?? file)).toEqual(['level streams']);
  });

  function withSwizzle(file: Uint8Array, swizzle: string): Uint8Array {
    const container = read(file);
    container.keyValue.KTXswizzle = swizzle;
    return write(container, { keepWriter: true });
  }
});

describe('a caller who is mistaken is told', () => {
  const chain = levelsOf({ width: 4, height: 4 }, usual);
  const layout = layoutKtx2(usual);
  const premultiplied = chain.map((level): Ktx2Level => ({ ...level, kind: 'premultiplied' }));
  test.each<[string, readonly Ktx2Level[], Ktx2Layout]>([
    ['no levels', [], layout],
    ['a level left out', [chain[0], chain[2]], layout],
    ['a level below 1 x 1', [...chain, chain[2]], layout],
    ['codes that are too few', [{ ...chain[0], codes: chain[0].codes.subarray(4) }], layout],
    ['another depth than the format', levelsOf({ width: 4, height: 4 }, { ...usual, depth: 16 }), layout],
    ['fewer channels than the lanes', levelsOf({ width: 4, height: 4 }, { ...usual, channels: 3 }), layout],
    ['levels of two kinds', [chain[0], premultiplied[1]], layout],
    ['premultiplied color without its alpha', premultiplied, layoutKtx2({ ...usual, alpha: 'none' })],
  ])('%s', async (_, levels, its) => {
    await expect(encodeKtx2(levels, its, { supercompress: 'none' }, deflate)).rejects.toThrow(RangeError);
  });

  test('a normal of fewer channels than it is stored in', () => {
    expect(() => layoutKtx2({ ...usual, content: 'normal', channels: 2 })).toThrow(RangeError);
    expect(() => layoutKtx2({ ...usual, content: 'normal', channels: 1, normalCount: 2 })).toThrow(RangeError);
  });
});

function levelsOf(base: Extent, { channels, depth }: { channels: ChannelCount; depth: 8 | 16 }): Ktx2Level[] {
  const levels: Ktx2Level[] = [];
  for (let { width, height } = base; ; width = Math.max(1, width >> 1), height = Math.max(1, height >> 1)) {
    levels.push(noiseRaster(levels.length + 1, { width, height }, channels, depth, 'noise'));
    if (width === 1 && height === 1) return levels;
  }
}

/** A level's codes in the stored channels. */
function lay({ codes, channels, depth }: Ktx2Level, stored: string): number[] {
  const texels = Array.from({ length: codes.length / channels }, (_, texel) => texel);
  return texels.flatMap((texel) =>
    [...stored].map((lane) => (lane === '1' ? 2 ** depth - 1 : codes[texel * channels + 'rgba'.indexOf(lane)])),
  );
}

/** Codes of each level as ktx-parse reads them. */
function storedCodes(file: Uint8Array): number[][] {
  const { levels, typeSize, supercompressionScheme } = read(file);
  return levels.map(({ levelData }) => {
    const bytes = supercompressionScheme === 3 ? inflateSync(levelData) : levelData;
    if (typeSize === 1) return [...bytes];
    return Array.from({ length: bytes.length / 2 }, (_, code) => bytes[2 * code] + 256 * bytes[2 * code + 1]);
  });
}
