// What is measured on float rows.

/** Sums four lanes of a row by fours of texels, as decode.ts does, clamped: alpha, at byte `alpha` of a texel, to 0..most, every lane to
 *  0 and alpha times its line of `wholes`. -1 is an alpha of 1. */
export function sumHeld(
  row: usize,
  stride: usize,
  alpha: i32,
  most: f32,
  wholes: usize,
  texels: i32,
  sums: usize,
): void {
  const end = row + <usize>(texels & ~3) * stride;
  const whole = v128.load(wholes);
  const all = f32x4.splat(most);
  const none = f32x4.splat(0);
  let low = f64x2.splat(0);
  let high = f64x2.splat(0);
  while (row < end) {
    const third = row + (stride << 1);
    const front = f32x4.add(held(row, alpha, all, whole), held(row + stride, alpha, all, whole));
    const back = f32x4.add(held(third, alpha, all, whole), held(third + stride, alpha, all, whole));
    const four = f32x4.add(front, back);
    low = f64x2.add(low, f64x2.promote_low_f32x4(four));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(four, four, 1, 1)));
    row += stride << 2;
  }
  if (texels & 3) {
    const second = (texels & 3) > 1 ? held(row + stride, alpha, all, whole) : none;
    const third = (texels & 3) > 2 ? held(row + (stride << 1), alpha, all, whole) : none;
    const four = f32x4.add(f32x4.add(held(row, alpha, all, whole), second), f32x4.add(third, none));
    low = f64x2.add(low, f64x2.promote_low_f32x4(four));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(four, four, 1, 1)));
  }
  v128.store(sums, low);
  v128.store(sums, high, 16);
}

function held(texel: usize, alpha: i32, all: v128, whole: v128): v128 {
  const none = f32x4.splat(0);
  const positive = f32x4.pmax(none, v128.load(texel));
  if (alpha < 0) return f32x4.pmin(whole, positive);
  const share = f32x4.pmin(all, f32x4.pmax(none, v128.load32_splat(texel + <usize>alpha)));
  return f32x4.pmin(f32x4.mul(share, whole), positive);
}

/** Alpha as words: 65535 is 1. */
export function keepAlpha(alpha: usize, stride: usize, most: f64, values: usize, texels: i32): void {
  const end = values + ((<usize>texels) << 1);
  while (values < end) {
    store<u16>(values, <u32>(clampedShare(<f64>load<f32>(alpha), most) * 65535 + 0.5));
    alpha += stride;
    values += 2;
  }
}

function clampedShare(value: f64, most: f64): f64 {
  return value >= most ? 1 : value > 0 ? value / most : 0;
}

/** Length of the mean normal over each texel, alpha taken out again where `alpha`, a byte of the texel, is not -1. */
export function measureLengths(
  row: usize,
  stride: usize,
  x: usize,
  y: usize,
  z: usize,
  alpha: i32,
  lengths: usize,
  texels: i32,
): void {
  const end = row + <usize>texels * stride;
  while (row < end) {
    const vx = <f64>load<f32>(row + x);
    const vy = <f64>load<f32>(row + y);
    const vz = <f64>load<f32>(row + z);
    const length = sqrt<f64>(vx * vx + vy * vy + vz * vz);
    const whole: f64 = alpha < 0 ? 1 : <f64>load<f32>(row + <usize>alpha);
    store<f32>(lengths, <f32>(whole > 0 ? length / whole : 0));
    row += stride;
    lengths += 4;
  }
}
