import { Adler } from '../adler.ts';
import { BitWriter } from './bits.ts';

/** Finds and writes the tokens of blocks: bytes, and runs of the byte before. Every one makes the same bytes; they differ in
 *  time. */
export interface Tokens {
  /** Room for one block after another. */
  open(): TokenWriter;
}

export interface TokenWriter {
  /** The block that is to be filled in, BLOCK_BYTES. */
  readonly block: Uint8Array;
  /** What a block becomes, at most OUT_BYTES. */
  readonly out: Uint8Array;
  /** How often each token stands in the first `bytes` bytes of the block, TOKENS numbers; valid until the next call. */
  count(bytes: number, zeros: ShortestRun): Uint32Array;
  /** Writes the tokens of those bytes, and the end, behind the first `bit` bits of `out`, and answers where they end, in bits.
   *  Each token has its bits in the low 24 of a number, the first lowest, and their count in the high 8. */
  write(bytes: number, zeros: ShortestRun, codes: Uint32Array, bit: number): number;
  /** Adler-32 of what went by, of which `sum` is that of what came before the block; 1 at first. [RFC1950, 8.2] */
  sum(bytes: number, sum: number): number;
  /** Nothing is written any more. */
  close(): void;
}

/** A token is a byte, the end of the block, or a run of 3..LONGEST_RUN, which is RUN and its length. */
export const END = 256;
export const RUN = 254;
export const LONGEST_RUN = 258;
export const TOKENS = RUN + LONGEST_RUN + 1;

/** Bytes of the shortest run that is written as one; of zeros, of which row filters leave most, 5 where their code is short: with 3, as the
 *  format allows, painted art and masks come out 0.2-1.5 % larger, and with 5 sprites half a percent (measured). */
export type ShortestRun = 3 | 5;
const SHORTEST_RUN: ShortestRun = 3;

/** What is coded by codes of its own; 64 KiB gain up to 0.8 % over 16 KiB, and more gain next to nothing (measured). No more than a stored
 *  block holds, in whole vectors. [RFC1951, 3.2.4] */
export const BLOCK_BYTES = 65520;

/** A block is stored as it is where its codes would need more; the last number that is written may lie a little behind. */
export const OUT_BYTES = BLOCK_BYTES + 64;

/** The readable reference, and what runs where WebAssembly does not. */
export const plainTokens: Tokens = {
  open() {
    const block = new Uint8Array(BLOCK_BYTES);
    const out = new Uint8Array(OUT_BYTES);
    const counts = new Uint32Array(TOKENS);
    return {
      block,
      out,
      count(bytes, zeros) {
        counts.fill(0);
        for (let at = 0; at < bytes; ) {
          const run = runAt(block, at, bytes, zeros);
          counts[run === 0 ? block[at] : RUN + run]++;
          at += run || 1;
        }
        counts[END] = 1;
        return counts;
      },
      write(bytes, zeros, codes, bit) {
        const writer = new BitWriter(out, bit);
        for (let at = 0; at < bytes; ) {
          const run = runAt(block, at, bytes, zeros);
          const code = codes[run === 0 ? block[at] : RUN + run];
          writer.put(code & 0xffffff, code >>> 24);
          at += run || 1;
        }
        writer.put(codes[END] & 0xffffff, codes[END] >>> 24);
        return writer.end();
      },
      sum(bytes, sum) {
        const adler = new Adler(sum);
        adler.add(block.subarray(0, bytes));
        return adler.sum;
      },
      close() {},
    };
  },
};

/** Bytes from `at` on that repeat the one before; 0 where they are fewer than a run has. A block knows nothing of the one before. */
function runAt(block: Uint8Array, at: number, bytes: number, zeros: ShortestRun): number {
  if (at === 0) return 0;
  const byte = block[at - 1];
  const end = Math.min(bytes, at + LONGEST_RUN);
  let to = at;
  while (to < end && block[to] === byte) to++;
  return to - at < (byte === 0 ? zeros : SHORTEST_RUN) ? 0 : to - at;
}
