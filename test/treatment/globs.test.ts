import { describe, expect, test } from 'vitest';
import { globFault, globMatcher } from '../../core/treatment/paths/glob.ts';

describe('what a glob matches', () => {
  test.each<readonly [glob: string, hits: readonly string[], misses: readonly string[]]>([
    ['*.png', ['a.png', 'a b.png'], ['a/b.png', '.png', '.a.png', 'a.PNG', 'a.pngx']],
    ['**', ['a', 'a/b', 'a/b/c.png'], ['.a', 'a/.b/c', 'a/.b']],
    ['**/*.png', ['a.png', 'a/b/c.png'], ['a.tga', '.a/b.png', 'a/.b.png']],
    ['**/*_n.png', ['wall_n.png', 'a/wall_n.png'], ['wall_n2.png', 'wall_N.png']],
    ['ui/**', ['ui/a.png', 'ui/b/c.png'], ['UI/a.png', 'xui/a.png', 'a/ui/b.png']],
    ['a/**/z.png', ['a/z.png', 'a/b/z.png', 'a/b/c/z.png'], ['z.png', 'a/bz.png']],
    ['a?.png', ['a1.png', 'ab.png'], ['a.png', 'a12.png', 'a/.png']],
    ['a[0-2].png', ['a0.png', 'a2.png'], ['a3.png', 'a.png']],
    ['a[^0-2].png', ['a3.png', 'ax.png'], ['a0.png', 'a/.png']],
    ['{a,b}/*.{png,tga}', ['a/x.png', 'b/x.tga'], ['c/x.png', 'a/x.ktx2']],
    ['{ui,font/glyphs}/**', ['ui/a.png', 'font/glyphs/a.png'], ['font/a.png']],
    ['docs', ['docs'], ['docs/a.png']],
    ['a+b@2x$.png', ['a+b@2x$.png'], ['aab@2x$.png']],
    ['.hidden/*.png', ['.hidden/a.png'], ['.hidden/.a.png']],
    // Composed in the glob or decomposed: paths are compared in NFC.
    ['bl\u00e4tter/*', ['bl\u00e4tter/a.png'], []],
    ['bla\u0308tter/*', ['bl\u00e4tter/a.png'], []],
  ])('%s', (glob, hits, misses) => {
    expect(globFault(glob)).toBeNull();
    const matches = globMatcher([glob]);
    expect(hits.filter((path) => !matches(path))).toEqual([]);
    expect(misses.filter((path) => matches(path))).toEqual([]);
  });

  test('one of several globs is enough, and none matches nothing', () => {
    expect(['a', 'b', 'c'].map(globMatcher(['a', 'c']))).toEqual([true, false, true]);
    expect(globMatcher([])('a')).toBe(false);
  });
});

describe('globs that are refused', () => {
  test.each([
    '',
    '!a',
    'a(b)',
    '+(a|b)',
    '(a*)+',
    '[a]+',
    '{a,b}+',
    '[!a]',
    '[a',
    'a]',
    '{a',
    '{1..9}',
    '*a*a*a*',
    'a'.repeat(1025),
  ])('%s', (glob) => {
    expect(globFault(glob)?.code).toBe('bad-glob');
  });
});
