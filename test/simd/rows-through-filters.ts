import fc from 'fast-check';
import type { RowFilters } from '../../core/codec/png/filters.ts';
import { oneOf, seeds } from '../fixtures/arbitrary.ts';
import { numbers } from '../fixtures/noise.ts';

const steps = oneOf([1, 2, 3, 4, 6, 8] as const);

/** Rows to be sent through filters. */
export const filterCases = fc.record({
  seed: seeds,
  step: steps,
  texels: fc.oneof(fc.integer({ min: 1, max: 40 }), fc.constantFrom(64, 127, 1000)),
  rows: fc.integer({ min: 1, max: 6 }),
  /** Bits that bytes differ in: few make ties and runs, all of them wrap round. */
  bits: oneOf([0x01, 0x81, 0x0f, 0xff]),
});

export type FilterCase = typeof filterCases extends fc.Arbitrary<infer One> ? One : never;

/** Rows with filters of any number, undone; half-way a new pass of shorter rows begins. */
export function undone(filters: RowFilters, one: FilterCase): Uint8Array[] {
  const next = numbers(one.seed);
  const reader = filters.openReader(one.step, one.step * one.texels);
  const rows = [...rowsOf(one), ...rowsOf({ ...one, texels: Math.ceil(one.texels / 2) })];
  const result = rows.map((row, y) => {
    if (y === one.rows) reader.restart();
    const type = next() % 5;
    reader.row[one.step - 1] = type;
    reader.row.set(row, one.step);
    reader.undo(type, one.step + row.length);
    const plain = reader.row.slice(one.step, one.step + row.length);
    reader.advance();
    return plain;
  });
  reader.close();
  return result;
}

/** Rows through the filters that are chosen for them. */
export function written(filters: RowFilters, one: FilterCase): Uint8Array[] {
  const writer = filters.openWriter(one.step, one.step * one.texels);
  const result = rowsOf(one).map((row) => {
    writer.row.set(row);
    return writer.write().slice();
  });
  writer.close();
  return result;
}

/** Rows that are like those above them and to their left, as pictures are: no filter would ever win on noise. */
export function rowsOf({
  seed,
  step,
  texels,
  rows,
  bits,
}: Pick<FilterCase, 'seed' | 'step' | 'texels' | 'rows' | 'bits'>): Uint8Array[] {
  const next = numbers(seed);
  let above = new Uint8Array(step * texels);
  return Array.from({ length: rows }, () => {
    const row = new Uint8Array(step * texels);
    const like = next() % 4;
    for (let at = 0; at < row.length; at++) {
      const [left, corner] = at < step ? [0, 0] : [row[at - step], above[at - step]];
      const start = [0, left, above[at], left + above[at] - corner][like];
      row[at] = start + (next() & bits);
    }
    above = row;
    return row;
  });
}
