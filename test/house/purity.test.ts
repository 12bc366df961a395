import { expect, test } from 'vitest';

import { impurities } from './purity.ts';
import { readSources } from './tree.ts';

test('core asks no clock, no chance, and no inexact function', () => {
  const sources = readSources('core');
  expect(sources.length).toBeGreaterThan(0);
  expect(sources.flatMap(impurities)).toEqual([]);
});

// Their pixels are committed, and must come out the same on every machine; the program that writes them may speak.
test('the painters of the demo are as pure', () => {
  const sources = readSources('test/demo/paint').filter((each) => each.path !== 'test/demo/paint/paint.ts');
  expect(sources.length).toBeGreaterThan(0);
  expect(sources.flatMap(impurities)).toEqual([]);
});

test.each([
  'const x = Math.pow(2, 0.5);',
  'const x = Math.sin(1);',
  'const x = Math.random();',
  "const x = Math['cos'](1);",
  'const { hypot } = Math;',
  'const { fround, cbrt: root } = Math;',
  'const { ...all } = Math;',
  'const all = Math;',
  'const x = y ** 0.5;',
  'const x = y ** z;',
  'let x = 3; x **= 2.4;',
  'const x = Date.now();',
  'const x = new Date();',
  'const x = performance.now();',
  "console.log('here');",
  "const x = 'a'.localeCompare('b');",
  'const x = new Intl.Collator();',
])('`%s` is impure', (text) => {
  expect(impurities({ path: 'core/kernel/bad.ts', text })).toHaveLength(1);
});

test.each([
  'const x = Math.sqrt(2) * Math.PI;',
  'const { fround, min: least } = Math;',
  'const x = y ** 2 + 2 ** -24 + 2 ** bits;',
  '// Math.pow differs between engines.',
  "const x = 'Math.pow';",
  'interface Clock { readonly Date: number }',
])('`%s` is pure', (text) => {
  expect(impurities({ path: 'core/kernel/good.ts', text })).toEqual([]);
});
