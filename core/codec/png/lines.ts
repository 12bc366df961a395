import { InflateError } from '../../port.ts';
import { refuse } from '../../problem.ts';
import type { FilterReader, RowFilters } from './filters.ts';
import { type Layout, type Pass, rowByteCount } from './layout.ts';
import { LAST_FILTER } from './unfilter.ts';

/** One unfiltered row of a pass; `row` counts within it. The view is valid until the next line is asked for. */
export interface Line {
  readonly pass: Pass;
  readonly row: number;
  readonly bytes: Uint8Array;
}

/** Cuts inflated image data into lines and undoes their filters, holding two lines. Throws Refusal where the data is
 *  damaged, shorter than the layout or longer. */
export async function* readLines(
  inflated: AsyncIterable<Uint8Array>,
  layout: Layout,
  filters: RowFilters,
): AsyncGenerator<Line> {
  const longest = Math.max(...layout.passes.map(({ extent }) => rowByteCount(extent.width, layout.texelBits)));
  const reader = filters.openReader(layout.filterStep, longest);
  let received = 0;
  try {
    const cutter = new Cutter(layout, reader);
    for await (const piece of inflated) {
      received += piece.length;
      for (let taken = 0; taken < piece.length; ) {
        if (cutter.finished) refuse('png-surplus', { expected: layout.byteCount });
        taken += cutter.take(piece, taken);
        const line = cutter.line();
        if (line !== null) yield line;
      }
    }
  } catch (error) {
    if (error instanceof InflateError) refuseFault(error, received, layout.byteCount);
    throw error;
  } finally {
    reader.close();
  }
  if (received < layout.byteCount) refuse('png-truncated', { found: received, expected: layout.byteCount });
}

/** Fills one line after the other. The byte before a row takes its filter's number. */
class Cutter {
  readonly #layout: Layout;
  readonly #reader: FilterReader;
  #passIndex = 0;
  #row = 0;
  #filled: number;
  #end: number;

  constructor(layout: Layout, reader: FilterReader) {
    this.#layout = layout;
    this.#reader = reader;
    this.#filled = layout.filterStep - 1;
    this.#end = layout.filterStep + rowByteCount(layout.passes[0].extent.width, layout.texelBits);
  }

  get finished(): boolean {
    return this.#passIndex === this.#layout.passes.length;
  }

  /** Takes what the current line lacks from `piece`, from `start` on, and gives how many bytes that were. */
  take(piece: Uint8Array, start: number): number {
    const count = Math.min(this.#end - this.#filled, piece.length - start);
    this.#reader.row.set(piece.subarray(start, start + count), this.#filled);
    this.#filled += count;
    return count;
  }

  /** The current line where it is full, and moves on to the next. */
  line(): Line | null {
    if (this.#filled < this.#end) return null;
    const step = this.#layout.filterStep;
    const pass = this.#layout.passes[this.#passIndex];
    const [row, end] = [this.#row, this.#end];
    const line = this.#reader.row;
    const filter = line[step - 1];
    if (filter > LAST_FILTER) refuse('png-filter', { row: pass.y + row * pass.dy, found: filter });
    this.#reader.undo(filter, end);
    this.#advance();
    return { pass, row, bytes: line.subarray(step, end) };
  }

  #advance(): void {
    const { passes, filterStep, texelBits } = this.#layout;
    this.#reader.advance();
    this.#filled = filterStep - 1;
    this.#row += 1;
    if (this.#row < passes[this.#passIndex].extent.height) return;
    this.#row = 0;
    this.#passIndex += 1;
    if (this.finished) return;
    this.#reader.restart();
    this.#end = filterStep + rowByteCount(passes[this.#passIndex].extent.width, texelBits);
  }
}

function refuseFault(error: InflateError, received: number, expected: number): never {
  if (error.fault === 'surplus' && received === expected) refuse('png-surplus', { expected });
  // A stream that lacks no more than its check sum at the end cannot be trusted either.
  if (error.fault === 'corrupt' || received === expected) refuse('png-corrupt-data', { found: received, expected });
  refuse('png-truncated', { found: received, expected });
}
