import { BitWriter } from './bits.ts';
import { codesOf } from './codes.ts';
import { codeLengths } from './lengths.ts';
import { END, LONGEST_RUN, RUN, type ShortestRun, TOKENS, type TokenWriter } from './tokens.ts';

/** What a block is written behind. */
export interface Before {
  /** Bits that stand in `out` already. */
  readonly bit: number;
  readonly zeros: ShortestRun;
}

/** Writes the first `bytes` bytes of the writer's block, in the least room that codes of its own, the fixed ones or none make. Answers
 *  what the next block is written behind. [RFC1951, 3.2] */
export function writeBlock(
  writer: TokenWriter,
  bytes: number,
  { bit, zeros }: Before,
  place: 'last' | 'inner',
): Before {
  const counts = writer.count(bytes, zeros);
  const own = bytes === 0 ? null : ownCoding(symbolCounts(counts));
  const ownBits = own === null ? Number.POSITIVE_INFINITY : own.head.bits + bodyBits(counts, own);
  const fixedBits = bodyBits(counts, FIXED);
  const last = place === 'last' ? 1 : 0;
  // Zeros of a short code cost less than a run of three would. The next block is taken to be like this one.
  const next = own !== null && own.lengths[0] > 0 && own.lengths[0] <= SHORT_CODE ? 5 : 3;
  if (Math.min(ownBits, fixedBits) > STORED_HEAD_BITS + 8 * bytes) {
    return { bit: store(writer, bytes, bit, last), zeros: next };
  }
  const bits = new BitWriter(writer.out, bit);
  if (own === null || fixedBits <= ownBits) {
    bits.put(last | (1 << 1), 3);
    return { bit: writer.write(bytes, zeros, tokenCodes(FIXED), bits.end()), zeros: next };
  }
  bits.put(last | (2 << 1), 3);
  own.head.write(bits);
  return { bit: writer.write(bytes, zeros, tokenCodes(own), bits.end()), zeros: next };
}

/** Bits; measured, with ShortestRun. */
const SHORT_CODE = 2;

/** Two lengths, behind up to 7 bits that fill a byte. [RFC1951, 3.2.4] */
const STORED_HEAD_BITS = 32 + 7;

function store(writer: TokenWriter, bytes: number, bit: number, last: number): number {
  const bits = new BitWriter(writer.out, bit);
  bits.put(last, 3);
  bits.align();
  bits.put(bytes, 16);
  bits.put(bytes ^ 0xffff, 16);
  const at = bits.align();
  writer.out.set(writer.block.subarray(0, bytes), at);
  return 8 * (at + bytes);
}

/** How symbols become bits. Runs reach one byte back, which is the first of all distances; its code is zeros. */
interface Coding {
  /** Bits of the code of each byte, of the end, and of each group of runs. */
  readonly lengths: Uint8Array;
  readonly distanceBits: number;
}

/** [RFC1951, 3.2.6] */
const FIXED: Coding = {
  lengths: Uint8Array.from({ length: 288 }, (_, symbol) =>
    symbol < 144 ? 8 : symbol < 256 ? 9 : symbol < 280 ? 7 : 8,
  ),
  distanceBits: 5,
};

/** Of the groups 257..285 of runs: how long a run is at least, and how many bits tell how much longer. [RFC1951, 3.2.5] */
const FIRST_GROUP = 257;
const FROM = new Uint16Array(29);
const EXTRA = new Uint8Array(29);
for (let group = 0; group < FROM.length; group++) {
  EXTRA[group] = group < 8 ? 0 : (group >> 2) - 1;
  FROM[group] = group < 8 ? 3 + group : 3 + ((4 + (group & 3)) << EXTRA[group]);
}
// The longest run has a group of its own, though the one before could write it too.
FROM[28] = LONGEST_RUN;
EXTRA[28] = 0;

/** The group of each token that is a run. */
const GROUPS = new Uint8Array(TOKENS);
for (let token = RUN + 3, group = 0; token < TOKENS; token++) {
  if (token - RUN === FROM[group + 1]) group++;
  GROUPS[token] = group;
}

function symbolCounts(counts: Uint32Array): Uint32Array {
  const symbols = new Uint32Array(FIRST_GROUP + FROM.length);
  symbols.set(counts.subarray(0, END + 1));
  for (let token = END + 1; token < TOKENS; token++) symbols[FIRST_GROUP + GROUPS[token]] += counts[token];
  return symbols;
}

/** Bits of all tokens, the end among them. */
function bodyBits(counts: Uint32Array, { lengths, distanceBits }: Coding): number {
  let bits = 0;
  for (let token = 0; token <= END; token++) bits += counts[token] * lengths[token];
  for (let token = END + 1; token < TOKENS; token++) {
    const group = GROUPS[token];
    bits += counts[token] * (lengths[FIRST_GROUP + group] + EXTRA[group] + distanceBits);
  }
  return bits;
}

function tokenCodes({ lengths, distanceBits }: Coding): Uint32Array {
  const codes = codesOf(lengths);
  const table = new Uint32Array(TOKENS);
  for (let token = 0; token <= END; token++) table[token] = codes[token] | (lengths[token] << 24);
  for (let token = END + 1; token < TOKENS; token++) {
    const group = GROUPS[token];
    const length = lengths[FIRST_GROUP + group];
    const longer = token - RUN - FROM[group];
    table[token] = codes[FIRST_GROUP + group] | (longer << length) | ((length + EXTRA[group] + distanceBits) << 24);
  }
  return table;
}

interface OwnCoding extends Coding {
  readonly head: { readonly bits: number; write(bits: BitWriter): void };
}

/** The format allows 15. With 14, four codes and the seven bits that wait fit one number of 64 bits. */
const LONGEST_CODE = 14;

/** [RFC1951, 3.2.7] */
const LONGEST_LENGTH_CODE = 7;
const LENGTH_ORDER = [16, 17, 18, 0, 8, 7, 9, 6, 10, 5, 11, 4, 12, 3, 13, 2, 14, 1, 15];

/** Codes made for these counts, and how the block tells them. Of distances two are told, of which one is used: a code of one bit
 *  alone is allowed, and some readers know no other than complete ones. */
function ownCoding(counts: Uint32Array): OwnCoding {
  const lengths = codeLengths(counts, LONGEST_CODE);
  let told = lengths.length;
  while (lengths[told - 1] === 0) told--;
  const all = new Uint8Array(told + 2).fill(1);
  all.set(lengths.subarray(0, told));
  const steps = stepsOf(all);
  const stepCounts = new Uint32Array(LENGTH_ORDER.length);
  for (let at = 0; at < steps.length; at++) stepCounts[steps[at] & 31]++;
  const stepLengths = codeLengths(stepCounts, LONGEST_LENGTH_CODE);
  let ordered = LENGTH_ORDER.length;
  while (stepLengths[LENGTH_ORDER[ordered - 1]] === 0) ordered--;
  let stepBits = 0;
  for (let symbol = 0; symbol < stepCounts.length; symbol++) {
    stepBits += stepCounts[symbol] * (stepLengths[symbol] + extraOf(symbol));
  }
  return {
    lengths,
    distanceBits: 1,
    head: {
      bits: 5 + 5 + 4 + 3 * ordered + stepBits,
      write(bits) {
        const stepCodes = codesOf(stepLengths);
        bits.put(told - 257, 5);
        bits.put(1, 5);
        bits.put(ordered - 4, 4);
        for (let at = 0; at < ordered; at++) bits.put(stepLengths[LENGTH_ORDER[at]], 3);
        for (let at = 0; at < steps.length; at++) {
          const symbol = steps[at] & 31;
          bits.put(stepCodes[symbol], stepLengths[symbol]);
          bits.put(steps[at] >> 5, extraOf(symbol));
        }
      },
    },
  };
}

/** Lengths as they are told: one by one, repetitions of the last (16), zeros (17, 18). A step is its symbol in the low 5 bits, and
 *  above them how many more than the fewest. [RFC1951, 3.2.7] */
function stepsOf(lengths: Uint8Array): Uint16Array {
  const steps = new Uint16Array(lengths.length);
  let count = 0;
  for (let at = 0; at < lengths.length; ) {
    const length = lengths[at];
    let end = at + 1;
    while (end < lengths.length && lengths[end] === length) end++;
    if (length !== 0) {
      steps[count++] = length;
      at++;
    }
    while (end - at >= 3) {
      const symbol = length !== 0 ? 16 : end - at <= 10 ? 17 : 18;
      const fewest = symbol === 18 ? 11 : 3;
      const more = Math.min(end - at - fewest, (1 << extraOf(symbol)) - 1);
      steps[count++] = symbol | (more << 5);
      at += fewest + more;
    }
    for (; at < end; at++) steps[count++] = length;
  }
  return steps.subarray(0, count);
}

/** Bits that tell how many more. */
function extraOf(symbol: number): number {
  return symbol < 16 ? 0 : symbol === 16 ? 2 : symbol === 17 ? 3 : 7;
}
