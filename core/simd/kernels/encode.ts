// Float rows to stored codes. Lanes are channels; each has its own curve, and `curves` holds what the loops ask of them, a
// vector a line:
//
//     0  all ones where the lane is divided by alpha
//    16  byte of alpha in a texel
//    32  the least value that is not counted as clipped below
//    48  the greatest that is not counted as clipped above
//    64  what the lane is multiplied by
//    80  what it is then divided by
//    96  the least code, 112 the greatest
//   128  all ones where the lane is transfer-coded
//   144  how many texels were below, 160 above: integers
//   176  address of the transfer table, and of the thresholds behind it
//   184  the first bucket's number, and 1 where any lane is divided by 80

// 2^23: a float32 that it is added to keeps no fraction, and is rounded half to even in its low bits.
const ROUNDER: f32 = 8388608;

/** Eight bits: `channels` bytes a texel, up to three more behind the row. `stride` is a texel's bytes in the float row. */
export function encodeBytes(
  row: usize,
  stride: usize,
  texels: i32,
  codes: usize,
  channels: usize,
  curves: usize,
): void {
  const end = row + <usize>texels * stride;
  const transferred = v128.load(curves, 128);
  const isCoded = v128.any_true(transferred);
  const least = v128.load32_splat(<usize>load<u32>(curves, 176));
  const base = firstEntry(<usize>load<u32>(curves, 176));
  let below = v128.load(curves, 144);
  let above = v128.load(curves, 160);
  while (row < end) {
    const value = stored(row, curves);
    below = i32x4.sub(below, f32x4.lt(value, v128.load(curves, 32)));
    above = i32x4.sub(above, f32x4.gt(value, v128.load(curves, 48)));
    let code = linearCode(value, curves);
    if (isCoded) code = v128.bitselect(transferCode(value, least, base), code, transferred);
    const words = i16x8.narrow_i32x4_u(code, code);
    store<u32>(codes, i32x4.extract_lane(i8x16.narrow_i16x8_u(words, words), 0));
    row += stride;
    codes += channels;
  }
  v128.store(curves, below, 144);
  v128.store(curves, above, 160);
}

/** Sixteen bits: `channels` words a texel, up to three more behind the row. */
export function encodeWords(
  row: usize,
  stride: usize,
  texels: i32,
  codes: usize,
  channels: usize,
  curves: usize,
): void {
  const end = row + <usize>texels * stride;
  const transferred = v128.load(curves, 128);
  const isCoded = v128.any_true(transferred);
  let below = v128.load(curves, 144);
  let above = v128.load(curves, 160);
  while (row < end) {
    const value = stored(row, curves);
    below = i32x4.sub(below, f32x4.lt(value, v128.load(curves, 32)));
    above = i32x4.sub(above, f32x4.gt(value, v128.load(curves, 48)));
    let code = linearCode(value, curves);
    if (isCoded) code = v128.bitselect(searchedCode(value, curves), code, transferred);
    store<u64>(codes, i64x2.extract_lane(i16x8.narrow_i32x4_u(code, code), 0));
    row += stride;
    codes += channels << 1;
  }
  v128.store(curves, below, 144);
  v128.store(curves, above, 160);
}

/** A texel's lanes in the unit that is stored: alpha taken out, then scaled. */
function stored(row: usize, curves: usize): v128 {
  const weighted = v128.load(curves);
  let texel = v128.load(row);
  if (v128.any_true(weighted)) {
    // Not by i8x16.swizzle: the quick compiler of V8 11 gets it wrong on processors without AVX.
    const alpha = v128.load32_splat(row + <usize>load<u32>(curves, 16));
    const straight = f32x4.div(texel, v128.bitselect(alpha, f32x4.splat(1), weighted));
    texel = v128.and(straight, v128.or(v128.not(weighted), f32x4.gt(alpha, f32x4.splat(0))));
  }
  const scaled = f32x4.mul(texel, v128.load(curves, 64));
  return load<i32>(curves, 188) ? f32x4.div(scaled, v128.load(curves, 80)) : scaled;
}

/** Clamped and rounded half to even. */
function linearCode(value: v128, curves: usize): v128 {
  const clamped = f32x4.pmin(v128.load(curves, 112), f32x4.pmax(v128.load(curves, 96), value));
  return v128.and(f32x4.add(clamped, f32x4.splat(ROUNDER)), i32x4.splat(0xffff));
}

// The table of 8 bits has one entry for each value of a float's top 16 bits, from the last bucket below the first threshold,
// which is at its address, to that of 1. No bucket holds two thresholds: an entry is (code + 1) * 2^24 less the bits of the
// threshold, so that the float's own bits, added to it, carry into the top byte exactly where they reach the threshold.

/** Where the entry of bucket 0 would be. The table begins with the least value that it is asked for. */
function firstEntry(table: usize): usize {
  return table - <usize>((load<u32>(table) >>> 14) & 0x3fffc) + 4;
}

/** Four codes of 8 bits: `least` is the table's own, `base` its first entry. */
function transferCode(value: v128, least: v128, base: usize): v128 {
  const bits = f32x4.pmin(f32x4.splat(1), f32x4.pmax(least, value));
  const low = i64x2.extract_lane(bits, 0);
  const high = i64x2.extract_lane(bits, 1);
  let entries = v128.load32_zero(base + <usize>((<u32>low >> 14) & 0x3fffc));
  entries = v128.load32_lane(base + <usize>((low >>> 46) & 0x3fffc), entries, 1);
  entries = v128.load32_lane(base + <usize>((<u32>high >> 14) & 0x3fffc), entries, 2);
  entries = v128.load32_lane(base + <usize>((high >>> 46) & 0x3fffc), entries, 3);
  return i32x4.shr_u(i32x4.add(bits, entries), 24);
}

// The table of 16 bits has the code at which each bucket begins; the thresholds above it are tried in turn.

function searchedCode(value: v128, curves: usize): v128 {
  const codes = i32x4.splat(searched(f32x4.extract_lane(value, 0), curves));
  const second = i32x4.replace_lane(codes, 1, searched(f32x4.extract_lane(value, 1), curves));
  const third = i32x4.replace_lane(second, 2, searched(f32x4.extract_lane(value, 2), curves));
  return i32x4.replace_lane(third, 3, searched(f32x4.extract_lane(value, 3), curves));
}

function searched(value: f32, curves: usize): i32 {
  const thresholds = <usize>load<u32>(curves, 180);
  if (!(value >= load<f32>(thresholds))) return 0;
  if (value >= 1) return 65535;
  const bucket = (reinterpret<u32>(value) >> 10) - load<u32>(curves, 184);
  let code = <i32>load<u16>(<usize>load<u32>(curves, 176) + ((<usize>bucket) << 1));
  while (value >= load<f32>(thresholds + ((<usize>code) << 2))) code++;
  return code;
}

/** What `encodeBytes` does for the commonest layout, RGBA with coded color that alpha weighs, 8 bits in and out: four texels a
 *  step, a channel a vector. */
export function encodeQuads(row: usize, texels: i32, codes: usize, curves: usize): void {
  const end = row + ((<usize>(texels & ~3)) << 4);
  const table = <usize>load<u32>(curves, 176);
  const bottom = v128.load32_splat(table);
  const base = firstEntry(table);
  const rounder = f32x4.splat(ROUNDER);
  const full = f32x4.splat(255);
  const none = f32x4.splat(0);
  const below = v128.load32_splat(curves, 32);
  const above = v128.load32_splat(curves, 48);
  const alphaBelow = v128.load32_splat(curves, 44);
  const alphaAbove = v128.load32_splat(curves, 60);
  let clear = none;
  let dense = none;
  while (row < end) {
    const p = v128.load(row);
    const q = v128.load(row, 16);
    const s = v128.load(row, 32);
    const t = v128.load(row, 48);
    const pq = v128.shuffle<f32>(p, q, 0, 4, 1, 5);
    const st = v128.shuffle<f32>(s, t, 0, 4, 1, 5);
    const pqHigh = v128.shuffle<f32>(p, q, 2, 6, 3, 7);
    const stHigh = v128.shuffle<f32>(s, t, 2, 6, 3, 7);
    const alpha = v128.shuffle<f64>(pqHigh, stHigh, 1, 3);
    const red = f32x4.div(v128.shuffle<f64>(pq, st, 0, 2), alpha);
    const green = f32x4.div(v128.shuffle<f64>(pq, st, 1, 3), alpha);
    const blue = f32x4.div(v128.shuffle<f64>(pqHigh, stHigh, 0, 2), alpha);
    // Color over no alpha is none: it is taken out behind, of the codes.
    const kept = f32x4.gt(alpha, none);
    const least = f32x4.pmin(f32x4.pmin(red, green), blue);
    const most = f32x4.pmax(f32x4.pmax(red, green), blue);
    const outside = v128.and(v128.or(f32x4.lt(least, below), f32x4.gt(most, above)), kept);
    if (v128.any_true(outside)) countThree(v128.and(red, kept), v128.and(green, kept), v128.and(blue, kept), curves);
    clear = i32x4.sub(clear, f32x4.lt(alpha, alphaBelow));
    dense = i32x4.sub(dense, f32x4.gt(alpha, alphaAbove));
    const clamped = f32x4.pmin(full, f32x4.pmax(none, alpha));
    const opacity = i32x4.shl(f32x4.add(clamped, rounder), 24);
    const redGreen = v128.or(transferCode(red, bottom, base), i32x4.shl(transferCode(green, bottom, base), 8));
    const color = v128.and(v128.or(redGreen, i32x4.shl(transferCode(blue, bottom, base), 16)), kept);
    v128.store(codes, v128.or(color, opacity));
    row += 64;
    codes += 16;
  }
  store<i32>(curves, load<i32>(curves, 156) + sumLanes(clear), 156);
  store<i32>(curves, load<i32>(curves, 172) + sumLanes(dense), 172);
  encodeBytes(row, 16, texels & 3, codes, 4, curves);
}

function sumLanes(v: v128): i32 {
  const front = i32x4.extract_lane(v, 0) + i32x4.extract_lane(v, 1);
  return front + i32x4.extract_lane(v, 2) + i32x4.extract_lane(v, 3);
}

/** Colors leave their range in one texel of hundreds, alpha in one of ten: it is counted without asking first. */
function countThree(red: v128, green: v128, blue: v128, curves: usize): void {
  count(red, curves, 0);
  count(green, curves, 4);
  count(blue, curves, 8);
}

function count(channel: v128, curves: usize, lane: usize): void {
  const place = curves + lane;
  const below = i32x4.bitmask(f32x4.lt(channel, v128.load32_splat(place, 32)));
  const above = i32x4.bitmask(f32x4.gt(channel, v128.load32_splat(place, 48)));
  store<i32>(place, load<i32>(place, 144) + popcnt(below), 144);
  store<i32>(place, load<i32>(place, 160) + popcnt(above), 160);
}

/** Normals made unit and stored as (v + 1) / 2 of `most`, in the channels of x, y and z, counted in floats and codes alike; a z
 *  beyond `channels` is not stored. */
export function encodeNormals(
  row: usize,
  stride: usize,
  texels: i32,
  codes: usize,
  channels: usize,
  x: usize,
  y: usize,
  z: usize,
  shortest: f64,
  most: f64,
): void {
  const end = row + <usize>texels * stride;
  while (row < end) {
    const vx = load<f32>(row + (x << 2));
    const vy = load<f32>(row + (y << 2));
    const vz = load<f32>(row + (z << 2));
    const length = sqrt<f32>(vx * vx + vy * vy + vz * vz);
    const direction = <f64>length >= shortest;
    storeCode(codes, x, normalCode(direction ? vx / length : 0, most), most);
    storeCode(codes, y, normalCode(direction ? vy / length : 0, most), most);
    if (z < channels) storeCode(codes, z, normalCode(direction ? vz / length : 1, most), most);
    row += stride;
    codes += most > 255 ? channels << 1 : channels;
  }
}

function normalCode(value: f32, most: f64): i32 {
  const code = <f32>(((<f64>value + 1) / 2) * most);
  return <i32>nearest<f32>(min<f32>(<f32>most, max<f32>(0, code)));
}

function storeCode(codes: usize, channel: usize, code: i32, most: f64): void {
  if (most > 255) store<u16>(codes + (channel << 1), code);
  else store<u8>(codes + channel, code);
}
