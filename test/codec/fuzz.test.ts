import { expect, test } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { plainFilters, type RowFilters } from '../../core/codec/png/filters.ts';
import { openPng } from '../../core/codec/png/open.ts';
import type { Inflate } from '../../core/port.ts';
import { Refusal } from '../../core/problem.ts';
import { inflate } from '../../extension/node/inflate.ts';
import { simdFilters } from '../fixtures/simd.ts';
import { fuzzSeeds, type Mutation, mutant } from './fuzz.ts';

/** More of them by hand: SIZEPROOF_FUZZ=1000000. */
const COUNT = Number(process.env.SIZEPROOF_FUZZ ?? 100_000);

const seeds = fuzzSeeds();
const kernels = simdFilters();

test(
  `${COUNT} damaged files are read to what their header promises, or refused, alike by plain filters and by the kernels`,
  async () => {
    const ends = new Map<Mutation, { read: number; refused: Set<string> }>();
    for (let number = 1; number <= COUNT; number++) {
      const { kind, file } = mutant(seeds, number);
      const plain = await endOf(file, plainFilters, number);
      const end = ends.get(kind) ?? { read: 0, refused: new Set() };
      ends.set(kind, end);
      if (plain.code === null) end.read++;
      else end.refused.add(plain.code);
      // A refusal before any data is the same for both; another while data comes is looked at every fourth time.
      if (plain.inflated === 0 || (plain.code !== null && number % 4 !== 0)) continue;
      const other = await endOf(framed(file), kernels, number);
      if (other.text !== plain.text) expect.fail(`Mutant ${number} (${kind}): ${other.text} for ${plain.text}`);
    }
    expect(ends.size).toBe(6);
    if (COUNT < 100_000) return;
    // The damage goes everywhere: each kind is now and then read, and refused in several words.
    for (const [kind, { read, refused }] of ends) {
      expect(read, kind).toBeGreaterThan(10);
      expect(refused.size, kind).toBeGreaterThan(2);
    }
  },
  COUNT * 6,
);

interface End {
  /** Of the refusal; null where the file was read. */
  readonly code: string | null;
  /** All that can be told of the end. */
  readonly text: string;
  readonly inflated: number;
}

async function endOf(file: Uint8Array, filters: RowFilters, number: number): Promise<End> {
  let inflated = 0;
  const counted: Inflate = async function* (pieces, limit) {
    if (limit > promisedBytes(file)) expect.fail(`Mutant ${number}: ${limit} bytes are asked for`);
    for await (const piece of inflate(pieces, limit)) {
      inflated += piece.length;
      yield piece;
    }
  };
  try {
    const image = await decodeImage(openPng(file, counted, filters));
    const { width, height } = image.extent;
    const codes = image.kind === 'indexed' ? image.indices : image.codes;
    // A texel takes a bit at least, and a byte of the file can become 1032 of them.
    if (width * height > file.length * 1032 * 8)
      expect.fail(`Mutant ${number}: ${width} x ${height} of ${file.length}`);
    return { code: null, text: `${width}x${height} ${Buffer.from(codes.buffer).toString('hex')}`, inflated };
  } catch (error) {
    if (!(error instanceof Refusal)) throw new Error(`Mutant ${number} is not refused in words.`, { cause: error });
    if (inflated > 0 && inflated > promisedBytes(file) + 1)
      expect.fail(`Mutant ${number}: ${inflated} bytes were inflated`);
    const { code, values } = error.problem;
    return { code, text: `${code} ${JSON.stringify(values)}`, inflated };
  }
}

/** Bytes of the image data, from the header alone, as the standard counts them; interlaced rows are each begun anew. */
function promisedBytes(file: Uint8Array): number {
  const view = new DataView(file.buffer, file.byteOffset, file.length);
  const [width, height] = [view.getUint32(16), view.getUint32(20)];
  const samples = [1, 0, 3, 1, 2, 0, 4][file[25]] ?? 0;
  const whole = height * (1 + Math.ceil((width * samples * file[24]) / 8));
  // Seven passes have twice as many rows at most, each of which has its filter's byte and up to seven bits of padding.
  return file[28] === 0 ? whole : whole + 4 * height + 16;
}

/** The file within a larger one that would go on: who reads beyond its end or before its start finds something. */
function framed(file: Uint8Array): Uint8Array {
  const larger = new Uint8Array(file.length + 61).fill(0xa5);
  larger.set(file, 29);
  return larger.subarray(29, 29 + file.length);
}
