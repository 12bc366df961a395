/** What a kernel reads beyond the edge of an axis.  [Vulkan, Wrapping Operation] */
export type Wrap = 'clamp-to-edge' | 'repeat' | 'mirror-repeat' | 'clamp-to-border';

/** The texel 0..count-1 that is read at index `i`, any distance outside; -1 where the border is read instead.
 *  `mirror-repeat` repeats the edge texel.  [Vulkan, Wrapping Operation] */
export function wrapIndex(i: number, count: number, wrap: Wrap): number {
  if (i >= 0 && i < count) return i;
  switch (wrap) {
    case 'clamp-to-edge':
      return i < 0 ? 0 : count - 1;
    case 'repeat':
      return modulo(i, count);
    case 'mirror-repeat': {
      const offset = modulo(i, 2 * count) - count;
      return count - 1 - (offset >= 0 ? offset : -1 - offset);
    }
    case 'clamp-to-border':
      return -1;
    default:
      return assertNever(wrap);
  }
}

function modulo(i: number, count: number): number {
  return i - count * Math.floor(i / count);
}

function assertNever(wrap: never): never {
  throw new TypeError(`Expected a wrap mode but received ${String(wrap)}`);
}
