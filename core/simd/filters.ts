import type { FilterReader, FilterWriter, RowFilters } from '../codec/png/filters.ts';
import { Machine } from './machine.ts';

/** Row filters by the kernels, compiled: what the plain ones make, byte for byte. */
export function createFilters(module: WebAssembly.Module): RowFilters {
  const idle: Machine[] = [];
  const borrow = (): Machine => idle.pop() ?? new Machine(module);
  const giveBack = (machine: Machine): void => {
    machine.giveBack();
    if (idle.length < IDLE_MACHINES) idle.push(machine);
  };
  return {
    openReader: (step, longest) => openReader(borrow(), step, longest, giveBack),
    openWriter: (step, bytes) => openWriter(borrow(), step, bytes, giveBack),
  };
}

/** A reader and the writers of a few levels; each machine is some rows large. */
const IDLE_MACHINES = 4;

/** In front of each row: what lies left of it. */
const FRONT = 16;

/** Whole vectors are read and written behind a row. */
const BEHIND = 16;

function openReader(
  machine: Machine,
  step: number,
  longest: number,
  giveBack: (machine: Machine) => void,
): FilterReader {
  const { kernels } = machine;
  let [row, above] = [0, 0].map(() => machine.take(FRONT + longest + BEHIND) + FRONT);
  const { bytes } = machine.views;
  bytes.fill(0, above, above + longest);
  const views = new Map([row, above].map((at) => [at, bytes.subarray(at - step, at + longest)]));
  let fresh = false;
  let open = true;
  return {
    get row() {
      return views.get(row)!;
    },
    undo(type, end) {
      if (fresh) bytes.fill(0, above, above + longest);
      fresh = false;
      kernels.unfilter(type, row, above, step, end - step);
    },
    advance() {
      [row, above] = [above, row];
    },
    restart() {
      fresh = true;
    },
    close() {
      if (open) giveBack(machine);
      open = false;
    },
  };
}

function openWriter(
  machine: Machine,
  step: number,
  rowBytes: number,
  giveBack: (machine: Machine) => void,
): FilterWriter {
  const { kernels } = machine;
  let [row, above] = [0, 0].map(() => machine.take(FRONT + rowBytes + BEHIND) + FRONT);
  const out = machine.take(1 + rowBytes + BEHIND);
  const { bytes } = machine.views;
  for (const at of [row, above]) bytes.fill(0, at - FRONT, at);
  bytes.fill(0, above, above + rowBytes);
  const views = new Map([row, above].map((at) => [at, bytes.subarray(at, at + rowBytes)]));
  const written = bytes.subarray(out, out + 1 + rowBytes);
  let open = true;
  return {
    get row() {
      return views.get(row)!;
    },
    write() {
      const type = kernels.chooseFilter(row, above, step, rowBytes);
      written[0] = type;
      kernels.filter(type, row, above, step, rowBytes, out + 1);
      [row, above] = [above, row];
      return written;
    },
    swap() {
      kernels.swapBytes(row, rowBytes);
    },
    close() {
      if (open) giveBack(machine);
      open = false;
    },
  };
}
