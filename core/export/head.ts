import type { SourceHeader } from '../codec/source.ts';
import { type Block, CONTENT_WIDTH, MARGIN, SHEET_WIDTH } from './block.ts';
import type { Canvas } from './canvas.ts';
import { type Fact, factsOf, sourceWords } from './facts.ts';
import type { ProofOrder } from './order.ts';
import { AMBER, BAND, FACT, RAIL, SOFT, SOFT_FACT, TITLE } from './palette.ts';
import { drawText, lineHeight, shortenText, textWidth, wrapText } from './text.ts';

const BAND_HEIGHT = 112;
const EMBLEM_WIDTH = 150;

/** The texture's name on a band, what it is, and what the treatment makes of it. */
export function headBlock(header: SourceHeader, order: ProofOrder): Block {
  const columns = columnsOf(factsOf(header, order));
  const facts = Math.max(...columns.map((lines) => lines.length)) * lineHeight(FACT);
  return {
    height: BAND_HEIGHT + 26 + facts,
    draw(canvas, top) {
      canvas.fill({ left: 0, top, width: SHEET_WIDTH, height: BAND_HEIGHT }, BAND);
      const room = CONTENT_WIDTH - EMBLEM_WIDTH - 24;
      drawText(canvas, shortenText(order.name, room, TITLE), { x: MARGIN, y: top + 26 }, TITLE);
      drawText(canvas, shortenText(sourceWords(header, order), room, FACT), { x: MARGIN, y: top + 72 }, FACT);
      drawEmblem(canvas, top);
      for (const [i, lines] of columns.entries()) {
        const x = MARGIN + i * (COLUMN_WIDTH + COLUMN_GAP);
        for (const [row, { name, text }] of lines.entries()) {
          const y = top + BAND_HEIGHT + 30 + row * lineHeight(FACT);
          if (name !== '') drawText(canvas, name, { x, y }, SOFT_FACT);
          drawText(canvas, text, { x: x + NAME_WIDTH, y }, FACT);
        }
      }
      return [];
    },
  };
}

const COLUMN_GAP = 40;
const COLUMN_WIDTH = (CONTENT_WIDTH - COLUMN_GAP) / 2;
const NAME_WIDTH = 132;

/** Facts as lines, in two columns of about one length. */
function columnsOf(facts: readonly Fact[]): readonly (readonly Fact[])[] {
  const wrapped = facts.map(({ name, text }) =>
    wrapText(text, COLUMN_WIDTH - NAME_WIDTH, FACT).map((line, i) => ({ name: i === 0 ? name : '', text: line })),
  );
  const total = wrapped.reduce((sum, { length }) => sum + length, 0);
  const columns: Fact[][] = [[], []];
  for (const lines of wrapped) {
    const isFull = columns[0].length + lines.length / 2 > total / 2;
    columns[isFull || columns[1].length > 0 ? 1 : 0].push(...lines);
  }
  return columns;
}

/** Sizes on a rail with the sight below them, and what this is. */
function drawEmblem(canvas: Canvas, top: number): void {
  const rail = top + 66;
  let x = SHEET_WIDTH - MARGIN - EMBLEM_WIDTH;
  canvas.fill({ left: x, top: rail, width: EMBLEM_WIDTH, height: 3 }, RAIL);
  for (const side of [40, 20, 10, 5, 3]) {
    canvas.fill({ left: x, top: rail - 4 - side, width: side, height: side }, RAIL);
    x += side + 8;
  }
  drawSightMark(canvas, SHEET_WIDTH - MARGIN - EMBLEM_WIDTH + 58, rail + 5);
  const words = 'Sizeproof: proof sheet';
  drawText(canvas, words, { x: SHEET_WIDTH - MARGIN - textWidth(words, SOFT), y: top + 90 }, { ...SOFT, color: RAIL });
}

/** A triangle that points up at the middle column `x`. */
export function drawSightMark(canvas: Canvas, x: number, top: number): void {
  for (let row = 0; row < SIGHT_ROWS; row++) {
    canvas.fill({ left: x - row, top: top + row, width: 2 * row + 1, height: 1 }, AMBER);
  }
}

export const SIGHT_ROWS = 8;
