import type { Picture } from '../proof/want.ts';
import type { Treatment } from '../treatment/treatment.ts';
import type { Canvas, Rgb } from './canvas.ts';
import type { Look, SheetShow } from './look.ts';
import type { ProofPreferences } from './order.ts';
import { BACKDROPS, CHECKER_SIDE } from './palette.ts';
import { isSeenThrough, shadeOf } from './shade.ts';

/** How prints are shown on a sheet. */
export interface SheetView {
  readonly show: SheetShow;
  readonly treatment: Treatment;
  readonly lamp: Look['lamp'];
  readonly backdrop: ProofPreferences['backdrop'];
}

/** Draws a picture, `zoom` pixels a texel. A checker begins at its corner, in pixels of the sheet at every zoom. */
export function drawPicture(
  canvas: Canvas,
  picture: Picture,
  { left, top, zoom }: { readonly left: number; readonly top: number; readonly zoom: number },
  view: SheetView,
): void {
  const shade = shadeOf(picture, view);
  const backdrops = isSeenThrough(picture, view.show) ? BACKDROPS[view.backdrop] : BACKDROPS[view.backdrop].slice(0, 1);
  const { width, height } = picture.extent;
  for (let y = 0; y < height; y++) {
    for (let x = 0; x < width; x++) {
      const colors = backdrops.map((backdrop) => shade(y * width + x, backdrop));
      fillTexel(canvas, { x: left + x * zoom, y: top + y * zoom, zoom }, colors, { left, top });
    }
  }
}

function fillTexel(
  canvas: Canvas,
  at: { readonly x: number; readonly y: number; readonly zoom: number },
  colors: readonly Rgb[],
  corner: { readonly left: number; readonly top: number },
): void {
  for (let y = at.y; y < at.y + at.zoom; y++) {
    const row = Math.floor((y - corner.top) / CHECKER_SIDE);
    for (let x = at.x; x < at.x + at.zoom; x++) {
      const square = row + Math.floor((x - corner.left) / CHECKER_SIDE);
      canvas.dot(x, y, colors[square % colors.length]);
    }
  }
}
