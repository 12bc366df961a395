import type { Wrap } from '../../core/kernel/wrap.ts';

/** The texel that index `i` of an axis of `n` texels reads, null outside a border. Vulkan, "Wrapping Operation". */
export function wrapIndex(i: number, n: number, wrap: Wrap): number | null {
  switch (wrap) {
    case 'clamp-to-edge':
      return Math.min(n - 1, Math.max(0, i));
    case 'repeat':
      return modulo(i, n);
    case 'mirror-repeat':
      return n - 1 - mirror(modulo(i, 2 * n) - n);
    case 'clamp-to-border':
      return i >= 0 && i < n ? i : null;
  }
}

function modulo(i: number, n: number): number {
  return ((i % n) + n) % n;
}

function mirror(i: number): number {
  return i >= 0 ? i : -(1 + i);
}
