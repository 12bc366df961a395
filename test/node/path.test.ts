import { expect, test } from 'vitest';
import { isWithin, join, nameOf, parentOf, relative } from '../../extension/node/path.ts';

test.each([
  ['/a/b', '/a', 'b'],
  ['/a', '/', 'a'],
  ['C:/a', 'C:/', 'a'],
  ['/', '/', ''],
])('%s lies in %s and is named %s', (path, parent, name) => {
  expect([parentOf(path), nameOf(path)]).toEqual([parent, name]);
});

test.each([
  ['/a', 'b/c', '/a/b/c'],
  ['/a', '../b', '/b'],
  ['/a', './b/./c/..', '/a/b'],
  ['/a', '../../../b', '/b'],
  ['/', 'b', '/b'],
  ['/a', '/b', '/b'],
  ['C:/a', '../b', 'C:/b'],
  ['C:/', '../../b', 'C:/b'],
  ['/a', '.', '/a'],
])('%s and %s join to %s', (folder, path, joined) => {
  expect(join(folder, path)).toBe(joined);
});

test.each([
  ['/a', '/a/b', 'b'],
  ['/a/b', '/a/c/d', '../c/d'],
  ['/a', '/a', '.'],
  ['/', '/a', 'a'],
  ['/a/b', '/', '../..'],
  ['c:/a', 'C:/b', '../b'],
  ['C:/a', 'D:/b', null],
])('the way from %s to %s is %s, and it leads there', (from, to, way) => {
  expect(relative(from, to)).toBe(way);
  if (way !== null) expect(join(from, way).toLowerCase()).toBe(to.toLowerCase());
});

test.each([
  ['/a/b', '/a', true],
  ['/a', '/a', true],
  ['/ab', '/a', false],
  ['/a', '/', true],
])('%s within %s: %s', (path, folder, within) => {
  expect(isWithin(path, folder)).toBe(within);
});
