import { type Wrap, wrapIndex } from '../kernel/wrap.ts';
import type { Codes, Extent } from '../raster/raster.ts';
import { floatChannels } from '../resample/decode.ts';
import type { Pass, RowSink, RowsRun } from '../resample/engine.ts';
import { tapSpan } from '../resample/filter.ts';
import { planRows } from '../resample/order.ts';
import { coderBytes, SimdCoder, takesEncoding } from './coder.ts';
import { Decoder, decoderBytes } from './decoder.ts';
import { aligned, type Machine } from './machine.ts';
import { Window, windowBytes } from './window.ts';

/** A pass on a machine: rows go the way that plain.ts draws, through memory that is taken when the pass opens. */
export class SimdRun implements RowsRun {
  readonly coder: SimdCoder | null;
  readonly #machine: Machine;
  readonly #decoder: Decoder;
  readonly #channels: number;
  readonly #width: number;
  readonly #source: NodeRow;
  readonly #done: () => void;
  #missing: number;

  /** `done` is called after the last row. */
  constructor(machine: Machine, pass: Pass, sink: RowSink, done: () => void) {
    const { decoding, wrap, steps } = pass;
    this.#machine = machine;
    this.#done = done;
    this.#missing = pass.extent.height;
    this.#width = pass.extent.width;
    this.#channels = floatChannels(decoding);
    const stride = this.#channels * 4;
    this.#decoder = new Decoder(machine, decoding, pass.extent.width);
    const spans = spansOf(pass);
    const nodes = [new NodeRow(machine, 0, pass.extent, stride, wrap.x, spans[0], 0, sink)];
    steps.forEach((step, index) => {
      const from = nodes[step.from];
      const window = new Window(machine, step, stride, wrap.y, from.start);
      const { firstOut } = window.order;
      const node = new NodeRow(machine, index + 1, step.extent, stride, wrap.x, spans[index + 1], firstOut, sink);
      from.windows.push([window, node]);
      nodes.push(node);
    });
    this.#source = nodes[0];
    const { encoding } = pass;
    this.coder = encoding && takesEncoding(encoding) ? new SimdCoder(machine, encoding, widest(pass)) : null;
  }

  push(codes: Codes): void {
    const { row } = this.#source;
    this.#decoder.take(codes);
    // What has just been decoded is filtered along x while it lies in the nearest cache.
    for (let from = 0; from < this.#width; from += CHUNK_TEXELS) {
      const to = Math.min(this.#width, from + CHUNK_TEXELS);
      this.#decoder.decode(row, from, to);
      if (to < this.#width) this.#source.publishPart(to);
    }
    this.#publish();
  }

  pushFloats(floats: Float32Array): void {
    this.#machine.views.floats.set(floats, this.#source.row >> 2);
    this.#decoder.sum(this.#source.row, this.#width);
    this.#publish();
  }

  sums(): Float64Array {
    return this.#decoder.sums.slice();
  }

  #publish(): void {
    this.#decoder.endRow();
    this.#source.publish();
    this.#missing--;
    if (this.#missing > 0) return;
    // The machine may go to another pass.
    this.#done();
  }
}

/** 8 KiB of floats, four channels: a quarter of the smallest nearest cache that is still about. A multiple of 4. */
const CHUNK_TEXELS = 512;

/** Bytes that a run takes. */
export function runBytes(pass: Pass): number {
  const stride = floatChannels(pass.decoding) * 4;
  const spans = spansOf(pass);
  const starts = [0];
  let bytes = decoderBytes(pass.decoding, pass.extent.width) + nodeBytes(pass.extent, stride, spans[0]);
  pass.steps.forEach((step, index) => {
    const { slots, firstOut } = planRows(step.y, pass.wrap.y, starts[step.from]);
    starts.push(firstOut);
    bytes += windowBytes(step, stride, pass.wrap.y, slots) + nodeBytes(step.extent, stride, spans[index + 1]);
  });
  const { encoding } = pass;
  return bytes + (encoding && takesEncoding(encoding) ? coderBytes(encoding, widest(pass)) : 0);
}

function widest({ extent, steps }: Pass): number {
  return Math.max(extent.width, ...steps.map((step) => step.extent.width));
}

/** The current row of a node, with room at both ends for the texels that wrapping reads. */
class NodeRow {
  /** Address of texel 0. */
  readonly row: number;
  /** Row that comes first; the others follow cyclically. */
  readonly start: number;
  readonly windows: (readonly [Window, NodeRow])[] = [];
  readonly #machine: Machine;
  readonly #index: number;
  readonly #extent: Extent;
  readonly #stride: number;
  readonly #sink: RowSink;
  readonly #pads: number;
  readonly #padCount: number;
  #floats: Float32Array | null = null;
  #y: number;

  constructor(
    machine: Machine,
    index: number,
    extent: Extent,
    stride: number,
    wrap: Wrap,
    span: Span,
    start: number,
    sink: RowSink,
  ) {
    this.#machine = machine;
    this.#index = index;
    this.#extent = extent;
    this.#stride = stride;
    this.#sink = sink;
    this.start = start;
    this.#y = start;
    this.row = machine.take(rowBytes(extent, stride, span)) + aligned(span.left * stride);
    this.#padCount = span.left + span.right;
    this.#pads = machine.take(this.#padCount * 8);
    const { addresses } = machine.views;
    let at = this.#pads >> 2;
    const pad = (x: number): void => {
      const from = wrapIndex(x, extent.width, wrap);
      addresses[at++] = this.row + x * stride;
      addresses[at++] = from < 0 ? 0 : this.row + from * stride;
    };
    for (let x = -span.left; x < 0; x++) pad(x);
    for (let x = extent.width; x < extent.width + span.right; x++) pad(x);
  }

  /** The row is there up to texel `to`. */
  publishPart(to: number): void {
    for (const [window] of this.windows) window.pushPart(this.row, to);
  }

  /** The row is complete: hands it on. */
  publish(): void {
    const { kernels, views } = this.#machine;
    // No memory is taken once rows come.
    this.#floats ??= views.floats.subarray(this.row >> 2, (this.row + this.#extent.width * this.#stride) >> 2);
    this.#sink(this.#index, this.#y, this.#floats);
    this.#y = (this.#y + 1) % this.#extent.height;
    if (this.windows.length === 0) return;
    kernels.pad(this.#pads, this.#padCount, this.#stride);
    for (const [window, to] of this.windows) {
      for (let ready = window.push(this.row); ready > 0; ready--) {
        window.emit(to.row);
        to.publish();
      }
    }
  }
}

/** Texels that are read before texel 0 and behind the last. */
interface Span {
  readonly left: number;
  readonly right: number;
}

/** Of the source and of each step's result. */
function spansOf({ extent, steps }: Pass): Span[] {
  const widths = [extent.width, ...steps.map((step) => step.extent.width)];
  return widths.map((width, node) => {
    const spans = steps.filter((step) => step.from === node).map((step) => tapSpan(step.x));
    return {
      left: Math.max(0, ...spans.map(({ first }) => -first)),
      right: Math.max(0, ...spans.map(({ last }) => last - (width - 1))),
    };
  });
}

function nodeBytes(extent: Extent, stride: number, span: Span): number {
  return aligned(rowBytes(extent, stride, span)) + aligned((span.left + span.right) * 8);
}

/** Two lines more: whole vectors are read and written behind the row, and behind what wrapping reads. */
function rowBytes(extent: Extent, stride: number, { left, right }: Span): number {
  return aligned(left * stride) + (extent.width + right) * stride + 128;
}
