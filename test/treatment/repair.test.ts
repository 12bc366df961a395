import { expect, test } from 'vitest';
import { repairOf, tokenLength } from '../../core/treatment/edit/repair.ts';
import { parseSettings } from '../../core/treatment/settings.ts';

/** The text after each problem that has a repair is repaired where it points. */
function repaired(text: string): string {
  const [problem] = parseSettings(text, 's').problems;
  const repair = repairOf(problem);
  if (repair === null) return text;
  const offset = (problem.column ?? 1) - 1;
  return text.slice(0, offset) + repair + text.slice(offset + tokenLength(text, offset));
}

test.each([
  ['{ "treatmens": [] }', '{ "treatments": [] }'],
  ['{ "defaults": { "kernel": "kaizer" } }', '{ "defaults": { "kernel": "kaiser" } }'],
  ['{ "defaults": { "depth": 32 } }', '{ "defaults": { "depth": 8 } }'],
  ['{ "defaults": { "alpha": { "cutof": 0.5 } } }', '{ "defaults": { "alpha": { "cutoff": 0.5 } } }'],
])('%s is repaired', (before, after) => {
  expect(repaired(before)).toBe(after);
  expect(parseSettings(after, 's').problems).toEqual([]);
});

test('what has no one answer is left to the user', () => {
  const text = '{ "defaults": { "alpha": { "cutoff": 2 } } }';
  expect(repaired(text)).toBe(text);
});

test.each([
  ['{ "ab": 1 }', 2, 4],
  ['{ "a\\"b": 1 }', 2, 6],
  ['[1.25e3, 2]', 1, 6],
  ['[', 0, 1],
  ['', 0, 0],
  ['"open', 0, 5],
])('%s at %i has a token of %i units', (text, offset, length) => {
  expect(tokenLength(text, offset)).toBe(length);
});
