import type { ArtAnswer, AxisEvenness } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import { MARK_DARK, MARK_LIGHT } from './backdrop.ts';
import { type Placement, visibleSpan } from './frame.ts';

/** A dot on each texel whose color the palette lacks; a bar at the edge along columns and rows that are wider than others or stand
 *  behind a wider gap. */
export function drawArtMarks(
  context: CanvasRenderingContext2D,
  on: { readonly extent: Extent; readonly placement: Placement; readonly ratio: number },
  { off, even }: ArtAnswer,
): void {
  if (off !== null) drawDots(context, on, off.marks);
  if (even === null) return;
  const { placement, ratio } = on;
  const thick = Math.max(2, Math.round(BAR * ratio));
  // Beside the print where there is room, else over its edge.
  const top = Math.max(0, placement.top - thick - 2);
  const left = Math.max(0, placement.left - thick - 2);
  for (const [start, length] of runsOf(even.x)) {
    bar(context, placement.left + start * placement.zoom, top, length * placement.zoom, thick);
  }
  for (const [start, length] of runsOf(even.y)) {
    bar(context, left, placement.top + start * placement.zoom, thick, length * placement.zoom);
  }
}

/** Thickness of a bar in CSS pixels. */
const BAR = 3;

function drawDots(
  context: CanvasRenderingContext2D,
  { extent, placement }: { readonly extent: Extent; readonly placement: Placement },
  marks: Uint8Array,
): void {
  const { zoom, left, top } = placement;
  const { width, height } = context.canvas;
  const columns = visibleSpan(left, zoom, width, 0, extent.width);
  const rows = visibleSpan(top, zoom, height, 0, extent.height);
  // A light dot in a dark one; where a texel is too small for both, the light one alone.
  const outer = Math.max(1, Math.round(zoom * 0.45));
  const inner = Math.max(1, outer - 2);
  for (let row = rows.first; row < rows.first + rows.count; row++) {
    for (let column = columns.first; column < columns.first + columns.count; column++) {
      if (marks[row * extent.width + column] === 0) continue;
      const [x, y] = [left + column * zoom, top + row * zoom];
      if (outer > 2) dot(context, MARK_DARK, x + ((zoom - outer) >> 1), y + ((zoom - outer) >> 1), outer);
      dot(context, MARK_LIGHT, x + ((zoom - inner) >> 1), y + ((zoom - inner) >> 1), inner);
    }
  }
}

function dot(context: CanvasRenderingContext2D, color: string, x: number, y: number, side: number): void {
  context.fillStyle = color;
  context.fillRect(x, y, side, side);
}

/** Neighbors of the same column of the source are one bar. */
function runsOf({ uneven, least, most }: AxisEvenness): readonly (readonly [start: number, length: number])[] {
  const runs: [number, number][] = [];
  for (const texel of uneven) {
    const last = runs[runs.length - 1];
    if (least > 0 && last !== undefined && last[0] + last[1] === texel && last[1] < most) last[1]++;
    else runs.push([texel, 1]);
  }
  return runs;
}

/** A light bar framed by a dark one, so that neighbors are told apart. */
function bar(context: CanvasRenderingContext2D, x: number, y: number, width: number, height: number): void {
  context.fillStyle = MARK_DARK;
  context.fillRect(x, y, width, height);
  context.fillStyle = MARK_LIGHT;
  context.fillRect(x + 1, y + 1, Math.max(1, width - 2), Math.max(1, height - 2));
}
