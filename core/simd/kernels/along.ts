// One row filtered along x. A texel is read as one vector of four floats: its own channels and, where it has fewer, what
// follows in the row. Those lanes are computed for nothing, and written over by the next texel.
//
//   phase, 16 bytes: i32 bytes from texel 0 to the first tap, u32 address of the weights, i32 taps, i32 1 where symmetric

/** Texels of `stride` bytes, any phases. The last texel may write 12 bytes behind the row. */
export function along(row: usize, phases: usize, out: usize, texels: i32, stride: usize): void {
  const end = phases + ((<usize>texels) << 4);
  while (phases < end) {
    v128.store(out, sumPhase(row, phases, stride));
    phases += 16;
    out += stride;
  }
}

/** From the outermost pair of taps inward, a middle tap last. */
function sumPhase(row: usize, phase: usize, stride: usize): v128 {
  const taps = load<i32>(phase, 8);
  let l = row + <usize>load<i32>(phase, 0);
  let r = l + <usize>(taps - 1) * stride;
  let w = <usize>load<u32>(phase, 4);
  let sum = f32x4.splat(0);
  if (load<i32>(phase, 12)) {
    while (l < r) {
      sum = f32x4.add(sum, f32x4.mul(f32x4.add(v128.load(l), v128.load(r)), v128.load32_splat(w)));
      l += stride;
      r -= stride;
      w += 4;
    }
  } else {
    let v = w + ((<usize>(taps - 1)) << 2);
    while (l < r) {
      const left = f32x4.mul(v128.load(l), v128.load32_splat(w));
      sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(r), v128.load32_splat(v))));
      l += stride;
      r -= stride;
      w += 4;
      v -= 4;
    }
  }
  return taps & 1 ? f32x4.add(sum, f32x4.mul(v128.load(l), v128.load32_splat(w))) : sum;
}

/** Four channels, any phases: what `along` does in two thirds of the time, two pairs of taps a step. */
export function alongFours(row: usize, phases: usize, out: usize, texels: i32): void {
  const end = phases + ((<usize>texels) << 4);
  while (phases < end) {
    const taps = load<i32>(phases, 8);
    const l = row + <usize>load<i32>(phases, 0);
    const w = <usize>load<u32>(phases, 4);
    if (load<i32>(phases, 12)) v128.store(out, sumEqual(l, w, taps));
    else v128.store(out, sumPairs(l, w, taps));
    phases += 16;
    out += 16;
  }
}

function sumEqual(first: usize, weights: usize, taps: i32): v128 {
  let l = first;
  let w = weights;
  let r = l + ((<usize>(taps - 2)) << 4);
  let sum = f32x4.splat(0);
  let pairs = taps >> 1;
  while (pairs > 1) {
    sum = f32x4.add(sum, f32x4.mul(f32x4.add(v128.load(l), v128.load(r, 16)), v128.load32_splat(w)));
    sum = f32x4.add(sum, f32x4.mul(f32x4.add(v128.load(l, 16), v128.load(r)), v128.load32_splat(w, 4)));
    l += 32;
    r -= 32;
    w += 8;
    pairs -= 2;
  }
  if (pairs) {
    sum = f32x4.add(sum, f32x4.mul(f32x4.add(v128.load(l), v128.load(r, 16)), v128.load32_splat(w)));
    l += 16;
    w += 4;
  }
  return taps & 1 ? f32x4.add(sum, f32x4.mul(v128.load(l), v128.load32_splat(w))) : sum;
}

function sumPairs(first: usize, weights: usize, taps: i32): v128 {
  let l = first;
  let w = weights;
  let r = l + ((<usize>(taps - 2)) << 4);
  let v = w + ((<usize>(taps - 2)) << 2);
  let sum = f32x4.splat(0);
  let pairs = taps >> 1;
  while (pairs > 1) {
    const outer = f32x4.mul(v128.load(l), v128.load32_splat(w));
    sum = f32x4.add(sum, f32x4.add(outer, f32x4.mul(v128.load(r, 16), v128.load32_splat(v, 4))));
    const inner = f32x4.mul(v128.load(l, 16), v128.load32_splat(w, 4));
    sum = f32x4.add(sum, f32x4.add(inner, f32x4.mul(v128.load(r), v128.load32_splat(v))));
    l += 32;
    r -= 32;
    w += 8;
    v -= 8;
    pairs -= 2;
  }
  if (pairs) {
    const left = f32x4.mul(v128.load(l), v128.load32_splat(w));
    sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(r, 16), v128.load32_splat(v, 4))));
    l += 16;
    w += 4;
  }
  return taps & 1 ? f32x4.add(sum, f32x4.mul(v128.load(l), v128.load32_splat(w))) : sum;
}

// Without a loop over taps where their counts are common ones, and with weights that come four at a time: loads are what there is too
// much of. That takes 0.65 to 0.85 of the time of `alongFours`, which does the phases that are symmetric or of another count.

/** Four channels, phases of six taps each, which Lanczos3 and a Kaiser of width 3 have where they magnify. */
export function alongSixes(row: usize, phases: usize, out: usize, texels: i32): void {
  const end = phases + ((<usize>texels) << 4);
  while (phases < end) {
    const l = row + <usize>load<i32>(phases, 0);
    const w = <usize>load<u32>(phases, 4);
    if (load<i32>(phases, 12)) alongFours(row, phases, out, 1);
    else v128.store(out, sumSix(l, w));
    phases += 16;
    out += 16;
  }
}

function sumSix(l: usize, weights: usize): v128 {
  const f = v128.load(weights);
  const g = v128.load(weights, 8);
  let left = f32x4.mul(v128.load(l), v128.shuffle<f32>(f, f, 0, 0, 0, 0));
  let sum = f32x4.add(
    f32x4.splat(0),
    f32x4.add(left, f32x4.mul(v128.load(l, 80), v128.shuffle<f32>(g, g, 3, 3, 3, 3))),
  );
  left = f32x4.mul(v128.load(l, 16), v128.shuffle<f32>(f, f, 1, 1, 1, 1));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 64), v128.shuffle<f32>(g, g, 2, 2, 2, 2))));
  left = f32x4.mul(v128.load(l, 32), v128.shuffle<f32>(f, f, 2, 2, 2, 2));
  return f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 48), v128.shuffle<f32>(g, g, 1, 1, 1, 1))));
}

/** Four channels, phases of eight to ten taps each, which kernels of width 2 have near 2:1 and wider ones at smaller ratios. */
export function alongTens(row: usize, phases: usize, out: usize, texels: i32): void {
  const end = phases + ((<usize>texels) << 4);
  while (phases < end) {
    const l = row + <usize>load<i32>(phases, 0);
    const w = <usize>load<u32>(phases, 4);
    if (load<i32>(phases, 12)) alongFours(row, phases, out, 1);
    else v128.store(out, sumTen(l, w, load<i32>(phases, 8)));
    phases += 16;
    out += 16;
  }
}

function sumTen(l: usize, weights: usize, taps: i32): v128 {
  const r = l + ((<usize>(taps - 4)) << 4);
  const f = v128.load(weights);
  const g = v128.load(weights + ((<usize>(taps - 4)) << 2));
  let left = f32x4.mul(v128.load(l), v128.shuffle<f32>(f, f, 0, 0, 0, 0));
  let sum = f32x4.add(
    f32x4.splat(0),
    f32x4.add(left, f32x4.mul(v128.load(r, 48), v128.shuffle<f32>(g, g, 3, 3, 3, 3))),
  );
  left = f32x4.mul(v128.load(l, 16), v128.shuffle<f32>(f, f, 1, 1, 1, 1));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(r, 32), v128.shuffle<f32>(g, g, 2, 2, 2, 2))));
  left = f32x4.mul(v128.load(l, 32), v128.shuffle<f32>(f, f, 2, 2, 2, 2));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(r, 16), v128.shuffle<f32>(g, g, 1, 1, 1, 1))));
  left = f32x4.mul(v128.load(l, 48), v128.shuffle<f32>(f, f, 3, 3, 3, 3));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(r), v128.shuffle<f32>(g, g, 0, 0, 0, 0))));
  if (taps === 8) return sum;
  left = f32x4.mul(v128.load(l, 64), v128.load32_splat(weights, 16));
  if (taps === 9) return f32x4.add(sum, left);
  return f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 80), v128.load32_splat(weights, 20))));
}

/** Four channels, phases of twelve taps nearly all, which Lanczos3 and a Kaiser of width 3 have near 2:1. */
export function alongTwelves(row: usize, phases: usize, out: usize, texels: i32): void {
  const end = phases + ((<usize>texels) << 4);
  while (phases < end) {
    const l = row + <usize>load<i32>(phases, 0);
    const w = <usize>load<u32>(phases, 4);
    if (load<i32>(phases, 12) || load<i32>(phases, 8) !== 12) alongFours(row, phases, out, 1);
    else v128.store(out, sumTwelve(l, w));
    phases += 16;
    out += 16;
  }
}

function sumTwelve(l: usize, weights: usize): v128 {
  const f = v128.load(weights);
  const g = v128.load(weights, 16);
  const h = v128.load(weights, 32);
  let left = f32x4.mul(v128.load(l), v128.shuffle<f32>(f, f, 0, 0, 0, 0));
  let sum = f32x4.add(
    f32x4.splat(0),
    f32x4.add(left, f32x4.mul(v128.load(l, 176), v128.shuffle<f32>(h, h, 3, 3, 3, 3))),
  );
  left = f32x4.mul(v128.load(l, 16), v128.shuffle<f32>(f, f, 1, 1, 1, 1));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 160), v128.shuffle<f32>(h, h, 2, 2, 2, 2))));
  left = f32x4.mul(v128.load(l, 32), v128.shuffle<f32>(f, f, 2, 2, 2, 2));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 144), v128.shuffle<f32>(h, h, 1, 1, 1, 1))));
  left = f32x4.mul(v128.load(l, 48), v128.shuffle<f32>(f, f, 3, 3, 3, 3));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 128), v128.shuffle<f32>(h, h, 0, 0, 0, 0))));
  left = f32x4.mul(v128.load(l, 64), v128.shuffle<f32>(g, g, 0, 0, 0, 0));
  sum = f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 112), v128.shuffle<f32>(g, g, 3, 3, 3, 3))));
  left = f32x4.mul(v128.load(l, 80), v128.shuffle<f32>(g, g, 1, 1, 1, 1));
  return f32x4.add(sum, f32x4.add(left, f32x4.mul(v128.load(l, 96), v128.shuffle<f32>(g, g, 2, 2, 2, 2))));
}

/** Four channels at 2:1 where all phases are the same, symmetric and of an even count: what `along` does, four texels side by
 *  side, in 0.6 of its time. */
export function alongHalves(row: usize, phases: usize, out: usize, texels: i32): void {
  const fours = texels & ~3;
  const end = out + ((<usize>fours) << 4);
  const reach = (<usize>(load<i32>(phases, 8) - 1)) << 4;
  const weights = <usize>load<u32>(phases, 4);
  let first = row + <usize>load<i32>(phases, 0);
  while (out < end) {
    let l = first;
    let r = first + reach;
    let w = weights;
    let a = f32x4.splat(0);
    let b = f32x4.splat(0);
    let c = f32x4.splat(0);
    let d = f32x4.splat(0);
    while (l < r) {
      const weight = v128.load32_splat(w);
      a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(l), v128.load(r)), weight));
      b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(l, 32), v128.load(r, 32)), weight));
      c = f32x4.add(c, f32x4.mul(f32x4.add(v128.load(l, 64), v128.load(r, 64)), weight));
      d = f32x4.add(d, f32x4.mul(f32x4.add(v128.load(l, 96), v128.load(r, 96)), weight));
      l += 16;
      r -= 16;
      w += 4;
    }
    v128.store(out, a);
    v128.store(out, b, 16);
    v128.store(out, c, 32);
    v128.store(out, d, 48);
    first += 128;
    out += 64;
  }
  alongFours(row, phases + ((<usize>fours) << 4), out, texels - fours);
}

/** The same of twelve taps, which Lanczos3 and a Kaiser of width 3 have: six weights in registers, two texels side by side, in
 *  0.85 of the time of `alongHalves`. */
export function alongSix(row: usize, phases: usize, out: usize, texels: i32): void {
  const twos = texels & ~1;
  const end = out + ((<usize>twos) << 4);
  const weights = <usize>load<u32>(phases, 4);
  const w0 = v128.load32_splat(weights);
  const w1 = v128.load32_splat(weights, 4);
  const w2 = v128.load32_splat(weights, 8);
  const w3 = v128.load32_splat(weights, 12);
  const w4 = v128.load32_splat(weights, 16);
  const w5 = v128.load32_splat(weights, 20);
  const zero = f32x4.splat(0);
  let l = row + <usize>load<i32>(phases, 0);
  while (out < end) {
    let a = f32x4.add(zero, f32x4.mul(f32x4.add(v128.load(l), v128.load(l, 176)), w0));
    let b = f32x4.add(zero, f32x4.mul(f32x4.add(v128.load(l, 32), v128.load(l, 208)), w0));
    a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(l, 16), v128.load(l, 160)), w1));
    b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(l, 48), v128.load(l, 192)), w1));
    a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(l, 32), v128.load(l, 144)), w2));
    b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(l, 64), v128.load(l, 176)), w2));
    a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(l, 48), v128.load(l, 128)), w3));
    b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(l, 80), v128.load(l, 160)), w3));
    a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(l, 64), v128.load(l, 112)), w4));
    b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(l, 96), v128.load(l, 144)), w4));
    a = f32x4.add(a, f32x4.mul(f32x4.add(v128.load(l, 80), v128.load(l, 96)), w5));
    b = f32x4.add(b, f32x4.mul(f32x4.add(v128.load(l, 112), v128.load(l, 128)), w5));
    v128.store(out, a);
    v128.store(out, b, 16);
    l += 64;
    out += 32;
  }
  alongFours(row, phases + ((<usize>twos) << 4), out, texels - twos);
}
