import fc from 'fast-check';
import { expect, test } from 'vitest';
import { type Wrap, wrapIndex } from '../../core/kernel/wrap.ts';

// Written out by hand for three texels a b c, indices -7..9; "." is the border. Vulkan specification, "Wrapping Operation".
test.each<[Wrap, string]>([
  ['clamp-to-edge', 'aaaaaaaabcccccccc'],
  ['repeat', 'cabcabcabcabcabca'],
  ['mirror-repeat', 'aabccbaabccbaabcc'],
  ['clamp-to-border', '.......abc.......'],
])('%s', (wrap, texels) => {
  const read = Array.from({ length: 17 }, (_, k) => 'abc'[wrapIndex(k - 7, 3, wrap)] ?? '.');
  expect(read.join('')).toBe(texels);
});

const count = fc.integer({ min: 1, max: 16384 });
const far = fc.integer({ min: -1e9, max: 1e9 });

test('repeat is i mod n, mirror-repeat (n - 1) - mirror((i mod 2n) - n), as the specification writes them', () => {
  const modulo = (i: number, n: number): number => ((i % n) + n) % n;
  const mirror = (i: number): number => (i >= 0 ? i : -(1 + i));
  fc.assert(
    fc.property(far, count, (i, n) => {
      expect(wrapIndex(i, n, 'repeat')).toBe(modulo(i, n));
      expect(wrapIndex(i, n, 'mirror-repeat')).toBe(n - 1 - mirror(modulo(i, 2 * n) - n));
      expect(wrapIndex(i, n, 'clamp-to-edge')).toBe(Math.min(n - 1, Math.max(0, i)));
      expect(wrapIndex(i, n, 'clamp-to-border')).toBe(i >= 0 && i < n ? i : -1);
    }),
  );
});

test('mirrored indices read mirrored texels', () => {
  fc.assert(
    fc.property(far, count, fc.constantFrom<Wrap>('clamp-to-edge', 'repeat', 'mirror-repeat'), (i, n, wrap) => {
      expect(wrapIndex(n - 1 - i, n, wrap)).toBe(n - 1 - wrapIndex(i, n, wrap));
    }),
  );
});

test('one texel is read from everywhere', () => {
  for (const wrap of ['clamp-to-edge', 'repeat', 'mirror-repeat'] as const) {
    for (let i = -5; i <= 5; i++) expect(wrapIndex(i, 1, wrap)).toBe(0);
  }
});
