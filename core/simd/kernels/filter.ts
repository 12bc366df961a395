// Row filters of PNG for the encoder. `step` bytes lie between a byte and the one that it is predicted from. Before a row and the
// one above it lie as many zeros; up to 15 bytes behind them are read, and behind what is written, written too.

/** The filter whose bytes, as signed numbers, have the least sum of magnitudes; the lower number among equals.
 *  [PNG3, "Filter selection"] */
export function chooseFilter(row: usize, above: usize, step: usize, bytes: i32): i32 {
  const end = row + <usize>(bytes & ~15);
  let none = i32x4.splat(0);
  let left = none;
  let over = none;
  let average = none;
  let paeth = none;
  while (row < end) {
    const x = v128.load(row);
    const a = v128.load(row - step);
    const b = v128.load(above);
    const c = v128.load(above - step);
    none = i32x4.add(none, magnitudes(x));
    left = i32x4.add(left, magnitudes(i8x16.sub(x, a)));
    over = i32x4.add(over, magnitudes(i8x16.sub(x, b)));
    average = i32x4.add(average, magnitudes(i8x16.sub(x, mean(a, b))));
    paeth = i32x4.add(paeth, magnitudes(i8x16.sub(x, nearestOf(a, b, c))));
    row += 16;
    above += 16;
  }
  const rest = bytes & 15;
  if (rest > 0) {
    const kept = i8x16.lt_s(i8x16(0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14, 15), i8x16.splat(<i8>rest));
    const x = v128.load(row);
    const a = v128.load(row - step);
    const b = v128.load(above);
    const c = v128.load(above - step);
    none = i32x4.add(none, magnitudes(v128.and(kept, x)));
    left = i32x4.add(left, magnitudes(v128.and(kept, i8x16.sub(x, a))));
    over = i32x4.add(over, magnitudes(v128.and(kept, i8x16.sub(x, b))));
    average = i32x4.add(average, magnitudes(v128.and(kept, i8x16.sub(x, mean(a, b)))));
    paeth = i32x4.add(paeth, magnitudes(v128.and(kept, i8x16.sub(x, nearestOf(a, b, c)))));
  }
  let best = 0;
  let least = total(none);
  let sum = total(left);
  if (sum < least) {
    best = 1;
    least = sum;
  }
  sum = total(over);
  if (sum < least) {
    best = 2;
    least = sum;
  }
  sum = total(average);
  if (sum < least) {
    best = 3;
    least = sum;
  }
  return total(paeth) < least ? 4 : best;
}

/** Writes the row through filter `type`, 0..4. */
export function filter(type: i32, row: usize, above: usize, step: usize, bytes: i32, out: usize): void {
  const end = row + <usize>bytes;
  if (type === 0) memory.copy(out, row, <usize>bytes);
  else if (type === 1) lessLeft(row, step, end, out);
  else if (type === 2) lessAbove(row, above, end, out);
  else if (type === 3) lessAverage(row, above, step, end, out);
  else lessPaeth(row, above, step, end, out);
}

function lessLeft(row: usize, step: usize, end: usize, out: usize): void {
  while (row < end) {
    v128.store(out, i8x16.sub(v128.load(row), v128.load(row - step)));
    row += 16;
    out += 16;
  }
}

function lessAbove(row: usize, above: usize, end: usize, out: usize): void {
  while (row < end) {
    v128.store(out, i8x16.sub(v128.load(row), v128.load(above)));
    row += 16;
    above += 16;
    out += 16;
  }
}

function lessAverage(row: usize, above: usize, step: usize, end: usize, out: usize): void {
  while (row < end) {
    v128.store(out, i8x16.sub(v128.load(row), mean(v128.load(row - step), v128.load(above))));
    row += 16;
    above += 16;
    out += 16;
  }
}

function lessPaeth(row: usize, above: usize, step: usize, end: usize, out: usize): void {
  while (row < end) {
    const prediction = nearestOf(v128.load(row - step), v128.load(above), v128.load(above - step));
    v128.store(out, i8x16.sub(v128.load(row), prediction));
    row += 16;
    above += 16;
    out += 16;
  }
}

/** Of signed bytes, each 0..128, in four sums. */
function magnitudes(bytes: v128): v128 {
  return i32x4.extadd_pairwise_i16x8_u(i16x8.extadd_pairwise_i8x16_u(i8x16.abs(bytes)));
}

function total(sums: v128): i32 {
  const low = i32x4.extract_lane(sums, 0) + i32x4.extract_lane(sums, 1);
  return low + i32x4.extract_lane(sums, 2) + i32x4.extract_lane(sums, 3);
}

/** Rounded down. */
function mean(a: v128, b: v128): v128 {
  return i8x16.sub(i8x16.avgr_u(a, b), v128.and(v128.xor(a, b), i8x16.splat(1)));
}

/** As `predicted` in unfilter.ts. */
function nearestOf(a: v128, b: v128, c: v128): v128 {
  const overAbove = i8x16.sub_sat_u(b, c);
  const overBelow = i8x16.sub_sat_u(c, b);
  const leftAbove = i8x16.sub_sat_u(a, c);
  const leftBelow = i8x16.sub_sat_u(c, a);
  const toLeft = v128.or(overAbove, overBelow);
  const toOver = v128.or(leftAbove, leftBelow);
  const up = i8x16.add_sat_u(overAbove, leftAbove);
  const down = i8x16.add_sat_u(overBelow, leftBelow);
  const toCorner = v128.or(i8x16.sub_sat_u(up, down), i8x16.sub_sat_u(down, up));
  const second = v128.bitselect(b, c, i8x16.le_u(toOver, toCorner));
  return v128.bitselect(a, second, i8x16.le_u(toLeft, i8x16.min_u(toOver, toCorner)));
}

/** 16-bit codes with the other byte first, in place. */
export function swapBytes(codes: usize, bytes: i32): void {
  const end = codes + <usize>bytes;
  while (codes < end) {
    const words = v128.load(codes);
    v128.store(codes, v128.or(i16x8.shl(words, 8), i16x8.shr_u(words, 8)));
    codes += 16;
  }
}
