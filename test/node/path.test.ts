import { expect, test } from 'vitest';
import { resolvePath } from '../../core/treatment/paths/path.ts';
import { parentOf, relative } from '../../extension/node/files/path.ts';

test.each([
  ['/a/b', '/a'],
  ['/a', '/'],
  ['C:/a', 'C:/'],
  ['/', '/'],
])('%s lies in %s', (path, parent) => {
  expect(parentOf(path)).toBe(parent);
});

test.each([
  ['/a', '/a/b', 'b'],
  ['/a/b', '/a/c/d', '../c/d'],
  ['/a', '/a', '.'],
  ['/', '/a', 'a'],
  ['/a/b', '/', '../..'],
  ['/a/b', '/ab', '../../ab'],
  ['c:/a', 'C:/b', '../b'],
  ['C:/a', 'D:/b', null],
])('the way from %s to %s is %s, and it leads there', (from, to, way) => {
  expect(relative(from, to)).toBe(way);
  if (way !== null) expect(resolvePath(from, way).toLowerCase()).toBe(to.toLowerCase());
});
