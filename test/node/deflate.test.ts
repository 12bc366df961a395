import { inflateSync } from 'node:zlib';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { DeflateHints } from '../../core/port.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { numbers } from '../fixtures/noise.ts';

const anyHints: fc.Arbitrary<DeflateHints> = fc.record({ level: fc.integer({ min: 1, max: 9 }) });

/** Small uneven bytes: every level finds something, and each something else. */
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

  test('nothing is a stream of nothing', async () => {
    expect(inflateSync(await deflated([], { level: 6 }))).toHaveLength(0);
  });

  test('the level reaches zlib', async () => {
    const bytes = someBytes(1, 100_000);
    const sizes = await Promise.all(
      [1, 6, 9].map(async (level) => (await deflated([bytes], { level })).toString('base64')),
    );
    expect(new Set(sizes).size).toBe(sizes.length);
  });

  test('what a piece throws is thrown', async () => {
    function* breaking(): Iterable<Uint8Array> {
      yield someBytes(1, 100_000);
      throw new RangeError('no such row');
    }
    await expect(deflated(breaking(), { level: 6 })).rejects.toThrow('no such row');
  });

  test('a reader that leaves early ends the pieces', async () => {
    let ended = false;
    function* pieces(): Iterable<Uint8Array> {
      try {
        for (let seed = 0; ; seed++) yield someBytes(seed, 50_000);
      } finally {
        ended = true;
      }
    }
    let taken = 0;
    for await (const _ of deflate(pieces(), { level: 1 })) if (++taken === 3) break;
    await new Promise((resolve) => setImmediate(resolve));
    expect(ended).toBe(true);
  });
});
