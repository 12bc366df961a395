// What is measured on float rows, in double precision.

// Luminance of codes. Of red, green and blue, 16 bytes each:
//
//   u32 bytes from a texel's first code to the color's
//   u32 address of a table, f64 a code: light, times the color's share of luminance

/** Adds up luminance of 8-bit codes and the weight of each texel, alpha clamped to 0..1, and writes both sums. Texels of codes are
 *  `step` bytes apart. `alpha` is the byte of alpha in a texel of the float row; -1 where every texel weighs 1. */
export function lightOfBytes(
  codes: usize,
  step: usize,
  colors: usize,
  row: usize,
  stride: usize,
  alpha: i32,
  most: f64,
  texels: i32,
  sums: usize,
): void {
  lightOf<u8>(codes, step, colors, row, stride, alpha, most, texels, sums);
}

/** The same of 16-bit codes. */
export function lightOfWords(
  codes: usize,
  step: usize,
  colors: usize,
  row: usize,
  stride: usize,
  alpha: i32,
  most: f64,
  texels: i32,
  sums: usize,
): void {
  lightOf<u16>(codes, step, colors, row, stride, alpha, most, texels, sums);
}

/** Two texels side by side: even ones in the low lane, odd ones in the high. */
function lightOf<Code extends number>(
  codes: usize,
  step: usize,
  colors: usize,
  row: usize,
  stride: usize,
  alpha: i32,
  most: f64,
  texels: i32,
  sums: usize,
): void {
  const red = <usize>load<u32>(colors, 0);
  const green = <usize>load<u32>(colors, 16);
  const blue = <usize>load<u32>(colors, 32);
  const reds = <usize>load<u32>(colors, 4);
  const greens = <usize>load<u32>(colors, 20);
  const blues = <usize>load<u32>(colors, 36);
  const end = codes + <usize>(texels & ~1) * step;
  const whole = f32x4.splat(<f32>most);
  const one = f64x2.splat(1);
  let place = row + <usize>alpha;
  let light = f64x2.splat(0);
  let weight = f64x2.splat(0);
  while (codes < end) {
    const next = codes + step;
    let y = v128.load64_zero(reds + ((<usize>load<Code>(codes + red)) << 3));
    y = v128.load64_lane(reds + ((<usize>load<Code>(next + red)) << 3), y, 1);
    let g = v128.load64_zero(greens + ((<usize>load<Code>(codes + green)) << 3));
    g = v128.load64_lane(greens + ((<usize>load<Code>(next + green)) << 3), g, 1);
    let b = v128.load64_zero(blues + ((<usize>load<Code>(codes + blue)) << 3));
    b = v128.load64_lane(blues + ((<usize>load<Code>(next + blue)) << 3), b, 1);
    y = f64x2.add(f64x2.add(y, g), b);
    if (alpha < 0) {
      light = f64x2.add(light, y);
      weight = f64x2.add(weight, one);
    } else {
      const alphas = v128.load32_lane(place + stride, v128.load32_zero(place), 1);
      const share = f64x2.promote_low_f32x4(f32x4.pmin(whole, f32x4.pmax(f32x4.splat(0), alphas)));
      light = f64x2.add(light, f64x2.mul(y, share));
      weight = f64x2.add(weight, share);
      place += stride << 1;
    }
    codes = next + step;
  }
  if (texels & 1) {
    const r = load<f64>(reds + ((<usize>load<Code>(codes + red)) << 3));
    const g = load<f64>(greens + ((<usize>load<Code>(codes + green)) << 3));
    const b = load<f64>(blues + ((<usize>load<Code>(codes + blue)) << 3));
    const value: f64 = alpha < 0 ? 1 : <f64>load<f32>(place);
    const share: f64 = alpha < 0 ? 1 : value >= most ? most : value > 0 ? value : 0;
    light = f64x2.replace_lane(light, 0, f64x2.extract_lane(light, 0) + (r + g + b) * share);
    weight = f64x2.replace_lane(weight, 0, f64x2.extract_lane(weight, 0) + share);
  }
  const divisor: f64 = alpha < 0 ? 1 : most;
  store<f64>(sums, (f64x2.extract_lane(light, 0) + f64x2.extract_lane(light, 1)) / divisor);
  store<f64>(sums, (f64x2.extract_lane(weight, 0) + f64x2.extract_lane(weight, 1)) / divisor, 8);
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
