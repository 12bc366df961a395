import { byteText, extentText } from '../figures.ts';
import type { Extent } from '../raster/raster.ts';
import { type Block, CONTENT_WIDTH, headingBlock, MARGIN, type Place } from './block.ts';
import type { Canvas } from './canvas.ts';
import { drawPicture, type SheetView } from './draw-picture.ts';
import { drawSightMark, SIGHT_ROWS } from './head.ts';
import { HEADING, LABEL, PLAIN, RAIL, SOFT, WARNING } from './palette.ts';
import type { SheetPrint } from './prints.ts';
import type { SheetTarget } from './targets.ts';
import { drawText, lineHeight, type Style, textWidth, wrapText } from './text.ts';

/** Largest extent that is shown whole, and the longest side of the cut where it is not. */
const MOST: Extent = { width: CONTENT_WIDTH, height: 1024 };
const CUT = 416;

/** Longest side of what is shown of an image; null is all of it. */
export function cutSide({ width, height }: Extent): number | null {
  return width <= MOST.width && height <= MOST.height ? null : CUT;
}

/** Every target at its true size, standing on rails: levels first, then what lies between them. */
export function targetSection(
  targets: readonly SheetTarget[],
  prints: readonly SheetPrint[],
  { view, sight, left }: { readonly view: SheetView; readonly sight: SheetTarget | null; readonly left: number },
): readonly Block[] {
  const cells = targets.map((target, i) => cellOf(target, prints[i], target === sight));
  const more = left === 0 ? '' : `; ${left} more are left out`;
  const heading = headingBlock('Targets', `at true size: one texel is one pixel of this picture${more}`, {
    heading: HEADING,
    words: SOFT,
  });
  return [heading, ...rowsOf(cells).map((row) => rowBlock(row, view))];
}

interface Line {
  readonly text: string;
  readonly style: Style;
}

interface Cell {
  readonly target: SheetTarget;
  readonly print: SheetPrint;
  readonly isSight: boolean;
  readonly extent: Extent;
  readonly lines: readonly Line[];
  readonly width: number;
}

const GAP = 28;
const PROBLEM_WIDTH = 240;

function cellOf(target: SheetTarget, print: SheetPrint, isSight: boolean): Cell {
  const extent = print.picture?.extent ?? { width: 0, height: 0 };
  const lines = linesOf(target, print);
  const width = Math.max(extent.width, ...lines.map(({ text, style }) => textWidth(text, style)));
  return { target, print, isSight, extent, lines, width };
}

function linesOf({ label, extent }: SheetTarget, print: SheetPrint): readonly Line[] {
  const lines: Line[] = wrapText(label, PROBLEM_WIDTH, LABEL).map((text) => ({ text, style: LABEL }));
  const size = extentText(extent);
  if (label !== size.replace('×', 'x')) lines.push({ text: size, style: PLAIN });
  if (print.problem !== null) {
    return [...lines, ...wrapText(print.problem, PROBLEM_WIDTH, WARNING).map((text) => ({ text, style: WARNING }))];
  }
  if (print.cutFrom !== null) lines.push({ text: `its middle ${extentText(print.picture!.extent)}`, style: PLAIN });
  lines.push({ text: byteText(print.bytes), style: PLAIN });
  for (const { name, text, over } of print.measured) {
    lines.push({ text: `${name} ${text}`, style: over === null ? SOFT : WARNING });
    if (over !== null) lines.push({ text: `! ${over}`, style: WARNING });
  }
  if (print.pixels !== '') lines.push({ text: `#${print.pixels.slice(0, 8)}`, style: SOFT });
  return lines;
}

function rowsOf(cells: readonly Cell[]): readonly (readonly Cell[])[] {
  const rows: Cell[][] = [];
  let used = Number.POSITIVE_INFINITY;
  for (const cell of cells) {
    if (used + GAP + cell.width > CONTENT_WIDTH) {
      rows.push([]);
      used = -GAP;
    }
    rows[rows.length - 1].push(cell);
    used += GAP + cell.width;
  }
  return rows;
}

const RAIL_HEIGHT = 3;
const BELOW_RAIL = 12 + SIGHT_ROWS;

function rowBlock(cells: readonly Cell[], view: SheetView): Block {
  const tall = Math.max(...cells.map(({ extent }) => extent.height));
  const lines = Math.max(...cells.map((cell) => cell.lines.length));
  const rail = tall + 5;
  return {
    height: rail + RAIL_HEIGHT + BELOW_RAIL + lines * lineHeight(PLAIN) + 26,
    draw(canvas, top) {
      canvas.fill({ left: MARGIN, top: top + rail, width: CONTENT_WIDTH, height: RAIL_HEIGHT }, RAIL);
      const places: Place[] = [];
      let x = MARGIN;
      for (const cell of cells) {
        places.push(...drawCell(canvas, cell, { x, top, tall, rail }, view));
        x += cell.width + GAP;
      }
      return places;
    },
  };
}

function drawCell(
  canvas: Canvas,
  cell: Cell,
  at: { readonly x: number; readonly top: number; readonly tall: number; readonly rail: number },
  view: SheetView,
): readonly Place[] {
  const { extent, print, target, width } = cell;
  const left = at.x + Math.floor((width - extent.width) / 2);
  const above = at.top + at.tall - extent.height;
  if (cell.isSight) drawSightMark(canvas, at.x + Math.floor(width / 2), at.top + at.rail + RAIL_HEIGHT + 3);
  for (const [i, { text, style }] of cell.lines.entries()) {
    const indent = Math.floor((width - textWidth(text, style)) / 2);
    const y = at.top + at.rail + RAIL_HEIGHT + BELOW_RAIL + i * lineHeight(style);
    drawText(canvas, text, { x: at.x + indent, y }, style);
  }
  if (print.picture === null) return [];
  drawPicture(canvas, print.picture, { left, top: above, zoom: 1 }, view);
  return [{ kind: 'target', label: target.label, box: { left, top: above, ...extent }, zoom: 1 }];
}
