import { tapBytes } from '../kernel/taps.ts';
import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import type { Codes } from '../raster/raster.ts';
import { decodeRow, floatChannels } from './decode.ts';
import type { Engine, Pass, RowSink, RowsRun, Step } from './engine.ts';
import { type Filter, filterAcross, filterAlong, makeFilter, tapSpan } from './filter.ts';
import { sumByFours } from './fours.ts';
import { planRows, type RowOrder } from './order.ts';

/** The plain engine: every operation rounded to float32, in the order that the algorithm revision fixes. It is the
 *  readable reference for faster engines.
 *
 *    codes -> decodeRow -> node row (padded) -> filterAlong -> window of rows -> filterAcross -> node row -> ...
 */
export const plainEngine: Engine = {
  name: 'plain',
  passBytes,
  open: (pass, sink) => new PlainRun(pass, sink),
};

class PlainRun implements RowsRun {
  /** The plain coder belongs to the chain. */
  readonly coder = null;
  readonly #pass: Pass;
  readonly #source: NodeRow;
  readonly #sums: Float64Array;

  constructor(pass: Pass, sink: RowSink) {
    this.#pass = pass;
    const channels = floatChannels(pass.decoding);
    this.#sums = new Float64Array(channels);
    const nodes: NodeRow[] = [new NodeRow(0, pass.extent, channels, pass.wrap.x, 0, sink)];
    pass.steps.forEach((step, index) => {
      const from = nodes[step.from];
      const window = new Window(from, step, channels, pass.wrap.y);
      const node = new NodeRow(index + 1, step.extent, channels, pass.wrap.x, window.order.firstOut, sink);
      window.to = node;
      from.feed(window, tapSpan(step.x));
      nodes.push(node);
    });
    this.#source = nodes[0];
  }

  push(codes: Codes): void {
    decodeRow(this.#pass.decoding, codes, this.#source.floats);
    this.#publish();
  }

  pushFloats(floats: Float32Array): void {
    this.#source.floats.set(floats);
    this.#publish();
  }

  sums(): Float64Array {
    return this.#sums.slice();
  }

  #publish(): void {
    const { floats } = this.#source;
    const channels = this.#sums.length;
    const texels = floats.length / channels;
    for (let channel = 0; channel < channels; channel++) {
      this.#sums[channel] += sumByFours(texels, (x) => floats[x * channels + channel]);
    }
    this.#source.publish();
  }
}

/** The current row of a node, with room at both ends for the texels that wrapping reads. */
class NodeRow {
  readonly extent;
  readonly channels: number;
  /** Row that comes first; the others follow cyclically. */
  readonly start: number;
  floats: Float32Array;
  #padded: Float32Array;
  #left = 0;
  #right = 0;
  #y: number;
  readonly #index: number;
  readonly #wrap: Wrap;
  readonly #sink: RowSink;
  readonly #windows: Window[] = [];

  constructor(index: number, extent: Pass['extent'], channels: number, wrap: Wrap, start: number, sink: RowSink) {
    this.extent = extent;
    this.channels = channels;
    this.start = start;
    this.#index = index;
    this.#wrap = wrap;
    this.#sink = sink;
    this.#y = start;
    this.#padded = new Float32Array(extent.width * channels);
    this.floats = this.#padded;
  }

  feed(window: Window, span: { readonly first: number; readonly last: number }): void {
    this.#windows.push(window);
    this.#left = Math.max(this.#left, -span.first);
    this.#right = Math.max(this.#right, span.last - (this.extent.width - 1));
    const { channels, extent } = this;
    this.#padded = new Float32Array((this.#left + extent.width + this.#right) * channels);
    this.floats = this.#padded.subarray(this.#left * channels, (this.#left + extent.width) * channels);
  }

  /** The row in `floats` is complete: hands it on. */
  publish(): void {
    this.#sink(this.#index, this.#y, this.floats);
    this.#y = (this.#y + 1) % this.extent.height;
    if (this.#windows.length === 0) return;
    this.#pad();
    for (const window of this.#windows) window.push(this.#padded, this.#left);
  }

  #pad(): void {
    const { extent } = this;
    for (let x = -this.#left; x < 0; x++) this.#copyTexel(wrapIndex(x, extent.width, this.#wrap), x);
    for (let x = extent.width; x < extent.width + this.#right; x++) {
      this.#copyTexel(wrapIndex(x, extent.width, this.#wrap), x);
    }
  }

  #copyTexel(from: number, to: number): void {
    if (from < 0) return;
    const { channels } = this;
    const source = (this.#left + from) * channels;
    this.#padded.copyWithin((this.#left + to) * channels, source, source + channels);
  }
}

/** The rows, filtered along x, that rows of the result are made from. */
class Window {
  readonly order: RowOrder;
  to!: NodeRow;
  readonly #step: Step;
  readonly #along: Filter;
  readonly #across: Filter;
  readonly #channels: number;
  readonly #rows: Float32Array[];
  readonly #border: Float32Array;
  readonly #picked: Float32Array[] = [];
  #received = 0;
  #emitted = 0;

  constructor(from: NodeRow, step: Step, channels: number, wrap: Wrap) {
    const width = step.extent.width * channels;
    this.order = planRows(step.y, wrap, from.start);
    this.#step = step;
    this.#along = makeFilter(step.x);
    this.#across = makeFilter(step.y);
    this.#channels = channels;
    this.#rows = Array.from({ length: this.order.slots }, () => new Float32Array(width));
    this.#border = new Float32Array(wrap === 'clamp-to-border' ? width : 0);
  }

  push(padded: Float32Array, left: number): void {
    const { order } = this;
    filterAlong(this.#along, padded, left, this.#channels, this.#rows[order.slotOf(this.#received)]);
    this.#received++;
    const height = this.#step.extent.height;
    while (this.#emitted < height && order.readyAfter(this.#emitted) <= this.#received) this.#emit();
  }

  #emit(): void {
    const { order } = this;
    const y = order.outRow(this.#emitted);
    const { y: taps } = this.#step;
    const count = taps.count[y];
    for (let k = 0; k < count; k++) {
      const slot = order.slotFor(y, taps.first[y] + k);
      this.#picked[k] = slot < 0 ? this.#border : this.#rows[slot];
    }
    filterAcross(this.#across, y, this.#picked, this.to.floats);
    this.#emitted++;
    this.to.publish();
  }
}

function passBytes(pass: Pass): number {
  const channels = floatChannels(pass.decoding);
  const starts = [0];
  let bytes = pass.extent.width * channels * 4;
  for (const step of pass.steps) {
    const order = planRows(step.y, pass.wrap.y, starts[step.from]);
    starts.push(order.firstOut);
    bytes += (order.slots + 1) * step.extent.width * channels * 4;
    bytes += tapBytes(step.x) + tapBytes(step.y);
  }
  return bytes;
}
