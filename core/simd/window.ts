import { maxTaps, type Taps } from '../kernel/taps.ts';
import type { Wrap } from '../kernel/wrap.ts';
import type { Step } from '../resample/engine.ts';
import { type Filter, makeFilter } from '../resample/filter.ts';
import { planRows, type RowOrder } from '../resample/order.ts';
import { aligned, type Machine } from './machine.ts';

/** The rows, filtered along x, that rows of a result are made from; the same as the plain engine's. */
export class Window {
  readonly order: RowOrder;
  readonly #machine: Machine;
  readonly #step: Step;
  readonly #across: Filter;
  readonly #stride: number;
  readonly #phases: number;
  readonly #along: AlongFours;
  /** How many texels at the left read beyond the row's edge. */
  readonly #inner: number;
  /** For each part of a row that there was, how far it reaches. */
  readonly #ends = new Map<number, number>();
  /** Up to which texel the row that is coming in has been made, but for those at the left edge. */
  #made = 0;
  readonly #rows: number;
  readonly #rowBytes: number;
  readonly #border: number;
  readonly #picked: number;
  /** Addresses of the rows, twice over. */
  readonly #ring: number;
  readonly #weights: number;
  #received = 0;
  #emitted = 0;

  constructor(machine: Machine, step: Step, stride: number, wrap: Wrap, start: number) {
    this.order = planRows(step.y, wrap, start);
    this.#machine = machine;
    this.#step = step;
    const along = makeFilter(step.x);
    this.#across = makeFilter(step.y);
    this.#stride = stride;
    this.#rowBytes = windowRowBytes(step, stride);
    this.#rows = machine.take(this.order.slots * this.#rowBytes);
    this.#border = wrap === 'clamp-to-border' ? machine.take(this.#rowBytes) : 0;
    if (this.#border !== 0) machine.views.bytes.fill(0, this.#border, this.#border + this.#rowBytes);
    this.#picked = machine.take(maxTaps(step.y) * 4);
    this.#ring = machine.take(this.order.slots * 8);
    for (let at = 0; at < 2 * this.order.slots; at++) {
      machine.views.addresses[(this.#ring >> 2) + at] = this.#rows + (at % this.order.slots) * this.#rowBytes;
    }
    this.#weights = machine.keep(step.y.weights);
    this.#phases = writePhases(machine, along, stride);
    this.#along = alongFours(along);
    this.#inner = lastOutside(step.x) + 1;
  }

  /** Filters what can be of the row whose texel 0 is at address `row` and whose texels from `to` on are not there yet. */
  pushPart(row: number, to: number): void {
    // Where texels are no whole vectors, each is written over by the next: they are made in one go.
    if (this.#stride !== 16) return;
    const from = Math.max(this.#inner, this.#made);
    let end = this.#ends.get(to);
    if (end === undefined) {
      const { first, count } = this.#step.x;
      end = from;
      while (end < this.#step.x.to && first[end] + count[end] <= to) end++;
      this.#ends.set(to, end);
    }
    this.#filter(row, from, end);
    this.#made = Math.max(from, end);
  }

  /** Takes the row whose texel 0 is at address `row`, and says how many result rows can be made now. */
  push(row: number): number {
    const { width, height } = this.#step.extent;
    if (this.#made > 0) this.#filter(row, 0, this.#inner);
    this.#filter(row, this.#made, width);
    this.#made = 0;
    this.#received++;
    let ready = this.#emitted;
    while (ready < height && this.order.readyAfter(ready) <= this.#received) ready++;
    return ready - this.#emitted;
  }

  /** Texels `from` to `to` of the row filtered along x. */
  #filter(row: number, from: number, to: number): void {
    if (from >= to) return;
    const { kernels } = this.#machine;
    const stride = this.#stride;
    const out = this.#rows + this.order.slotOf(this.#received) * this.#rowBytes + from * stride;
    const phases = this.#phases + from * PHASE_BYTES;
    // A fifth channel goes first: the vectors that hold it reach over the four of the next texel.
    if (stride > 16) kernels.along(row + 16, phases, out + 16, to - from, stride);
    if (stride === 16) kernels[this.#along](row, phases, out, to - from);
    else kernels.along(row, phases, out, to - from, stride);
  }

  /** Writes the next result row to address `out`. */
  emit(out: number): void {
    const { kernels, views } = this.#machine;
    const { order } = this;
    const { y: taps, extent } = this.#step;
    const y = order.outRow(this.#emitted++);
    const first = taps.first[y];
    const count = taps.count[y];
    let picked = this.#picked;
    if (order.isRing && first >= 0 && first + count <= taps.from) {
      // Rows that follow each other stand so in the ring's own list.
      picked = this.#ring + (first % order.slots) * 4;
    } else {
      for (let k = 0; k < count; k++) {
        const slot = order.slotFor(y, first + k);
        views.addresses[(picked >> 2) + k] = slot < 0 ? this.#border : this.#rows + slot * this.#rowBytes;
      }
    }
    const across = this.#across.symmetric[y] === 1 ? kernels.acrossEqual : kernels.acrossPairs;
    across(picked, this.#weights + taps.start[y] * 4, count, out, extent.width * (this.#stride / 4));
  }
}

/** Bytes that a window takes. */
export function windowBytes(step: Step, stride: number, wrap: Wrap, slots: number): number {
  const rows = slots * windowRowBytes(step, stride) + (wrap === 'clamp-to-border' ? windowRowBytes(step, stride) : 0);
  const { x, y } = step;
  return (
    rows +
    aligned(maxTaps(y) * 4) +
    aligned(slots * 8) +
    aligned(y.weights.byteLength) +
    aligned(x.weights.byteLength) +
    aligned(x.to * PHASE_BYTES)
  );
}

/** Whole vectors are read and written behind a row; an odd number of lines keeps rows out of each other's way in a cache. */
function windowRowBytes({ extent }: Step, stride: number): number {
  const lines = Math.ceil((extent.width * stride) / 64) + 1;
  return (lines | 1) * 64;
}

/** Drawn in kernels/along.ts. */
const PHASE_BYTES = 16;

function writePhases(machine: Machine, { taps, symmetric }: Filter, stride: number): number {
  const weights = machine.keep(taps.weights);
  const phases = machine.take(taps.to * PHASE_BYTES);
  const { integers } = machine.views;
  for (let phase = 0, at = phases >> 2; phase < taps.to; phase++) {
    integers[at++] = taps.first[phase] * stride;
    integers[at++] = weights + taps.start[phase] * 4;
    integers[at++] = taps.count[phase];
    integers[at++] = symmetric[phase];
  }
  return phases;
}

/** The kernels that filter four channels along x: all do the same, each for some counts of taps. */
type AlongFours = 'alongFours' | 'alongSixes' | 'alongTens' | 'alongTwelves' | 'alongHalves' | 'alongSix';

function alongFours(filter: Filter): AlongFours {
  const { count } = filter.taps;
  if (isHalves(filter)) return count[0] === 12 ? 'alongSix' : 'alongHalves';
  const [least, most] = [count.reduce((a, b) => Math.min(a, b)), maxTaps(filter.taps)];
  if (least === 6 && most === 6) return 'alongSixes';
  if (least >= 8 && most <= 10) return 'alongTens';
  return least === 12 && most <= 13 ? 'alongTwelves' : 'alongFours';
}

/** Whether every phase is the first, two texels on, symmetric and of an even count. */
function isHalves({ taps, symmetric }: Filter): boolean {
  if (symmetric[0] !== 1 || taps.count[0] % 2 === 1) return false;
  for (let phase = 1; phase < taps.to; phase++) {
    const same = taps.start[phase] === taps.start[0] && taps.count[phase] === taps.count[0];
    if (!same || taps.first[phase] !== taps.first[0] + 2 * phase) return false;
  }
  return true;
}

/** The last phase that reads before texel 0; -1 where none does. */
function lastOutside({ first, to }: Taps): number {
  let last = to - 1;
  while (last >= 0 && first[last] >= 0) last--;
  return last;
}
