// Codes to floats: tables, then unit normals, then the weight of alpha. Rows are packed: `stride` bytes a texel.

/** One channel of 8-bit codes that lie `step` bytes apart. */
export function decodeBytes(codes: usize, step: usize, table: usize, out: usize, stride: usize, texels: i32): void {
  const end = out + <usize>texels * stride;
  while (out < end) {
    store<f32>(out, load<f32>(table + ((<usize>load<u8>(codes)) << 2)));
    codes += step;
    out += stride;
  }
}

/** The same for 16-bit codes. */
export function decodeWords(codes: usize, step: usize, table: usize, out: usize, stride: usize, texels: i32): void {
  const end = out + <usize>texels * stride;
  while (out < end) {
    store<f32>(out, load<f32>(table + ((<usize>load<u16>(codes)) << 2)));
    codes += step;
    out += stride;
  }
}

/** Multiplies a channel by another. */
export function weigh(channel: usize, alpha: usize, stride: usize, texels: i32): void {
  const end = channel + <usize>texels * stride;
  while (channel < end) {
    store<f32>(channel, load<f32>(channel) * load<f32>(alpha));
    channel += stride;
    alpha += stride;
  }
}

/** Makes x, y, z unit, (0, 0, 1) below `shortest`; z comes from x and y where it is `rebuilt`. */
export function makeUnit(x: usize, y: usize, z: usize, rebuilt: i32, shortest: f64, stride: usize, texels: i32): void {
  const end = x + <usize>texels * stride;
  while (x < end) {
    const vx = load<f32>(x);
    const vy = load<f32>(y);
    const flat = vx * vx + vy * vy;
    const vz = rebuilt ? sqrt<f32>(max<f32>(0, 1 - flat)) : load<f32>(z);
    const length = sqrt<f32>(flat + vz * vz);
    const direction = <f64>length >= shortest;
    store<f32>(x, direction ? vx / length : 0);
    store<f32>(y, direction ? vy / length : 0);
    store<f32>(z, direction ? vz / length : 1);
    x += stride;
    y += stride;
    z += stride;
  }
}

/** Adds texels of a row to its sums of four channels: four texels in float32, (a + b) + (c + d), fours in double precision. A last
 *  four may be short. Lanes without a channel sum whatever follows in the row. */
export function sumRow(row: usize, stride: usize, texels: i32, sums: usize): void {
  const end = row + <usize>(texels & ~3) * stride;
  let low = v128.load(sums);
  let high = v128.load(sums, 16);
  while (row < end) {
    const third = row + (stride << 1);
    const front = f32x4.add(v128.load(row), v128.load(row + stride));
    const four = f32x4.add(front, f32x4.add(v128.load(third), v128.load(third + stride)));
    low = f64x2.add(low, f64x2.promote_low_f32x4(four));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(four, four, 1, 1)));
    row += stride << 2;
  }
  if (texels & 3) {
    const none = f32x4.splat(0);
    const second = (texels & 3) > 1 ? v128.load(row + stride) : none;
    const third = (texels & 3) > 2 ? v128.load(row + (stride << 1)) : none;
    const four = f32x4.add(f32x4.add(v128.load(row), second), f32x4.add(third, none));
    low = f64x2.add(low, f64x2.promote_low_f32x4(four));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(four, four, 1, 1)));
  }
  v128.store(sums, low);
  v128.store(sums, high, 16);
}

// Tables of vectors, 4 KiB each, one for each code of a channel: of the first three channels their values in their own lanes, and
// ones in the last lane of the third; of the fourth what it multiplies lanes by, and its own value in the last. Their addresses
// stand in the code: that is a quarter of the time.

const QUADS: usize = 64;

/** Four channels of 8-bit codes at once. Sums them as `sumRow` does, in the shade of the loads. */
export function decodeQuads(codes: usize, out: usize, texels: i32, sums: usize): void {
  const end = codes + ((<usize>(texels & ~3)) << 2);
  let low = v128.load(sums);
  let high = v128.load(sums, 16);
  while (codes < end) {
    const a = quad(codes);
    v128.store(out, a);
    const b = quad(codes + 4);
    v128.store(out, b, 16);
    const c = quad(codes + 8);
    v128.store(out, c, 32);
    const d = quad(codes + 12);
    v128.store(out, d, 48);
    const four = f32x4.add(f32x4.add(a, b), f32x4.add(c, d));
    low = f64x2.add(low, f64x2.promote_low_f32x4(four));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(four, four, 1, 1)));
    codes += 16;
    out += 64;
  }
  v128.store(sums, low);
  v128.store(sums, high, 16);
  for (let i: usize = 0; i < <usize>(texels & 3); i++) v128.store(out + (i << 4), quad(codes + (i << 2)));
  sumRow(out, 16, texels & 3, sums);
}

function quad(codes: usize): v128 {
  const front = v128.or(
    v128.load((<usize>load<u8>(codes)) << 4, QUADS),
    v128.load((<usize>load<u8>(codes, 1)) << 4, QUADS + 4096),
  );
  const color = v128.or(front, v128.load((<usize>load<u8>(codes, 2)) << 4, QUADS + 8192));
  return f32x4.mul(color, v128.load((<usize>load<u8>(codes, 3)) << 4, QUADS + 12288));
}
