import fc from 'fast-check';
import { expect, test } from 'vitest';
import { parentPath, pathBelow, resolvePath } from '../../core/treatment/paths/path.ts';
import { decodeUtf8, utf8Length } from '../../core/treatment/paths/utf8.ts';
import { editDistance, nearest } from '../../core/treatment/text/nearest.ts';
import { spotFinder } from '../../core/treatment/text/place.ts';

test.each([
  ['', 'abc', 3],
  ['abc', 'abc', 0],
  ['abc', 'acb', 1],
  ['ca', 'abc', 3],
  ['kitten', 'sitting', 3],
])('%s to %s takes %i edits', (a, b, distance) => {
  expect(editDistance(a, b)).toBe(distance);
});

test('a distance is the same both ways, zero for equals alone, and no longer than the texts', () => {
  const word = fc.string({ unit: fc.constantFrom(...'abc'), maxLength: 6 });
  fc.assert(
    fc.property(word, word, (a, b) => {
      const distance = editDistance(a, b);
      expect(distance).toBe(editDistance(b, a));
      expect(distance === 0).toBe(a === b);
      expect(distance).toBeLessThanOrEqual(Math.max(a.length, b.length));
    }),
  );
});

test('the nearest of equals is the first', () => {
  expect(nearest('x', ['a', 'b'])).toBe('a');
  expect(nearest('OUTDIR', ['exclude', 'outDir'])).toBe('outDir');
});

test('UTF-8 is read as TextDecoder reads it', () => {
  const strict = new TextDecoder('utf-8', { fatal: true });
  const judge = (bytes: Uint8Array) => {
    try {
      return strict.decode(bytes);
    } catch {
      return null;
    }
  };
  const lively = fc.oneof(
    fc.nat(255),
    fc.constantFrom(0x80, 0xbf, 0xc0, 0xc2, 0xe0, 0xed, 0xa0, 0xef, 0xbb, 0xf0, 0x90, 0xf4, 0xf5),
  );
  fc.assert(
    fc.property(fc.array(lively, { maxLength: 12 }), (bytes) => {
      expect(decodeUtf8(Uint8Array.from(bytes))).toBe(judge(Uint8Array.from(bytes)));
    }),
    { numRuns: 20000 },
  );
  const long = 'a\u00e4\u4e2d\u{1F343}'.repeat(5000);
  expect(decodeUtf8(new TextEncoder().encode(long))).toBe(long);
});

test('the length in UTF-8 is that of the encoder', () => {
  fc.assert(
    fc.property(fc.string({ unit: 'binary' }), (text) => {
      expect(utf8Length(text)).toBe(new TextEncoder().encode(text).length);
    }),
  );
});

test('places count lines of every kind and columns in UTF-16 units', () => {
  const text = 'a\nb\r\nc\rd\u{1F343}e';
  const spot = spotFinder(text);
  expect([0, 1, 2, 5, 7, 10].map((offset) => Object.values(spot(offset)).join(':'))).toEqual([
    '1:1',
    '1:2',
    '2:1',
    '3:1',
    '4:1',
    '4:4',
  ]);
});

test.each([
  ['/a/b', 'c', '/a/b/c'],
  ['/a/b', '../c', '/a/c'],
  ['/a/b', './c/./d//e/', '/a/b/c/d/e'],
  ['/a', '../../../x', '/x'],
  ['/a', '.', '/a'],
  ['/', 'a', '/a'],
  ['/a', '/b/../c', '/c'],
  ['C:/a', '../..', 'C:/'],
  ['C:/a', 'b', 'C:/a/b'],
  ['//server/share/a', '../../b', '//server/share/b'],
])('%s and %s make %s', (folder, path, expected) => {
  expect(resolvePath(folder, path)).toBe(expected);
});

test('folders go up to the top and no further', () => {
  expect(['/a/b', '/a', '/', 'C:/a', 'C:/', '//s/h/a', '//s/h'].map(parentPath)).toEqual([
    '/a',
    '/',
    null,
    'C:/',
    null,
    '//s/h',
    null,
  ]);
  expect([pathBelow('/a', '/a/b/c'), pathBelow('/a', '/a'), pathBelow('/a', '/ab'), pathBelow('/', '/a')]).toEqual([
    'b/c',
    '',
    null,
    'a',
  ]);
});
