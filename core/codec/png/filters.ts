import { newAdaptiveFilter } from './filter.ts';
import { unfilterRow } from './unfilter.ts';

/** Undoes and chooses the row filters of PNG. Every one makes the same bytes; they differ in time. */
export interface RowFilters {
  /** Room for reading rows of up to `longest` bytes, with `step` bytes from one to the one that it is predicted from: 1, 2, 3,
   *  4, 6 or 8. */
  openReader(step: number, longest: number): FilterReader;
  /** Room for writing rows of `bytes` bytes. */
  openWriter(step: number, bytes: number): FilterWriter;
}

export interface FilterReader {
  /** `step` bytes, then the row that is to be filled in. */
  readonly row: Uint8Array;
  /** Undoes filter 0..4 of the row, which stops at `end`, counted from the start of `row`. */
  undo(type: number, end: number): void;
  /** The row is now the one above the next. What stood in it stays until the next `undo`. */
  advance(): void;
  /** The next row is a first one: above it are zeros. */
  restart(): void;
  /** Nothing is read any more. */
  close(): void;
}

export interface FilterWriter {
  /** The row that is to be filled in. */
  readonly row: Uint8Array;
  /** The row's filter, chosen, then the row through it; valid until the next `write`. The next row lies below this one. */
  write(): Uint8Array;
  /** Swaps the bytes of each pair in the row: codes of 16 bits in the machine's order become the file's. */
  swap(): void;
  close(): void;
}

/** The readable reference, and what runs where WebAssembly does not. */
export const plainFilters: RowFilters = {
  openReader(step, longest) {
    let row = new Uint8Array(step + longest);
    let above = new Uint8Array(step + longest);
    let fresh = false;
    return {
      get row() {
        return row;
      },
      undo(type, end) {
        if (fresh) above.fill(0);
        fresh = false;
        // The front holds the filter's number; left of the first texel are zeros.
        row.fill(0, 0, step);
        unfilterRow(type, row, above, step, end);
      },
      advance() {
        [row, above] = [above, row];
      },
      restart() {
        fresh = true;
      },
      close() {},
    };
  },
  openWriter(step, bytes) {
    const filter = newAdaptiveFilter(bytes, step);
    let row = new Uint8Array(bytes);
    let above = new Uint8Array(bytes);
    return {
      get row() {
        return row;
      },
      write() {
        const filtered = filter(row, above);
        [above, row] = [row, above];
        return filtered;
      },
      swap() {
        for (let at = 0; at < row.length; at += 2) [row[at], row[at + 1]] = [row[at + 1], row[at]];
      },
      close() {},
    };
  },
};
