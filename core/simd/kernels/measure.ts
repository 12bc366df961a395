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
  const end = codes + <usize>texels * step;
  let place = row + <usize>alpha;
  let light: f64 = 0;
  let weight: f64 = 0;
  while (codes < end) {
    const r = load<f64>(reds + ((<usize>load<Code>(codes + red)) << 3));
    const g = load<f64>(greens + ((<usize>load<Code>(codes + green)) << 3));
    const b = load<f64>(blues + ((<usize>load<Code>(codes + blue)) << 3));
    const share: f64 = alpha < 0 ? 1 : clampedShare(<f64>load<f32>(place), most);
    light += (r + g + b) * share;
    weight += share;
    codes += step;
    place += stride;
  }
  store<f64>(sums, light);
  store<f64>(sums, weight, 8);
}

/** Adds luminance of 8-bit codes, and what weighs them, to the sums. `alpha` is the byte of alpha in a texel of codes, -1 where
 *  every texel weighs 1; `shares` is a table of f64 a code. */
export function addBytes(
  codes: usize,
  step: usize,
  colors: usize,
  alpha: i32,
  shares: usize,
  texels: i32,
  sums: usize,
): void {
  add<u8>(codes, step, colors, alpha, shares, texels, sums);
}

/** The same of 16-bit codes. */
export function addWords(
  codes: usize,
  step: usize,
  colors: usize,
  alpha: i32,
  shares: usize,
  texels: i32,
  sums: usize,
): void {
  add<u16>(codes, step, colors, alpha, shares, texels, sums);
}

function add<Code extends number>(
  codes: usize,
  step: usize,
  colors: usize,
  alpha: i32,
  shares: usize,
  texels: i32,
  sums: usize,
): void {
  const red = <usize>load<u32>(colors, 0);
  const green = <usize>load<u32>(colors, 16);
  const blue = <usize>load<u32>(colors, 32);
  const reds = <usize>load<u32>(colors, 4);
  const greens = <usize>load<u32>(colors, 20);
  const blues = <usize>load<u32>(colors, 36);
  const end = codes + <usize>texels * step;
  let light = load<f64>(sums);
  let weight = load<f64>(sums, 8);
  while (codes < end) {
    const r = load<f64>(reds + ((<usize>load<Code>(codes + red)) << 3));
    const g = load<f64>(greens + ((<usize>load<Code>(codes + green)) << 3));
    const b = load<f64>(blues + ((<usize>load<Code>(codes + blue)) << 3));
    const share: f64 = alpha < 0 ? 1 : load<f64>(shares + ((<usize>load<Code>(codes + <usize>alpha)) << 3));
    light += (r + g + b) * share;
    weight += share;
    codes += step;
  }
  store<f64>(sums, light);
  store<f64>(sums, weight, 8);
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
