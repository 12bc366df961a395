// Rows added across: the floats of one result row from the rows that its taps read, whatever their channels.
//
//   rows      u32 addresses, one a tap
//   weights   f32, one a tap
//
// Floats go in sixteens: up to fifteen behind the row are read and written too.

/** A phase whose weights read the same from both ends. */
export function acrossEqual(rows: usize, weights: usize, taps: i32, out: usize, floats: i32): void {
  const end = (<usize>floats) << 2;
  for (let x: usize = 0; x < end; x += 64) {
    let l = rows;
    let r = rows + ((<usize>(taps - 1)) << 2);
    let w = weights;
    let a = f32x4.splat(0);
    let b = f32x4.splat(0);
    let c = f32x4.splat(0);
    let d = f32x4.splat(0);
    while (l < r) {
      const p = <usize>load<u32>(l) + x;
      const q = <usize>load<u32>(r) + x;
      const weight = v128.load32_splat(w);
      a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(p), v128.load(q)), weight));
      b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(p, 16), v128.load(q, 16)), weight));
      c = f32x4.add(c, f32x4.mul(f32x4.add(v128.load(p, 32), v128.load(q, 32)), weight));
      d = f32x4.add(d, f32x4.mul(f32x4.add(v128.load(p, 48), v128.load(q, 48)), weight));
      l += 4;
      r -= 4;
      w += 4;
    }
    if (taps & 1) {
      const p = <usize>load<u32>(l) + x;
      const weight = v128.load32_splat(w);
      a = f32x4.add(a, f32x4.mul(v128.load(p), weight));
      b = f32x4.add(b, f32x4.mul(v128.load(p, 16), weight));
      c = f32x4.add(c, f32x4.mul(v128.load(p, 32), weight));
      d = f32x4.add(d, f32x4.mul(v128.load(p, 48), weight));
    }
    v128.store(out + x, a);
    v128.store(out + x, b, 16);
    v128.store(out + x, c, 32);
    v128.store(out + x, d, 48);
  }
}

/** Any other phase. */
export function acrossPairs(rows: usize, weights: usize, taps: i32, out: usize, floats: i32): void {
  const end = (<usize>floats) << 2;
  for (let x: usize = 0; x < end; x += 64) {
    let l = rows;
    let r = rows + ((<usize>(taps - 1)) << 2);
    let w = weights;
    let v = weights + ((<usize>(taps - 1)) << 2);
    let a = f32x4.splat(0);
    let b = f32x4.splat(0);
    let c = f32x4.splat(0);
    let d = f32x4.splat(0);
    while (l < r) {
      const p = <usize>load<u32>(l) + x;
      const q = <usize>load<u32>(r) + x;
      const left = v128.load32_splat(w);
      const right = v128.load32_splat(v);
      a = f32x4.add(a, f32x4.add(f32x4.mul(v128.load(p), left), f32x4.mul(v128.load(q), right)));
      b = f32x4.add(b, f32x4.add(f32x4.mul(v128.load(p, 16), left), f32x4.mul(v128.load(q, 16), right)));
      c = f32x4.add(c, f32x4.add(f32x4.mul(v128.load(p, 32), left), f32x4.mul(v128.load(q, 32), right)));
      d = f32x4.add(d, f32x4.add(f32x4.mul(v128.load(p, 48), left), f32x4.mul(v128.load(q, 48), right)));
      l += 4;
      r -= 4;
      w += 4;
      v -= 4;
    }
    if (taps & 1) {
      const p = <usize>load<u32>(l) + x;
      const weight = v128.load32_splat(w);
      a = f32x4.add(a, f32x4.mul(v128.load(p), weight));
      b = f32x4.add(b, f32x4.mul(v128.load(p, 16), weight));
      c = f32x4.add(c, f32x4.mul(v128.load(p, 32), weight));
      d = f32x4.add(d, f32x4.mul(v128.load(p, 48), weight));
    }
    v128.store(out + x, a);
    v128.store(out + x, b, 16);
    v128.store(out + x, c, 32);
    v128.store(out + x, d, 48);
  }
}

/** Copies the texels that wrapping reads to where it reads them: u32 addresses, to and from; from 0 is the border. */
export function pad(pairs: usize, count: i32, bytes: usize): void {
  const end = pairs + ((<usize>count) << 3);
  while (pairs < end) {
    const to = <usize>load<u32>(pairs);
    const from = <usize>load<u32>(pairs, 4);
    if (from) memory.copy(to, from, bytes);
    else memory.fill(to, 0, bytes);
    pairs += 8;
  }
}
