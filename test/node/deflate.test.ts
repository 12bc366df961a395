import { constants, deflateSync, inflateSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { DeflateHints } from '../../core/port.ts';
import { deflate } from '../../extension/node/deflate.ts';
import { numbers } from '../fixtures/noise.ts';

const anyHints: fc.Arbitrary<DeflateHints> = fc.record({
  level: fc.integer({ min: 1, max: 9 }),
  strategy: fc.constantFrom('default', 'filtered', 'huffman', 'rle'),
});

const strategies = ['default', 'rle'] as const;

/** Small uneven bytes: every strategy finds something, and each something else. */
function someBytes(seed: number, length: number): Uint8Array {
  const next = numbers(seed);
  return Uint8Array.from({ length }, () => next() & next() & 31);
}

async function deflated(pieces: Iterable<Uint8Array>, hints: DeflateHints): Promise<Buffer> {
  const parts: Uint8Array[] = [];
  for await (const part of deflate(pieces, hints)) parts.push(part);
  return Buffer.concat(parts);
}

/** As the writers of rows do: every piece is the same buffer, filled anew. */
function* reused(bytes: Uint8Array, step: number): Iterable<Uint8Array> {
  const piece = new Uint8Array(step);
  for (let at = 0; at < bytes.length; at += step) {
    const part = bytes.subarray(at, at + step);
    piece.set(part);
    yield piece.subarray(0, part.length);
  }
}

describe('deflate on Node', () => {
  const lengths = fc.oneof(fc.nat(300), fc.constantFrom(65535, 65536, 65537, 131071, 131072, 131073, 200_000, 700_000));

  test('inflates back, whatever the hints and the pieces, and the bytes do not hang on the pieces', async () => {
    await fc.assert(
      fc.asyncProperty(
        fc.nat(),
        lengths,
        fc.integer({ min: 1, max: 100_000 }),
        anyHints,
        async (seed, length, step, hints) => {
          const bytes = someBytes(seed, length);
          const whole = await deflated([bytes], hints);
          expect(inflateSync(whole).equals(bytes)).toBe(true);
          expect((await deflated(reused(bytes, Math.max(step, length >> 9)), hints)).equals(whole)).toBe(true);
        },
      ),
      { numRuns: 60 },
    );
  });

  test.each(strategies)('nothing is a stream of nothing (%s)', async (strategy) => {
    expect(inflateSync(await deflated([], { level: 6, strategy }))).toHaveLength(0);
  });

  test('runs are looked for in several blocks at a time, which come in their order and cost next to nothing', async () => {
    const bytes = someBytes(1, 3_000_000);
    const blocks = await deflated([bytes], { level: 6, strategy: 'rle' });
    expect(inflateSync(blocks).equals(bytes)).toBe(true);
    const whole = deflateSync(bytes, { level: 6, strategy: constants.Z_RLE });
    expect(blocks.equals(whole)).toBe(false);
    expect(blocks.length).toBeLessThan(1.001 * whole.length);
  });

  test('level and strategy reach zlib', async () => {
    const bytes = someBytes(1, 100_000);
    const sizes = await Promise.all(
      [
        { level: 1, strategy: 'default' },
        { level: 9, strategy: 'default' },
        { level: 9, strategy: 'filtered' },
        { level: 9, strategy: 'huffman' },
        { level: 9, strategy: 'rle' },
      ].map(async (hints) => (await deflated([bytes], hints as DeflateHints)).toString('base64')),
    );
    expect(new Set(sizes).size).toBe(sizes.length);
  });

  test.each(strategies)('what a piece throws is thrown (%s)', async (strategy) => {
    function* breaking(): Iterable<Uint8Array> {
      yield someBytes(1, 100_000);
      throw new RangeError('no such row');
    }
    await expect(deflated(breaking(), { level: 6, strategy })).rejects.toThrow('no such row');
  });

  test.each(strategies)('a reader that leaves early ends the pieces (%s)', async (strategy) => {
    let ended = false;
    function* pieces(): Iterable<Uint8Array> {
      try {
        for (let seed = 0; ; seed++) yield someBytes(seed, 50_000);
      } finally {
        ended = true;
      }
    }
    let taken = 0;
    for await (const _ of deflate(pieces(), { level: 1, strategy })) if (++taken === 3) break;
    await new Promise((resolve) => setImmediate(resolve));
    expect(ended).toBe(true);
  });
});
