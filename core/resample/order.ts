import type { Taps } from '../kernel/taps.ts';
import { type Wrap, wrapIndex } from '../kernel/wrap.ts';

/** In which order rows of a result can be made while rows of its source arrive once, and how many of them must be kept.
 *
 *  Rows arrive cyclically from `start`. With `repeat` the first rows of a result need the last ones of the source, so
 *  the result begins where it first can and ends with those rows; the rows that it will need again are kept aside.
 *
 *    slots: | kept head rows | ring of the latest rows |
 */
export interface RowOrder {
  /** Rows that must be held. */
  readonly slots: number;
  /** Row of the result that is made first; the others follow cyclically. */
  readonly firstOut: number;
  /** Whether the row of index n is always in slot n modulo `slots`. */
  readonly isRing: boolean;
  /** Where the n-th arriving row is stored. */
  slotOf(received: number): number;
  /** How many rows must have arrived before the n-th result row can be made. */
  readyAfter(emitted: number): number;
  /** The n-th result row's y. */
  outRow(emitted: number): number;
  /** Where the row is that tap `index` (unwrapped) of result row `y` reads; -1 is the border. */
  slotFor(y: number, index: number): number;
}

export function planRows(taps: Taps, wrap: Wrap, start: number): RowOrder {
  if (wrap === 'repeat') return cyclic(taps, start) ?? whole(taps, wrap, start);
  return inOrder(taps, wrap);
}

/** Every wrap but repeat: rows arrive from the top and results leave from the top. */
function inOrder(taps: Taps, wrap: Wrap): RowOrder {
  const ready = new Int32Array(taps.to);
  let slots = 1;
  let highest = 0;
  for (let y = 0; y < taps.to; y++) {
    if (taps.first[y] >= 0 && taps.first[y] + taps.count[y] <= taps.from) {
      // Nothing is wrapped.
      highest = Math.max(highest, taps.first[y] + taps.count[y] - 1);
      ready[y] = highest + 1;
      slots = Math.max(slots, ready[y] - taps.first[y]);
      continue;
    }
    let lowest = taps.from;
    for (let k = 0; k < taps.count[y]; k++) {
      const row = wrapIndex(taps.first[y] + k, taps.from, wrap);
      if (row < 0) continue;
      lowest = Math.min(lowest, row);
      highest = Math.max(highest, row);
    }
    ready[y] = highest + 1;
    slots = Math.max(slots, ready[y] - lowest);
  }
  return {
    slots,
    firstOut: 0,
    isRing: true,
    slotOf: (received) => received % slots,
    readyAfter: (emitted) => ready[emitted],
    outRow: (emitted) => emitted,
    slotFor: (_, index) => {
      const row = wrapIndex(index, taps.from, wrap);
      return row < 0 ? -1 : row % slots;
    },
  };
}

/** Repeat, with a head and a ring; null where that would hold as much as the whole source, or a result row reads further
 *  than once round. */
function cyclic(taps: Taps, start: number): RowOrder | null {
  const { from: height, to: outHeight, first, count } = taps;
  let firstOut = 0;
  while (firstOut < outHeight && first[firstOut] < start) firstOut++;
  if (firstOut === outHeight) return null;

  const heads = firstOut === 0 ? 0 : Math.max(0, first[firstOut - 1] + count[firstOut - 1] - start);
  const outRow = (emitted: number): number => (firstOut + emitted) % outHeight;
  // Position of a result row's first tap, counted from the first row that arrives.
  const position = (emitted: number): number => {
    const y = outRow(emitted);
    return first[y] + (y < firstOut ? height : 0) - start;
  };
  const readyAfter = (emitted: number): number => Math.min(height, position(emitted) + count[outRow(emitted)]);

  let ring = 1;
  for (let emitted = 0; emitted < outHeight; emitted++) {
    const at = position(emitted);
    if (at < 0 || count[outRow(emitted)] > height) return null;
    ring = Math.max(ring, readyAfter(emitted) - Math.max(at, heads));
  }
  if (heads + ring >= height) return null;

  const slotOf = (received: number): number => (received < heads ? received : heads + (received % ring));
  return {
    slots: heads + ring,
    firstOut,
    isRing: false,
    slotOf,
    readyAfter,
    outRow,
    slotFor: (y, index) => {
      const at = index + (y < firstOut ? height : 0) - start;
      return slotOf(at < height ? at : at - height);
    },
  };
}

/** The whole source is held, each row at its own place. */
function whole(taps: Taps, wrap: Wrap, start: number): RowOrder {
  return {
    slots: taps.from,
    firstOut: 0,
    isRing: false,
    slotOf: (received) => (start + received) % taps.from,
    readyAfter: () => taps.from,
    outRow: (emitted) => emitted,
    slotFor: (_, index) => wrapIndex(index, taps.from, wrap),
  };
}
