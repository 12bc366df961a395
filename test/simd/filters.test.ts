import fc from 'fast-check';
import { expect, it } from 'vitest';
import { type FilterReader, type FilterWriter, plainFilters } from '../../core/codec/png/filters.ts';
import { simdFilters } from '../fixtures/simd.ts';
import { holds } from '../laws/holds.ts';
import { filterCases, rowsOf, undone, written } from './rows-through-filters.ts';

// The plain filters are the reference, byte for byte; pngjs judges them both in test/codec.

const simd = simdFilters();

it('undoes filters as the plain ones do, from row to row', () => {
  holds(filterCases, 2000, (one) => {
    expect(hex(undone(simd, one))).toBe(hex(undone(plainFilters, one)));
  });
});

it('chooses and writes filters as the plain ones do', () => {
  const chosen = new Set<number>();
  holds(filterCases, 2000, (one) => {
    const expected = written(plainFilters, one);
    for (const row of expected) chosen.add(row[0]);
    expect(hex(written(simd, one))).toBe(hex(expected));
  });
  expect(chosen.size).toBe(5);
});

it('reads back what it wrote', () => {
  holds(filterCases, 500, (one) => {
    const reader = simd.openReader(one.step, one.step * one.texels);
    const back = written(simd, one).map((row) => {
      reader.row.set(row, one.step - 1);
      reader.undo(row[0], one.step - 1 + row.length);
      const plain = reader.row.slice(one.step, one.step - 1 + row.length);
      reader.advance();
      return plain;
    });
    reader.close();
    expect(hex(back)).toBe(hex(rowsOf(one)));
  });
});

it('swaps the bytes of 16-bit codes', () => {
  holds(filterCases, 200, (one) => {
    for (const filters of [plainFilters, simd]) {
      const writer = filters.openWriter(2 * one.step, 2 * one.texels);
      const row = rowsOf({ ...one, step: 2, rows: 1 })[0];
      writer.row.set(row);
      writer.swap();
      expect([...writer.row]).toEqual([...row].map((_, at) => row[at ^ 1]));
      writer.close();
    }
  });
});

it('leaves no trace of a row in the work that has its memory next', () => {
  holds(fc.tuple(filterCases, filterCases), 200, ([first, second]) => {
    const expected = hex(written(plainFilters, second)) + hex(undone(plainFilters, second));
    written(simd, first);
    undone(simd, first);
    expect(hex(written(simd, second)) + hex(undone(simd, second))).toBe(expected);
  });
});

it('closes once, however often it is closed', () => {
  const [a, b]: (FilterReader | FilterWriter)[] = [simd.openReader(1, 9), simd.openWriter(1, 9)];
  a.close();
  a.close();
  const c = simd.openWriter(1, 9);
  const d = simd.openWriter(1, 9);
  expect(c.row.buffer).not.toBe(d.row.buffer);
  for (const each of [b, c, d]) each.close();
});

function hex(rows: readonly Uint8Array[]): string {
  return rows.map((row) => Buffer.from(row).toString('hex')).join(' ');
}
