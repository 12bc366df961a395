import { deflateSync } from 'node:zlib';
import { describe, expect, test } from 'vitest';
import { InflateError } from '../../core/port.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { concat } from '../fixtures/rawpng.ts';

/** Small: read at once. Large: read in steps. Both have to behave alike. */
const SIZES = [1, 1000, 0x3ffff, 0x40000, 700_000];

function noise(length: number): Uint8Array {
  let state = 1;
  return new Uint8Array(length).map(() => {
    state = (Math.imul(state, 1103515245) + 12345) >>> 0;
    return state >>> 29;
  });
}

function cut(bytes: Uint8Array, size: number): Uint8Array[] {
  const pieces: Uint8Array[] = [];
  for (let start = 0; start < bytes.length; start += size)
    pieces.push(bytes.subarray(start, start + size), new Uint8Array(0));
  return pieces;
}

async function read(pieces: Iterable<Uint8Array>, limit: number): Promise<Uint8Array> {
  const out: Uint8Array[] = [];
  for await (const piece of inflate(pieces, limit)) out.push(piece);
  return concat(out);
}

async function faultOf(pieces: Iterable<Uint8Array>, limit: number): Promise<string> {
  try {
    await read(pieces, limit);
  } catch (error) {
    if (error instanceof InflateError) return error.fault;
    throw error;
  }
  return 'none';
}

describe.each(SIZES)('%i bytes', (size) => {
  const plain = noise(size);
  const packed = deflateSync(plain);

  test('come back whole, in whatever pieces they are given', async () => {
    for (const piece of [1000, 8192, packed.length]) {
      expect(Buffer.compare(await read(cut(packed, piece), size), plain)).toBe(0);
    }
  });

  test('are one too many where one less is allowed', async () => {
    expect(Buffer.compare(await read([packed], size - 1), plain)).toBe(0);
  });

  test('are cut one past the limit', async () => {
    const limit = Math.floor(size / 3);
    expect(Buffer.compare(await read([packed], limit), plain.subarray(0, limit + 1))).toBe(0);
  });

  const half = packed.subarray(0, Math.floor(packed.length / 2));
  test.each<readonly [name: string, fault: string, pieces: readonly Uint8Array[]]>([
    ['nothing at all', 'truncated', []],
    ['an end missing', 'truncated', [packed.subarray(0, -1)]],
    ['half of it missing', 'truncated', cut(half, 100)],
    ['a check sum off', 'corrupt', [packed.subarray(0, -1), Uint8Array.of(packed[packed.length - 1] ^ 1)]],
    ['no zlib header', 'corrupt', [Uint8Array.of(1, 2, 3, 4), plain]],
    ['a dictionary wanted', 'corrupt', [deflateSync(plain, { dictionary: Buffer.from('abc') })]],
    ['a byte behind', 'surplus', [packed, Uint8Array.of(0)]],
    ['a byte behind in the same piece', 'surplus', [concat([packed, Uint8Array.of(0)])]],
    ['much behind', 'surplus', [packed, ...cut(noise(300_000), 1000)]],
  ])('with %s are %s', async (_name, fault, pieces) => {
    expect(await faultOf(pieces, size)).toBe(fault);
  });
});

test('empty pieces behind the end are nothing', async () => {
  expect(await faultOf([deflateSync(noise(10)), new Uint8Array(0), new Uint8Array(0)], 10)).toBe('none');
});

test('64 MiB of zeros cost no more than the limit and a few buffers', async () => {
  const bomb = deflateSync(new Uint8Array(64 << 20));
  for (const limit of [100, 300_000]) {
    const before = process.memoryUsage().arrayBuffers;
    expect(await read([bomb], limit)).toHaveLength(limit + 1);
    // zlib is a few buffers ahead of the consumer, and this test holds what was read twice: 8 MiB are plenty for both, and
    // an eighth of what the bomb holds.
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(8 << 20);
  }
});

test('a consumer that leaves early ends the work', async () => {
  let asked = 0;
  function* endless(): Generator<Uint8Array> {
    // Stored blocks of one byte each, for ever: a header, then final bit 0, length 1.
    yield Uint8Array.of(0x78, 0x01);
    while (asked < 1_000_000) {
      asked++;
      yield Uint8Array.of(0, 1, 0, 0xfe, 0xff, 7);
    }
  }
  for await (const piece of inflate(endless(), 10_000_000)) {
    expect(piece[0]).toBe(7);
    break;
  }
  const then = asked;
  await new Promise((resolve) => setTimeout(resolve, 20));
  expect(asked).toBe(then);
});

test('an error of the giver reaches the taker', async () => {
  function* broken(): Generator<Uint8Array> {
    yield Uint8Array.of(0x78, 0x9c);
    throw new RangeError('broken');
  }
  await expect(read(broken(), 1_000_000)).rejects.toThrow(RangeError);
});
