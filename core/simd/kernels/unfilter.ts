// Row filters of PNG undone, in place. `step` bytes, 1, 2, 3, 4, 6 or 8, lie between a byte and the one that it is predicted
// from; what lies left of a row is zero and is not read. Up to 16 bytes behind a row are read and written.

/** Undoes a filter of 1..4; others leave the row as it is. */
export function unfilter(type: i32, row: usize, above: usize, step: i32, bytes: i32): void {
  const end = row + <usize>bytes;
  if (type === 1) addLeft(row, step, end);
  else if (type === 2) addAbove(row, above, end);
  else if (type === 3) addAverage(row, above, step, end);
  else if (type === 4) addPaeth(row, above, step, end);
}

function addAbove(row: usize, above: usize, end: usize): void {
  while (row < end) {
    v128.store(row, i8x16.add(v128.load(row), v128.load(above)));
    row += 16;
    above += 16;
  }
}

// Sums of all texels before: doubled in reach until a vector is full, then the last texel of the vector before is added to
// each. Steps of 3 and 6 fill twelve bytes; the other four are written by the next vector.

function addLeft(row: usize, step: i32, end: usize): void {
  if (step === 4) addLeftOfFour(row, end);
  else if (step === 3) addLeftOfThree(row, end);
  else if (step === 8) addLeftOfEight(row, end);
  else if (step === 6) addLeftOfSix(row, end);
  else if (step === 2) addLeftOfTwo(row, end);
  else addLeftOfOne(row, end);
}

function addLeftOfOne(row: usize, end: usize): void {
  const none = i8x16.splat(0);
  let before = none;
  while (row < end) {
    let sum = v128.load(row);
    sum = i8x16.add(sum, v128.shuffle<u8>(none, sum, 0, 16, 17, 18, 19, 20, 21, 22, 23, 24, 25, 26, 27, 28, 29, 30));
    sum = i8x16.add(sum, v128.shuffle<u8>(none, sum, 0, 0, 16, 17, 18, 19, 20, 21, 22, 23, 24, 25, 26, 27, 28, 29));
    sum = i8x16.add(sum, v128.shuffle<u32>(none, sum, 0, 4, 5, 6));
    sum = i8x16.add(i8x16.add(sum, v128.shuffle<u64>(none, sum, 0, 2)), before);
    before = i8x16.splat(i8x16.extract_lane_s(sum, 15));
    v128.store(row, sum);
    row += 16;
  }
}

function addLeftOfTwo(row: usize, end: usize): void {
  const none = i8x16.splat(0);
  let before = none;
  while (row < end) {
    let sum = v128.load(row);
    sum = i8x16.add(sum, v128.shuffle<u16>(none, sum, 0, 8, 9, 10, 11, 12, 13, 14));
    sum = i8x16.add(sum, v128.shuffle<u32>(none, sum, 0, 4, 5, 6));
    sum = i8x16.add(i8x16.add(sum, v128.shuffle<u64>(none, sum, 0, 2)), before);
    before = i16x8.splat(i16x8.extract_lane_s(sum, 7));
    v128.store(row, sum);
    row += 16;
  }
}

function addLeftOfThree(row: usize, end: usize): void {
  const none = i8x16.splat(0);
  let before = none;
  while (row < end) {
    let sum = v128.load(row);
    sum = i8x16.add(sum, v128.shuffle<u8>(none, sum, 0, 0, 0, 16, 17, 18, 19, 20, 21, 22, 23, 24, 25, 26, 27, 28));
    sum = i8x16.add(sum, v128.shuffle<u16>(none, sum, 0, 0, 0, 8, 9, 10, 11, 12));
    sum = i8x16.add(sum, before);
    before = v128.shuffle<u8>(sum, sum, 9, 10, 11, 9, 10, 11, 9, 10, 11, 9, 10, 11, 9, 10, 11, 9);
    storeTwelve(row, sum);
    row += 12;
  }
}

function addLeftOfFour(row: usize, end: usize): void {
  const none = i8x16.splat(0);
  let before = none;
  while (row < end) {
    let sum = v128.load(row);
    sum = i8x16.add(sum, v128.shuffle<u32>(none, sum, 0, 4, 5, 6));
    sum = i8x16.add(i8x16.add(sum, v128.shuffle<u64>(none, sum, 0, 2)), before);
    before = v128.shuffle<u32>(sum, sum, 3, 3, 3, 3);
    v128.store(row, sum);
    row += 16;
  }
}

function addLeftOfSix(row: usize, end: usize): void {
  const none = i8x16.splat(0);
  let before = none;
  while (row < end) {
    let sum = v128.load(row);
    sum = i8x16.add(i8x16.add(sum, v128.shuffle<u16>(none, sum, 0, 0, 0, 8, 9, 10, 11, 12)), before);
    before = v128.shuffle<u16>(sum, sum, 3, 4, 5, 3, 4, 5, 3, 4);
    storeTwelve(row, sum);
    row += 12;
  }
}

function addLeftOfEight(row: usize, end: usize): void {
  const none = i8x16.splat(0);
  let before = none;
  while (row < end) {
    let sum = v128.load(row);
    sum = i8x16.add(i8x16.add(sum, v128.shuffle<u64>(none, sum, 0, 2)), before);
    before = v128.shuffle<u64>(sum, sum, 1, 1);
    v128.store(row, sum);
    row += 16;
  }
}

function storeTwelve(at: usize, bytes: v128): void {
  v128.store64_lane(at, bytes, 0);
  v128.store32_lane(at + 8, bytes, 2);
}

// What is rounded or chosen depends on the texel before, so texels go one by one: eight bytes are read, those of the next texel
// for nothing, and `step` of them written.

function addAverage(row: usize, above: usize, step: i32, end: usize): void {
  const one = i8x16.splat(1);
  let left = i8x16.splat(0);
  while (row < end) {
    const over = v128.load64_zero(above);
    // The instruction rounds up, the filter down: less one where the sum is odd.
    const mean = i8x16.sub(i8x16.avgr_u(left, over), v128.and(v128.xor(left, over), one));
    left = i8x16.add(v128.load64_zero(row), mean);
    storeTexel(row, left, step);
    row += <usize>step;
    above += <usize>step;
  }
}

function addPaeth(row: usize, above: usize, step: i32, end: usize): void {
  let left = i8x16.splat(0);
  let corner = left;
  while (row < end) {
    const over = v128.load64_zero(above);
    left = i8x16.add(v128.load64_zero(row), predicted(left, over, corner));
    corner = over;
    storeTexel(row, left, step);
    row += <usize>step;
    above += <usize>step;
  }
}

/** Of left, over and corner, the one nearest to left + over - corner; the earlier one among equals. In bytes: a difference is held
 *  as what one number is above the other and what it is below. */
function predicted(left: v128, over: v128, corner: v128): v128 {
  const overAbove = i8x16.sub_sat_u(over, corner);
  const overBelow = i8x16.sub_sat_u(corner, over);
  const leftAbove = i8x16.sub_sat_u(left, corner);
  const leftBelow = i8x16.sub_sat_u(corner, left);
  const toLeft = v128.or(overAbove, overBelow);
  const toOver = v128.or(leftAbove, leftBelow);
  // Where both differences have one sign the sum may pass 255; it is kept there, and no less than either.
  const up = i8x16.add_sat_u(overAbove, leftAbove);
  const down = i8x16.add_sat_u(overBelow, leftBelow);
  const toCorner = v128.or(i8x16.sub_sat_u(up, down), i8x16.sub_sat_u(down, up));
  const second = v128.bitselect(over, corner, i8x16.le_u(toOver, toCorner));
  return v128.bitselect(left, second, i8x16.le_u(toLeft, i8x16.min_u(toOver, toCorner)));
}

function storeTexel(at: usize, bytes: v128, step: i32): void {
  if (step === 4) v128.store32_lane(at, bytes, 0);
  else if (step === 3) storeThree(at, bytes);
  else if (step === 8) v128.store64_lane(at, bytes, 0);
  else if (step === 6) storeSix(at, bytes);
  else if (step === 2) v128.store16_lane(at, bytes, 0);
  else v128.store8_lane(at, bytes, 0);
}

function storeThree(at: usize, bytes: v128): void {
  v128.store16_lane(at, bytes, 0);
  v128.store8_lane(at + 2, bytes, 2);
}

function storeSix(at: usize, bytes: v128): void {
  v128.store32_lane(at, bytes, 0);
  v128.store16_lane(at + 4, bytes, 2);
}
