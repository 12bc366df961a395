import { allows, type Kernel, type KernelParams } from './table.ts';

/** Taps of one axis: for each target texel the first source index and its weights.
 *
 *    first[j] .. first[j] + count[j] - 1   source texels, unwrapped (may lie outside 0..from-1)
 *    weights[start[j] + k]                 weight of source texel first[j] + k, an integer / 2^24
 *
 *  The weights of a target texel sum to exactly 1. Target texels of one phase share their weights (equal `start`).
 */
export interface Taps {
  readonly from: number;
  readonly to: number;
  readonly first: Int32Array;
  readonly count: Int32Array;
  readonly start: Int32Array;
  readonly weights: Float32Array;
}

/** Weights are whole multiples of 1 / UNIT, even ones above 1: float32 holds each exactly, and sums of them up to 1. */
const UNIT = 16777216;

const MAX_EXTENT = 16384;

/** Taps that make `to` texels from `from`, both integers 1..16384, for kernels of the kinds weights, area and point. Equal
 *  extents are a copy whatever the kernel. `params` holds a value for each of the kernel's parameters. Throws RangeError for
 *  extents and parameters out of range, TypeError for a kernel that has no taps. Both axes of a square, and thousands of textures
 *  of a few sizes, share what was made once. */
export function buildTaps(kernel: Kernel, params: KernelParams, from: number, to: number): Taps {
  checkExtent(from, 'from');
  checkExtent(to, 'to');
  checkParams(kernel, params);
  const key = [from, to, ...kernel.params.map(({ name }) => params[name])].join(' ');
  const shelf = shelves.get(kernel) ?? new Map<string, Taps>();
  shelves.set(kernel, shelf);
  const taps = shelf.get(key) ?? makeTaps(kernel, params, from, to);
  // A few sizes are all that most projects have; what is large is soon made beside what is made with it.
  if (tapBytes(taps) > KEPT_BYTES) return taps;
  if (shelf.size === KEPT_TAPS) shelf.clear();
  shelf.set(key, taps);
  return taps;
}

const shelves = new WeakMap<Kernel, Map<string, Taps>>();

/** Per kernel: sizes from 1 to 2048 on both axes, several times over. Together they hold a few megabytes at most. */
const KEPT_TAPS = 64;
const KEPT_BYTES = 2 ** 15;

function makeTaps(kernel: Kernel, params: KernelParams, from: number, to: number): Taps {
  if (from === to) return pointTaps(from, to);
  switch (kernel.kind) {
    case 'point':
      return pointTaps(from, to);
    case 'area':
      return to > from && kernel.magnified === 'nearest'
        ? pointTaps(from, to)
        : phaseTaps(from, to, overlaps(from, to));
    case 'weights': {
      const support = kernel.support(params);
      return phaseTaps(
        from,
        to,
        stretched(from, to, support, (x) => kernel.weight(x, params)),
      );
    }
    case 'slopes':
    case 'footprint':
    case 'scaler':
      throw new TypeError(`Expected a kernel of weights, area or point for kernel but received ${kernel.name}`);
  }
}

/** The most taps that one target texel has. */
export function maxTaps(taps: Taps): number {
  return taps.count.reduce((most, count) => Math.max(most, count), 0);
}

/** Bytes that the arrays of these taps hold. */
export function tapBytes(taps: Taps): number {
  return taps.first.byteLength + taps.count.byteLength + taps.start.byteLength + taps.weights.byteLength;
}

/** Whether the weights of target texel `target` read the same from both ends. */
export function isSymmetric(taps: Taps, target: number): boolean {
  let low = taps.start[target];
  let high = low + taps.count[target] - 1;
  while (low < high) if (taps.weights[low++] !== taps.weights[high--]) return false;
  return true;
}

/** Unnormalised taps of one target texel. `weights` belongs to the receiver. */
interface RawTaps {
  readonly first: number;
  readonly weights: Float64Array;
}

/** floor((j + 1/2) from / to), in integers. */
function pointTaps(from: number, to: number): Taps {
  const first = Int32Array.from({ length: to }, (_, j) => Math.floor(((2 * j + 1) * from) / (2 * to)));
  return {
    from,
    to,
    first,
    count: new Int32Array(to).fill(1),
    start: new Int32Array(to),
    weights: Float32Array.of(1),
  };
}

/** Phases repeat after `period` target texels, which cover `step` source texels, and phase period-1-j is phase j reversed:
 *  half a period is computed, the rest are mirrored and moved copies.
 *
 *    target   0 1 2 | 3 4 5 | 6 7 8      period 3
 *    phase    a b a'| a b a'| a b a'     step: source texels of one period
 */
function phaseTaps(from: number, to: number, rawOf: (target: number) => RawTaps): Taps {
  const divisor = greatestCommonDivisor(from, to);
  const period = to / divisor;
  const step = from / divisor;
  const phases = new Array<IntegerTaps>(period);
  for (let j = 0; 2 * j < period; j++) {
    const mirror = period - 1 - j;
    phases[j] = normalised(rawOf(j), j === mirror);
    if (j !== mirror) phases[mirror] = reversed(phases[j], step);
  }
  const starts = new Int32Array(period);
  let length = 0;
  for (let j = 0; j < period; j++) {
    starts[j] = length;
    length += phases[j].units.length;
  }
  const weights = new Float32Array(length);
  phases.forEach((phase, j) => {
    phase.units.forEach((units, k) => {
      weights[starts[j] + k] = units / UNIT;
    });
  });
  const first = new Int32Array(to);
  const count = new Int32Array(to);
  const start = new Int32Array(to);
  for (let j = 0; j < to; j++) {
    const phase = j % period;
    first[j] = phases[phase].first + ((j - phase) / period) * step;
    count[j] = phases[phase].units.length;
    start[j] = starts[phase];
  }
  return { from, to, first, count, start, weights };
}

/** Taps as whole multiples of 1 / UNIT that sum to UNIT. */
interface IntegerTaps {
  readonly first: number;
  readonly units: Int32Array;
}

/** Scales to UNIT, rounds down, and gives what is missing to the largest fractions, one each. In a symmetric phase the two
 *  taps of a mirrored pair have equal fractions and take together; what is odd goes to the middle tap. A tap above 1 (sharply
 *  cut sincs have some) is rounded down to an even multiple and takes none. Taps that come out as 0 are dropped at both ends. */
function normalised(raw: RawTaps, symmetric: boolean): IntegerTaps {
  const { weights } = raw;
  const last = weights.length - 1;
  const sum = weights.reduce((total, weight) => total + weight, 0);
  const units = new Int32Array(weights.length);
  const fractions = new Float64Array(weights.length);
  let missing = UNIT;
  for (let k = 0; k <= last; k++) {
    const exact = (weights[k] / sum) * UNIT;
    units[k] = exact > UNIT ? 2 * Math.floor(exact / 2) : Math.floor(exact);
    fractions[k] = exact - units[k];
    missing -= units[k];
  }
  if (symmetric && missing % 2 === 1) {
    units[last / 2]++;
    missing--;
  }
  const each = symmetric ? 2 : 1;
  const order = Array.from({ length: symmetric ? (last + 1) >> 1 : last + 1 }, (_, k) => k)
    .filter((k) => units[k] < UNIT)
    .sort((a, b) => fractions[b] - fractions[a] || a - b);
  for (let rank = 0; rank * each < missing; rank++) {
    // One more round is needed only where a tap above 1 left two units.
    const k = order[rank % order.length];
    units[k]++;
    if (symmetric) units[last - k]++;
  }
  return trimmed(raw.first, units);
}

function trimmed(first: number, units: Int32Array): IntegerTaps {
  let low = 0;
  let high = units.length;
  while (units[low] === 0) low++;
  while (units[high - 1] === 0) high--;
  return { first: first + low, units: units.slice(low, high) };
}

/** The taps of phase period-1-j: source texel i becomes step-1-i. */
function reversed(taps: IntegerTaps, step: number): IntegerTaps {
  return { first: step - taps.first - taps.units.length, units: taps.units.slice().reverse() };
}

/** Area that target texel j shares with source texel i, in units of 1 / (from to) of the axis: integers that sum to `from`. */
function overlaps(from: number, to: number): (target: number) => RawTaps {
  return (j) => {
    const first = Math.floor((j * from) / to);
    const end = Math.ceil(((j + 1) * from) / to);
    const weights = Float64Array.from({ length: end - first }, (_, k) => {
      const i = first + k;
      return Math.min((i + 1) * to, (j + 1) * from) - Math.max(i * to, j * from);
    });
    return { first, weights };
  };
}

/** Weights of a kernel whose unit of length is the larger of the two texels. The distance of source texel i from target
 *  texel j is a whole multiple of 1 / (2 max(from, to)), so it is exact up to one division. */
function stretched(
  from: number,
  to: number,
  support: number,
  weight: (x: number) => number,
): (target: number) => RawTaps {
  const unit = 2 * Math.max(from, to);
  return (j) => {
    const distance = (i: number) => ((2 * i + 1) * to - (2 * j + 1) * from) / unit;
    // Starts one texel outside on either side of the real bounds, then walks in: the division above decides alone.
    const reach = (support * unit) / (2 * to);
    const center = ((2 * j + 1) * from) / (2 * to) - 0.5;
    let first = Math.floor(center - reach) - 1;
    let end = Math.ceil(center + reach) + 2;
    while (Math.abs(distance(first)) >= support) first++;
    while (Math.abs(distance(end - 1)) >= support) end--;
    return { first, weights: Float64Array.from({ length: end - first }, (_, k) => weight(distance(first + k))) };
  };
}

function greatestCommonDivisor(a: number, b: number): number {
  return b === 0 ? a : greatestCommonDivisor(b, a % b);
}

function checkExtent(value: number, name: string): void {
  if (Number.isInteger(value) && value >= 1 && value <= MAX_EXTENT) return;
  throw new RangeError(`Expected integer 1..${MAX_EXTENT} for ${name} but received ${value}`);
}

function checkParams(kernel: Kernel, params: KernelParams): void {
  for (const param of kernel.params) {
    const value = params[param.name];
    if (value !== undefined && allows(param, value)) continue;
    const expected = param.allowed?.join(', ') ?? `${param.min}..${param.max}`;
    throw new RangeError(`Expected ${expected} for ${kernel.name}.${param.name} but received ${value}`);
  }
}
