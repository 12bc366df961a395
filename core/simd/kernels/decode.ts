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

/** Adds a row to the sums of four channels, in double precision and by itself first. Lanes without a channel sum whatever
 *  follows in the row. */
export function sumRow(row: usize, stride: usize, texels: i32, sums: usize): void {
  const end = row + <usize>texels * stride;
  let low = f64x2.splat(0);
  let high = f64x2.splat(0);
  while (row < end) {
    const texel = v128.load(row);
    low = f64x2.add(low, f64x2.promote_low_f32x4(texel));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(texel, texel, 1, 1)));
    row += stride;
  }
  v128.store(sums, f64x2.add(v128.load(sums), low));
  v128.store(sums, f64x2.add(v128.load(sums, 16), high), 16);
}

/** Four channels of 8-bit codes at once, by tables of vectors: the value of each code in its channel's lane, 4 KiB a channel,
 *  then what the code of `alpha` (0..3) multiplies each lane by. Sums the row as `sumRow` does, in the shade of the loads. */
export function decodeQuads(codes: usize, tables: usize, alpha: usize, out: usize, texels: i32, sums: usize): void {
  const end = codes + ((<usize>texels) << 2);
  let low = f64x2.splat(0);
  let high = f64x2.splat(0);
  while (codes < end) {
    const first = v128.or(
      v128.load(tables + ((<usize>load<u8>(codes)) << 4)),
      v128.load(tables + ((<usize>load<u8>(codes, 1)) << 4), 4096),
    );
    const second = v128.or(
      v128.load(tables + ((<usize>load<u8>(codes, 2)) << 4), 8192),
      v128.load(tables + ((<usize>load<u8>(codes, 3)) << 4), 12288),
    );
    const weight = v128.load(tables + ((<usize>load<u8>(codes + alpha)) << 4), 16384);
    const texel = f32x4.mul(v128.or(first, second), weight);
    v128.store(out, texel);
    low = f64x2.add(low, f64x2.promote_low_f32x4(texel));
    high = f64x2.add(high, f64x2.promote_low_f32x4(v128.shuffle<f64>(texel, texel, 1, 1)));
    codes += 4;
    out += 16;
  }
  v128.store(sums, f64x2.add(v128.load(sums), low));
  v128.store(sums, f64x2.add(v128.load(sums, 16), high), 16);
}
