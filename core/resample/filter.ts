import { isSymmetric, type Taps } from '../kernel/taps.ts';

// The two inner loops. Sums run in float32 from the outermost pair of taps inward: a symmetric phase adds (l + r) * w,
// any other l * wl + r * wr; a middle tap comes last. This order is part of the algorithm revision.

const round = Math.fround;

/** Taps with what the loops ask of each phase. */
export interface Filter {
  readonly taps: Taps;
  /** 1 where a phase's weights read the same from both ends. */
  readonly symmetric: Uint8Array;
}

export function makeFilter(taps: Taps): Filter {
  const { start, to } = taps;
  const symmetric = new Uint8Array(to);
  for (let phase = 0; phase < to; phase++) {
    // Texels of one phase share their weights.
    const same = phase > 0 && start[phase] === start[phase - 1];
    symmetric[phase] = same ? symmetric[phase - 1] : isSymmetric(taps, phase) ? 1 : 0;
  }
  return { taps, symmetric };
}

/** The first texel and the last that any phase reads, unwrapped. */
export function tapSpan(taps: Taps): { readonly first: number; readonly last: number } {
  let first = taps.first[0];
  let last = first;
  for (let phase = 0; phase < taps.to; phase++) {
    first = Math.min(first, taps.first[phase]);
    last = Math.max(last, taps.first[phase] + taps.count[phase] - 1);
  }
  return { first, last };
}

/** Filters one row along x. `padded` holds `left` texels before texel 0; `out` holds `taps.to` texels. */
export function filterAlong(
  filter: Filter,
  padded: Float32Array,
  left: number,
  channels: number,
  out: Float32Array,
): void {
  const { taps, symmetric } = filter;
  const { first, count, start, weights } = taps;
  for (let phase = 0; phase < taps.to; phase++) {
    const pairs = count[phase] >> 1;
    const w0 = start[phase];
    const w1 = w0 + count[phase] - 1;
    const left0 = (left + first[phase]) * channels;
    const right0 = left0 + (count[phase] - 1) * channels;
    const odd = count[phase] & 1;
    for (let channel = 0; channel < channels; channel++) {
      let l = left0 + channel;
      let r = right0 + channel;
      let sum = 0;
      if (symmetric[phase] === 1) {
        for (let k = 0; k < pairs; k++) {
          sum = round(sum + round(round(padded[l] + padded[r]) * weights[w0 + k]));
          l += channels;
          r -= channels;
        }
      } else {
        for (let k = 0; k < pairs; k++) {
          sum = round(sum + round(round(padded[l] * weights[w0 + k]) + round(padded[r] * weights[w1 - k])));
          l += channels;
          r -= channels;
        }
      }
      if (odd === 1) sum = round(sum + round(padded[l] * weights[w0 + pairs]));
      out[phase * channels + channel] = sum;
    }
  }
}

/** Filters across rows: `rows[k]` is what tap k of `phase` reads. */
export function filterAcross(filter: Filter, phase: number, rows: readonly Float32Array[], out: Float32Array): void {
  const { taps, symmetric } = filter;
  const count = taps.count[phase];
  const pairs = count >> 1;
  const w0 = taps.start[phase];
  const w1 = w0 + count - 1;
  out.fill(0);
  for (let k = 0; k < pairs; k++) {
    if (symmetric[phase] === 1) addEqual(rows[k], rows[count - 1 - k], taps.weights[w0 + k], out);
    else addPair(rows[k], rows[count - 1 - k], taps.weights[w0 + k], taps.weights[w1 - k], out);
  }
  if (count & 1) addOne(rows[pairs], taps.weights[w0 + pairs], out);
}

function addEqual(l: Float32Array, r: Float32Array, weight: number, out: Float32Array): void {
  for (let i = 0; i < out.length; i++) out[i] = round(out[i] + round(round(l[i] + r[i]) * weight));
}

function addPair(l: Float32Array, r: Float32Array, wl: number, wr: number, out: Float32Array): void {
  for (let i = 0; i < out.length; i++) out[i] = round(out[i] + round(round(l[i] * wl) + round(r[i] * wr)));
}

function addOne(row: Float32Array, weight: number, out: Float32Array): void {
  for (let i = 0; i < out.length; i++) out[i] = round(out[i] + round(row[i] * weight));
}
