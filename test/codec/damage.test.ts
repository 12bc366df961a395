import { deflateSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { crc32 } from '../../core/codec/crc.ts';
import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import { openPng } from '../../core/codec/png/open.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { chunk, concat, filteredBytes, ihdr, joinPng, writePng } from '../fixtures/rawpng.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { writeTga } from '../fixtures/tga.ts';

const GRAY = { width: 4, height: 3, bitDepth: 8, colorType: 0, sample: (x: number, y: number) => 10 * x + y };
const COLOR = { ...GRAY, colorType: 2 };
const INDEXED = { ...GRAY, bitDepth: 2, colorType: 3, sample: (x: number) => x };
/** 3 rows of a filter byte and 4 texels. */
const GRAY_BYTES = 15;
const PLTE = chunk('PLTE', [1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12]);

function withData(data: Uint8Array): Uint8Array {
  return joinPng([ihdr(GRAY), chunk('IDAT', data)]);
}

/** Offset, value: a byte changed and the CRC of IHDR put right. */
function headerWith(offset: number, value: number): Uint8Array {
  const file = writePng(GRAY);
  file[offset] = value;
  new DataView(file.buffer).setUint32(29, crc32(file.subarray(12, 29)));
  return file;
}

async function problemIn(file: Uint8Array) {
  return problemOf(async () => decodeImage(openPng(file, inflate)));
}

const whole = filteredBytes(GRAY);
const deflated = deflateSync(whole);
const firstOfIdat = 33;

type Case = readonly [name: string, file: Uint8Array, code: string, values: Record<string, unknown>];

const STRUCTURE: readonly Case[] = [
  ['an empty file', new Uint8Array(0), 'file-empty', {}],
  ['part of a signature', writePng(GRAY).subarray(0, 5), 'png-signature', { found: '89 50 4e 47 0d' }],
  ['a signature alone', writePng(GRAY).subarray(0, 8), 'png-file-truncated', { chunk: 'IEND', found: 8, expected: 20 }],
  ['half of IHDR', writePng(GRAY).subarray(0, 20), 'png-file-truncated', { chunk: 'IHDR', found: 20, expected: 33 }],
  ['no IEND', writePng(GRAY).subarray(0, -12), 'png-file-truncated', { chunk: 'IEND' }],
  ['half of IEND', writePng(GRAY).subarray(0, -3), 'png-file-truncated', { chunk: 'IEND' }],
  ['no IHDR', joinPng([PLTE]), 'png-missing-chunk', { chunk: 'IHDR', offset: 8, found: 'PLTE' }],
  ['a short IHDR', joinPng([chunk('IHDR', [1, 2])]), 'png-chunk-length', { chunk: 'IHDR', found: 2, expected: 13 }],
  ['two IHDR', writePng({ ...GRAY, ahead: [ihdr(GRAY)] }), 'png-chunk-order', { chunk: 'IHDR', after: 'IHDR' }],
  ['compression 1', headerWith(26, 1), 'png-header', { field: 'compression method', found: 1 }],
  ['filter method 64', headerWith(27, 64), 'png-header', { field: 'filter method', found: 64 }],
  ['interlace 2', headerWith(28, 2), 'png-header', { field: 'interlace method', found: 2 }],
  [
    'bit depth 16 with a palette',
    writePng({ ...INDEXED, bitDepth: 16 }),
    'png-header',
    { found: 16, allowed: '1, 2, 4, 8' },
  ],
  ['16385 texels', headerWith(18, 0x40), 'extent-out-of-range', { width: 0x4004, height: 3, min: 1, max: 16384 }],
  ['no height', headerWith(23, 0), 'extent-out-of-range', { width: 4, height: 0 }],
  ['no PLTE', writePng(INDEXED), 'png-missing-chunk', { chunk: 'PLTE', offset: firstOfIdat, found: 'IDAT' }],
  [
    'tRNS before PLTE',
    writePng({ ...INDEXED, ahead: [chunk('tRNS', [1]), PLTE] }),
    'png-missing-chunk',
    { chunk: 'PLTE', found: 'tRNS' },
  ],
  ['two PLTE', writePng({ ...INDEXED, ahead: [PLTE, PLTE] }), 'png-chunk-order', { chunk: 'PLTE', after: 'PLTE' }],
  ['PLTE after IDAT', writePng({ ...COLOR, behind: [PLTE] }), 'png-chunk-order', { chunk: 'PLTE', after: 'IDAT' }],
  ['PLTE with gray', writePng({ ...GRAY, ahead: [PLTE] }), 'png-forbidden-chunk', { chunk: 'PLTE', colorType: 0 }],
  [
    'PLTE of 4 bytes',
    writePng({ ...INDEXED, ahead: [chunk('PLTE', [1, 2, 3, 4])] }),
    'png-chunk-length',
    { found: 4, expected: 6 },
  ],
  [
    'PLTE of nothing',
    writePng({ ...INDEXED, ahead: [chunk('PLTE', [])] }),
    'png-palette-size',
    { found: 0, allowed: 4 },
  ],
  [
    'PLTE of 5 for 2 bits',
    writePng({ ...INDEXED, ahead: [chunk('PLTE', new Uint8Array(15))] }),
    'png-palette-size',
    { found: 5, allowed: 4 },
  ],
  [
    'tRNS longer than PLTE',
    writePng({ ...INDEXED, ahead: [PLTE, chunk('tRNS', [1, 2, 3, 4, 5])] }),
    'png-chunk-length',
    { chunk: 'tRNS', found: 5 },
  ],
  [
    'two tRNS',
    writePng({ ...GRAY, ahead: [chunk('tRNS', [0, 1]), chunk('tRNS', [0, 1])] }),
    'png-chunk-order',
    { chunk: 'tRNS', after: 'tRNS' },
  ],
  [
    'tRNS after IDAT',
    writePng({ ...GRAY, behind: [chunk('tRNS', [0, 1])] }),
    'png-chunk-order',
    { chunk: 'tRNS', after: 'IDAT' },
  ],
  [
    'tRNS of 1 byte',
    writePng({ ...GRAY, ahead: [chunk('tRNS', [0])] }),
    'png-chunk-length',
    { chunk: 'tRNS', found: 1, expected: 2 },
  ],
  [
    'tRNS of 2 bytes for RGB',
    writePng({ ...COLOR, ahead: [chunk('tRNS', [0, 1])] }),
    'png-chunk-length',
    { found: 2, expected: 6 },
  ],
  [
    'tRNS with gray and alpha',
    writePng({ ...GRAY, colorType: 4, ahead: [chunk('tRNS', [0, 1])] }),
    'png-forbidden-chunk',
    { chunk: 'tRNS', colorType: 4 },
  ],
  [
    'tRNS with RGBA',
    writePng({ ...GRAY, colorType: 6, ahead: [chunk('tRNS', [0, 1])] }),
    'png-forbidden-chunk',
    { chunk: 'tRNS', colorType: 6 },
  ],
  ['no IDAT', joinPng([ihdr(GRAY)]), 'png-missing-chunk', { chunk: 'IDAT', found: 'IEND' }],
  [
    'a chunk between IDATs',
    joinPng([ihdr(GRAY), chunk('IDAT', deflated), chunk('tEXt', []), chunk('IDAT', [])]),
    'png-chunk-order',
    { chunk: 'IDAT', after: 'tEXt' },
  ],
  [
    'an unknown critical chunk',
    writePng({ ...GRAY, ahead: [chunk('HiDe', [])] }),
    'png-unknown-chunk',
    { chunk: 'HiDe', offset: 33 },
  ],
  [
    'a name of no letters',
    writePng({ ...GRAY, ahead: [chunk('t\u0000\u0001t', [])] }),
    'png-chunk-name',
    { offset: 33, found: '74 00 01 74' },
  ],
  [
    'an IEND with a body',
    concat([writePng(GRAY).subarray(0, -12), chunk('IEND', [1])]),
    'png-chunk-length',
    { chunk: 'IEND', found: 1, expected: 0 },
  ],
  [
    'a palette index beyond',
    writePng({ ...INDEXED, ahead: [chunk('PLTE', [1, 2, 3, 4, 5, 6])] }),
    'png-palette-index',
    { x: 2, y: 0, found: 2, entries: 2 },
  ],
  [
    'a palette index beyond, interlaced',
    writePng({
      ...INDEXED,
      width: 9,
      height: 9,
      interlaced: 1,
      sample: (x, y) => (x === 5 && y === 7 ? 3 : 0),
      ahead: [chunk('PLTE', [1, 2, 3])],
    }),
    'png-palette-index',
    { x: 5, y: 7, found: 3, entries: 1 },
  ],
];

const DATA: readonly Case[] = [
  ['no data', withData(new Uint8Array(0)), 'png-promise', { expected: GRAY_BYTES, found: 0 }],
  ['one byte too few', withData(deflateSync(whole.subarray(1))), 'png-truncated', { found: 14, expected: 15 }],
  ['one byte too many', withData(deflateSync(concat([whole, Uint8Array.of(0)]))), 'png-surplus', { expected: 15 }],
  ['a second stream behind', withData(concat([deflated, deflated])), 'png-surplus', { expected: 15 }],
  [
    'a short stream and bytes behind',
    withData(concat([deflateSync(whole.subarray(5)), deflated])),
    'png-truncated',
    { found: 10 },
  ],
  ['half a stream', withData(deflated.subarray(0, 12)), 'png-truncated', { expected: 15 }],
  ['no check sum', withData(deflated.subarray(0, -4)), 'png-corrupt-data', { found: 15, expected: 15 }],
  [
    'a wrong check sum',
    withData(deflated.map((byte, at) => (at === deflated.length - 1 ? byte ^ 1 : byte))),
    'png-corrupt-data',
    {},
  ],
  ['no zlib stream', withData(Uint8Array.of(1, 2, 3, 4, 5, 6, 7, 8)), 'png-corrupt-data', { found: 0, expected: 15 }],
  [
    'a stream that wants a dictionary',
    withData(deflateSync(whole, { dictionary: Buffer.from('abc') })),
    'png-corrupt-data',
    { found: 0 },
  ],
  [
    'filter 5',
    withData(deflateSync(whole.map((byte, at) => (at === 5 ? 5 : byte)))),
    'png-filter',
    { row: 1, found: 5 },
  ],
];

describe('Structure is refused in numbers', () => {
  test.each(STRUCTURE)('%s', async (_name, file, code, values) => {
    expect(await problemIn(file)).toMatchObject({ code, values });
  });
});

describe('Image data is refused in numbers', () => {
  test.each(DATA)('%s', async (_name, file, code, values) => {
    expect(await problemIn(file)).toMatchObject({ code, values });
  });
});

test.each([0, 1] as const)(
  'a promise of 2 GiB on a few bytes is refused before anything is held, interlace %i',
  async (interlaced) => {
    const header = { width: 16384, height: 16384, bitDepth: 16, colorType: 6, interlaced };
    const file = joinPng([ihdr(header), chunk('IDAT', deflateSync(new Uint8Array(1000)))]);
    const before = process.memoryUsage().arrayBuffers;
    expect(await problemIn(file)).toMatchObject({ code: 'png-promise' });
    // Two rows of the promise would be 256 KiB, the image 2 GiB.
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(0x40000);
  },
);

test('a megabyte behind a promise of 15 bytes is not inflated', async () => {
  let inflated = 0;
  const counting: typeof inflate = async function* (pieces, limit) {
    for await (const piece of inflate(pieces, limit)) {
      inflated += piece.length;
      yield piece;
    }
  };
  const file = withData(deflateSync(concat([whole, new Uint8Array(1 << 20)])));
  const problem = await problemOf(async () => decodeImage(openPng(file, counting)));
  expect(problem).toMatchObject({ code: 'png-surplus' });
  expect(inflated).toBe(GRAY_BYTES + 1);
});

describe('Mutations', () => {
  const sample = (x: number, y: number, channel: number) => (x * 5 + y * 3 + channel) & 3;
  const seeds: readonly (readonly [path: string, file: Uint8Array])[] = [
    ['a.png', writePng({ width: 5, height: 4, bitDepth: 8, colorType: 6, sample, filter: (row) => row % 5 })],
    ['b.png', writePng({ width: 9, height: 9, bitDepth: 16, colorType: 2, sample, interlaced: 1, filter: () => 4 })],
    ['c.png', writePng({ ...INDEXED, ahead: [PLTE, chunk('tRNS', [7])], interlaced: 1 })],
    ['d.png', writePng({ ...GRAY, bitDepth: 1, sample, ahead: [chunk('tRNS', [0, 1]), chunk('gAMA', [0, 0, 1, 2])] })],
    ['e.tga', writeTga({ width: 5, height: 4, type: 10, texelBits: 24, texel: (x) => x })],
    [
      'f.tga',
      writeTga({
        width: 5,
        height: 4,
        type: 1,
        texelBits: 8,
        texel: (x) => x % 2,
        map: { first: 0, entryBits: 16, entries: [1, 2] },
      }),
    ],
  ];

  const edit = fc.record({ at: fc.nat(), byte: fc.integer({ min: 0, max: 255 }) });
  const mutation = fc.record({
    seed: fc.constantFrom(...seeds),
    edits: fc.array(edit, { minLength: 0, maxLength: 4 }),
    cut: fc.option(fc.nat(), { freq: 3 }),
    /** Puts the CRCs right, so that the damage reaches what lies behind them. */
    mended: fc.boolean(),
  });

  test('lead to a raster of the size promised or to a refusal, never to anything else', async () => {
    await fc.assert(
      fc.asyncProperty(mutation, async ({ seed: [path, file], edits, cut, mended }) => {
        let bytes = file.slice();
        for (const { at, byte } of edits) bytes[at % bytes.length] = byte;
        if (mended && path.endsWith('png')) mendCrcs(bytes);
        if (cut !== null) bytes = bytes.subarray(0, cut % bytes.length);
        await problemOf(async () => {
          const source = openImage(bytes, path, inflate);
          const { width, height } = source.header.extent;
          // A raster can be no larger than what its compressed form can hold: 1032 to 1, in eighths of a texel at least.
          expect(width * height).toBeLessThanOrEqual(bytes.length * 1032 * 8);
          const raster = await decodeImage(source);
          expect(raster.extent).toEqual({ width, height });
        });
      }),
      { numRuns: 4000, seed: 20 },
    );
  });
});

function mendCrcs(bytes: Uint8Array): void {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  for (let at = 8; at + 12 <= bytes.length; ) {
    const end = at + 12 + view.getUint32(at);
    if (end > bytes.length) return;
    view.setUint32(end - 4, crc32(bytes.subarray(at + 4, end - 4)));
    at = end;
  }
}
