// Tokens of deflate blocks: bytes, and runs of the byte before, as core/codec/deflate/tokens.ts says. The byte before a block is
// written, and up to 15 bytes behind it are read.

const SHORTEST_RUN: i32 = 3;
const LONGEST_RUN: i32 = 258;

/** Byte offsets in a table of numbers: of the end of a block, and of what a run's length is added to. */
const END: usize = 256 << 2;
const RUN: usize = 254 << 2;

/** Bytes of one table of counts, and of those of bytes alone. */
const TABLE: i32 = 513 << 2;
const BYTES: i32 = 256 << 2;

/** How often each token stands in a block, where runs of zeros have `zeros` bytes at least, 3 or 5. Behind the 513 counts is room
 *  for three times 256: equal bytes that follow each other would wait for one counter. */
export function countTokens(block: usize, bytes: i32, zeros: i32, counts: usize): void {
  const second = counts + TABLE;
  const third = second + BYTES;
  const fourth = third + BYTES;
  memory.fill(counts, 0, <usize>(TABLE + 3 * BYTES));
  const end = block + <usize>bytes;
  let at = block;
  begin(block);
  while (at + 32 <= end) {
    const same = sameBits(at);
    const runs = runStarts(at, same, zeros);
    if (runs === 0) {
      const low = load<u64>(at);
      const high = load<u64>(at, 8);
      count(counts, low);
      count(second, low >> 8);
      count(third, low >> 16);
      count(fourth, low >> 24);
      count(counts, low >> 32);
      count(second, low >> 40);
      count(third, low >> 48);
      count(fourth, low >> 56);
      count(counts, high);
      count(second, high >> 8);
      count(third, high >> 16);
      count(fourth, high >> 24);
      count(counts, high >> 32);
      count(second, high >> 40);
      count(third, high >> 48);
      count(fourth, high >> 56);
      at += 16;
      continue;
    }
    const skipped = <u32>ctz(runs);
    const run = at + <usize>skipped;
    for (; at < run; at++) count(counts, <u64>load<u8>(at));
    at += countRun(counts, runWithin(run, end, same >> skipped, 32 - skipped));
  }
  while (at < end) {
    const length = runLength(at, end);
    if (length >= shortestRun(at, zeros)) at += countRun(counts, length);
    else count(counts, <u64>load<u8>(at++));
  }
  for (let byte: usize = 0; byte < <usize>BYTES; byte += 16) {
    const pair = i32x4.add(v128.load(counts + byte), v128.load(second + byte));
    v128.store(counts + byte, i32x4.add(pair, i32x4.add(v128.load(third + byte), v128.load(fourth + byte))));
  }
  store<u32>(counts + END, 1);
}

function count(table: usize, byte: u64): void {
  const at = table + <usize>((<u32>byte & 0xff) << 2);
  store<u32>(at, load<u32>(at) + 1);
}

function countRun(counts: usize, length: i32): usize {
  const counter = counts + RUN + ((<usize>length) << 2);
  store<u32>(counter, load<u32>(counter) + 1);
  return <usize>length;
}

/** Writes a block's tokens and its end, `codes` giving the bits of each in the low 24 of a number and their count in the high 8, behind
 *  the first `bit` bits of `out`. Those of a byte are 14 at most. Answers where they end, in bits from `out`. */
export function writeTokens(block: usize, bytes: i32, zeros: i32, codes: usize, out: usize, bit: i32): i32 {
  let to = out + <usize>(bit >> 3);
  let filled = <u64>(bit & 7);
  let held = <u64>load<u8>(to) & (((<u64>1) << filled) - 1);
  const end = block + <usize>bytes;
  let at = block;
  begin(block);
  while (at + 32 <= end) {
    const same = sameBits(at);
    const runs = runStarts(at, same, zeros);
    if (runs === 0) {
      for (const stop = at + 16; at < stop; at += 4) {
        // Seven bits that wait and four codes of 14 fit in 64.
        const four = load<u32>(at);
        const a = code(codes, four);
        const b = code(codes, four >> 8);
        const c = code(codes, four >> 16);
        const d = code(codes, four >> 24);
        held |= bitsOf(a) << filled;
        filled += countOf(a);
        held |= bitsOf(b) << filled;
        filled += countOf(b);
        held |= bitsOf(c) << filled;
        filled += countOf(c);
        held |= bitsOf(d) << filled;
        filled += countOf(d);
        store<u64>(to, held);
        const whole = filled >> 3;
        to += <usize>whole;
        held >>= whole << 3;
        filled &= 7;
      }
      continue;
    }
    const skipped = <u32>ctz(runs);
    const run = at + <usize>skipped;
    for (; at < run; at++) {
      const byte = code(codes, <u32>load<u8>(at));
      held |= bitsOf(byte) << filled;
      filled += countOf(byte);
      store<u64>(to, held);
      to += <usize>(filled >> 3);
      held >>= filled & ~7;
      filled &= 7;
    }
    const length = <usize>runWithin(run, end, same >> skipped, 32 - skipped);
    const token = load<u32>(codes + RUN + (length << 2));
    held |= bitsOf(token) << filled;
    filled += countOf(token);
    store<u64>(to, held);
    to += <usize>(filled >> 3);
    held >>= filled & ~7;
    filled &= 7;
    at += length;
  }
  while (at < end) {
    const found = runLength(at, end);
    const length: usize = found < shortestRun(at, zeros) ? 0 : <usize>found;
    const token = length === 0 ? code(codes, <u32>load<u8>(at)) : load<u32>(codes + RUN + (length << 2));
    held |= bitsOf(token) << filled;
    filled += countOf(token);
    store<u64>(to, held);
    to += <usize>(filled >> 3);
    held >>= filled & ~7;
    filled &= 7;
    at += length === 0 ? 1 : length;
  }
  const token = load<u32>(codes + END);
  held |= bitsOf(token) << filled;
  filled += countOf(token);
  store<u64>(to, held);
  return ((<i32>(to - out)) << 3) + <i32>filled;
}

function code(codes: usize, byte: u32): u32 {
  return load<u32>(codes + <usize>((byte & 0xff) << 2));
}

function bitsOf(code: u32): u64 {
  return <u64>(code & 0xffffff);
}

function countOf(code: u32): u64 {
  return <u64>(code >> 24);
}

/** A block knows nothing of the one before: its first byte begins no run. */
function begin(block: usize): void {
  store<u8>(block - 1, ~load<u8>(block));
}

/** One bit for each of the 32 bytes from `at` on, set where it repeats the one before. */
function sameBits(at: usize): u32 {
  const low = i8x16.bitmask(i8x16.eq(v128.load(at), v128.load(at - 1)));
  const high = i8x16.bitmask(i8x16.eq(v128.load(at, 16), v128.load(at, 15)));
  return low | (high << 16);
}

/** One bit for each of the 16 bytes from `at` on, set where a run starts. */
function runStarts(at: usize, same: u32, zeros: i32): u32 {
  const twos = same & (same >> 1);
  const threes = twos & (same >> 2);
  if (zeros === SHORTEST_RUN) return threes & 0xffff;
  const fives = twos & (twos >> 2) & (same >> 4);
  return (fives | (threes & ~i8x16.bitmask(i8x16.eq(v128.load(at), i8x16.splat(0))))) & 0xffff;
}

function shortestRun(at: usize, zeros: i32): i32 {
  return load<u8>(at) === 0 ? zeros : SHORTEST_RUN;
}

/** The same as `runLength`, of which the first `known` bytes are told by the bits of `same`. */
function runWithin(at: usize, end: usize, same: u32, known: u32): i32 {
  const length = <u32>ctz(~same);
  return length < known ? <i32>length : runLength(at, end);
}

/** Bytes from `at` on that repeat the one before, LONGEST_RUN at most. */
function runLength(at: usize, end: usize): i32 {
  const byte = load<u8>(at - 1);
  const stop = min(end, at + <usize>LONGEST_RUN);
  let to = at;
  const all = i8x16.splat(byte);
  while (to + 16 <= stop) {
    const same = i8x16.bitmask(i8x16.eq(v128.load(to), all));
    if (same !== 0xffff) return <i32>(to - at) + ctz(~same);
    to += 16;
  }
  while (to < stop && load<u8>(to) === byte) to++;
  return <i32>(to - at);
}

/** Adler-32 of bytes, of which `sum` is that of what came before. 5552 bytes are the most whose sums stay below 2^32. [RFC1950, 8.2] */
export function adler(at: usize, bytes: i32, sum: u32): u32 {
  const falling = i16x8(16, 15, 14, 13, 12, 11, 10, 9);
  const fallen = i16x8(8, 7, 6, 5, 4, 3, 2, 1);
  let low = sum & 0xffff;
  let high = sum >>> 16;
  const end = at + <usize>bytes;
  while (at + 16 <= end) {
    const count = min<usize>(end - at, 5552) & ~15;
    const stop = at + count;
    let lows = i32x4.splat(0);
    let highs = lows;
    let before = lows;
    high += low * <u32>count;
    for (; at < stop; at += 16) {
      const x = v128.load(at);
      before = i32x4.add(before, lows);
      lows = i32x4.add(lows, i32x4.extadd_pairwise_i16x8_u(i16x8.extadd_pairwise_i8x16_u(x)));
      highs = i32x4.add(highs, i32x4.dot_i16x8_s(i16x8.extend_low_i8x16_u(x), falling));
      highs = i32x4.add(highs, i32x4.dot_i16x8_s(i16x8.extend_high_i8x16_u(x), fallen));
    }
    low = (low + sumOf(lows)) % 65521;
    high = (high + (sumOf(before) << 4) + sumOf(highs)) % 65521;
  }
  for (; at < end; at++) {
    low += load<u8>(at);
    high += low;
  }
  return (high % 65521) * 65536 + (low % 65521);
}

function sumOf(lanes: v128): u32 {
  const low = i32x4.extract_lane(lanes, 0) + i32x4.extract_lane(lanes, 1);
  return <u32>(low + i32x4.extract_lane(lanes, 2) + i32x4.extract_lane(lanes, 3));
}
