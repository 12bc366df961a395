import { type ArtAnswer, HALO_ABOVE, HALO_BELOW, HALO_CLIPPED } from '../../../core/proof/want.ts';
import type { Extent } from '../../../core/raster/raster.ts';
import { drawArtMarks } from './art-marks.ts';
import { GRID_LINE, MARK_DARK, MARK_LIGHT } from './backdrop.ts';
import { type Placement, visibleSpan } from './frame.ts';

/** A texel whose readings are pinned, and the number that they stand under. */
export interface PinMark {
  readonly x: number;
  readonly y: number;
  readonly number: number;
}

/** What lies over a print and is no part of it. */
export interface Overlay {
  readonly extent: Extent;
  readonly placement: Placement;
  /** A mark a texel, as the engine marks overshoot; null for none. */
  readonly marks: Uint16Array | null;
  /** What of pixel art is lost; null for none. */
  readonly art: ArtAnswer | null;
  /** Texel under the cursor. */
  readonly cursor: { readonly x: number; readonly y: number } | null;
  readonly pins: readonly PinMark[];
  /** Ends of the cross-section in shares of the extent. */
  readonly line: { readonly from: readonly [number, number]; readonly to: readonly [number, number] } | null;
  /** Device pixels a CSS pixel. */
  readonly ratio: number;
}

/** Texels of at least this many device pixels are told apart by lines. */
const GRID_ZOOM = 12;

export function drawOverlay(canvas: HTMLCanvasElement, overlay: Overlay): void {
  const context = canvas.getContext('2d');
  if (context === null) return;
  context.clearRect(0, 0, canvas.width, canvas.height);
  if (overlay.placement.zoom >= GRID_ZOOM) drawGrid(context, overlay);
  if (overlay.marks !== null) drawMarks(context, overlay, overlay.marks);
  if (overlay.art !== null) drawArtMarks(context, overlay, overlay.art);
  if (overlay.line !== null) drawLine(context, overlay, overlay.line);
  for (const pin of overlay.pins) drawPin(context, overlay, pin);
  if (overlay.cursor !== null) drawCursor(context, overlay, overlay.cursor);
}

function spans(context: CanvasRenderingContext2D, { extent, placement }: Overlay) {
  const { width, height } = context.canvas;
  return {
    columns: visibleSpan(placement.left, placement.zoom, width, 0, extent.width),
    rows: visibleSpan(placement.top, placement.zoom, height, 0, extent.height),
  };
}

function drawGrid(context: CanvasRenderingContext2D, overlay: Overlay): void {
  const { zoom, left, top } = overlay.placement;
  const { columns, rows } = spans(context, overlay);
  const [x, y] = [left + columns.first * zoom, top + rows.first * zoom];
  context.fillStyle = GRID_LINE;
  for (let i = 0; i <= columns.count; i++) context.fillRect(x + i * zoom, y, 1, rows.count * zoom);
  for (let i = 0; i <= rows.count; i++) context.fillRect(x, y + i * zoom, columns.count * zoom, 1);
}

/** Above is hatched like /, below like \, both or clipped with both: shape, not color, tells them apart. */
function drawMarks(context: CanvasRenderingContext2D, overlay: Overlay, marks: Uint16Array): void {
  const { extent, placement, ratio } = overlay;
  const { zoom, left, top } = placement;
  const { columns, rows } = spans(context, overlay);
  const hatches = [0, HATCH_UP, HATCH_DOWN, HATCH_UP | HATCH_DOWN].map((lines) => hatch(context, lines, ratio));
  for (let row = rows.first; row < rows.first + rows.count; row++) {
    const end = columns.first + columns.count;
    for (let column = columns.first; column < end; ) {
      const lines = linesOf(marks[row * extent.width + column]);
      const start = column;
      while (column < end && linesOf(marks[row * extent.width + column]) === lines) column++;
      const pattern = hatches[lines];
      if (lines === 0 || pattern === null) continue;
      context.fillStyle = pattern;
      context.fillRect(left + start * zoom, top + row * zoom, (column - start) * zoom, zoom);
    }
  }
}

const HATCH_UP = 1;
const HATCH_DOWN = 2;

function linesOf(mark: number): number {
  if ((mark & HALO_CLIPPED) !== 0) return HATCH_UP | HATCH_DOWN;
  return ((mark & HALO_ABOVE) !== 0 ? HATCH_UP : 0) | ((mark & HALO_BELOW) !== 0 ? HATCH_DOWN : 0);
}

function hatch(context: CanvasRenderingContext2D, lines: number, ratio: number): CanvasPattern | null {
  const side = Math.max(4, Math.round(5 * ratio));
  const tile = new OffscreenCanvas(side, side);
  const pen = tile.getContext('2d')!;
  for (let i = 0; i < side; i++) {
    for (const [bit, y] of [
      [HATCH_UP, side - 1 - i],
      [HATCH_DOWN, i],
    ]) {
      if ((lines & bit) === 0) continue;
      pen.fillStyle = MARK_DARK;
      pen.fillRect((i + 1) % side, y, 1, 1);
      pen.fillStyle = MARK_LIGHT;
      pen.fillRect(i, y, 1, 1);
    }
  }
  return context.createPattern(tile, 'repeat');
}

function drawLine(
  context: CanvasRenderingContext2D,
  { extent, placement, ratio }: Overlay,
  { from, to }: NonNullable<Overlay['line']>,
): void {
  const at = ([u, v]: readonly [number, number]): [number, number] => [
    placement.left + u * extent.width * placement.zoom,
    placement.top + v * extent.height * placement.zoom,
  ];
  const [one, other] = [at(from), at(to)];
  const width = Math.max(1, Math.round(ratio));
  for (const [color, thickness] of [
    [MARK_DARK, 3 * width],
    [MARK_LIGHT, width],
  ] as const) {
    context.strokeStyle = color;
    context.lineWidth = thickness;
    context.setLineDash(color === MARK_LIGHT ? [4 * width, 4 * width] : []);
    context.beginPath();
    context.moveTo(...one);
    context.lineTo(...other);
    context.stroke();
  }
  context.setLineDash([]);
}

/** The frame of a cursor, and the pin's number on a tag at its corner: above, or below where there is no room. */
function drawPin(context: CanvasRenderingContext2D, overlay: Overlay, pin: PinMark): void {
  drawCursor(context, overlay, pin);
  const { placement, ratio } = overlay;
  const { zoom, left, top } = placement;
  const line = Math.max(1, Math.round(ratio));
  const side = Math.round(TAG * ratio);
  const [x, y] = [left + (pin.x + 1) * zoom + line, top + pin.y * zoom - line - side];
  const tagX = Math.min(x, context.canvas.width - side);
  const tagY = y >= 0 ? y : top + (pin.y + 1) * zoom + line;
  context.fillStyle = MARK_LIGHT;
  context.fillRect(tagX - line, tagY - line, side + 2 * line, side + 2 * line);
  context.fillStyle = MARK_DARK;
  context.fillRect(tagX, tagY, side, side);
  context.fillStyle = MARK_LIGHT;
  context.font = `bold ${Math.round(TAG * 0.8 * ratio)}px sans-serif`;
  context.textAlign = 'center';
  context.textBaseline = 'middle';
  context.fillText(String(pin.number), tagX + side / 2, tagY + side / 2 + line / 2);
}

/** Side of a pin's tag in CSS pixels. */
const TAG = 13;

/** A light frame in a dark one just outside the texel, which itself stays free. */
function drawCursor(
  context: CanvasRenderingContext2D,
  { placement, ratio }: Overlay,
  cursor: { readonly x: number; readonly y: number },
): void {
  const { zoom, left, top } = placement;
  const line = Math.max(1, Math.round(ratio));
  const [x, y] = [left + cursor.x * zoom, top + cursor.y * zoom];
  frameBox(context, MARK_DARK, x - 2 * line, y - 2 * line, zoom + 4 * line, line);
  frameBox(context, MARK_LIGHT, x - line, y - line, zoom + 2 * line, line);
}

function frameBox(
  context: CanvasRenderingContext2D,
  color: string,
  x: number,
  y: number,
  side: number,
  line: number,
): void {
  context.fillStyle = color;
  context.fillRect(x, y, side, line);
  context.fillRect(x, y + side - line, side, line);
  context.fillRect(x, y + line, line, side - 2 * line);
  context.fillRect(x + side - line, y + line, line, side - 2 * line);
}
