import type { Extent } from '../../../core/raster/raster.ts';
import type { State } from './state.ts';

/** A cross-section's ends, in shares of width and height. */
export interface Line {
  readonly from: readonly [number, number];
  readonly to: readonly [number, number];
}

/** The texel that holds a point of the picture. */
export function cursorTexel(cursor: State['cursor'], extent: Extent): { readonly x: number; readonly y: number } {
  return { x: texelAt(cursor.u, extent.width), y: texelAt(cursor.v, extent.height) };
}

/** The line that is cut along: the cursor's row or column, through the middle of its texels, or one that was drawn. */
export function lineOf(state: Pick<State, 'line' | 'drawn' | 'cursor'>, extent: Extent): Line {
  if (state.line === 'drawn') return state.drawn;
  const texel = cursorTexel(state.cursor, extent);
  const u = (texel.x + 0.5) / extent.width;
  const v = (texel.y + 0.5) / extent.height;
  return state.line === 'row' ? { from: [0, v], to: [1, v] } : { from: [u, 0], to: [u, 1] };
}

/** Texels of a picture along a line, one for each step of its longer direction. */
export function texelsAlong(line: Line, extent: Extent): readonly { readonly x: number; readonly y: number }[] {
  const across = Math.abs(line.to[0] - line.from[0]) * extent.width;
  const down = Math.abs(line.to[1] - line.from[1]) * extent.height;
  const length = Math.max(1, Math.round(Math.max(across, down)));
  return Array.from({ length }, (_, i) => {
    const share = (i + 0.5) / length;
    return {
      x: texelAt(line.from[0] + (line.to[0] - line.from[0]) * share, extent.width),
      y: texelAt(line.from[1] + (line.to[1] - line.from[1]) * share, extent.height),
    };
  });
}

function texelAt(share: number, count: number): number {
  return Math.min(count - 1, Math.max(0, Math.floor(share * count)));
}
