import type { Box, Canvas } from './canvas.ts';
import { drawText, lineHeight, type Style, textWidth, wrapText } from './text.ts';

/** Pixels of the sheet's width, of the margin at its sides, and of what is between. */
export const SHEET_WIDTH = 1440;
export const MARGIN = 40;
export const CONTENT_WIDTH: number = SHEET_WIDTH - 2 * MARGIN;

/** A part of the sheet over its whole width. */
export interface Block {
  /** Pixels. */
  readonly height: number;
  /** Draws it with its top at a row of the canvas; answers where prints stand. */
  draw(canvas: Canvas, top: number): readonly Place[];
}

/** A print on the sheet. */
export interface Place {
  readonly kind: 'target' | 'kernel';
  /** As its label says: `level 3`, `box`. */
  readonly label: string;
  /** Of the whole print. */
  readonly box: Box;
  /** Pixels a texel. */
  readonly zoom: number;
}

/** A heading with words beside it, over a line. */
export function headingBlock(
  text: string,
  words: string,
  styles: { readonly heading: Style; readonly words: Style },
): Block {
  const { heading } = styles;
  const gap = 14;
  const x = MARGIN + textWidth(text, heading) + gap;
  const lines = wrapText(words, SHEET_WIDTH - MARGIN - x, styles.words);
  return {
    height: 72,
    draw(canvas, top) {
      drawText(canvas, text, { x: MARGIN, y: top + 30 }, heading);
      // Both on one base line.
      const lift = (heading.scale - styles.words.scale) * 8;
      for (const [i, line] of lines.slice(0, 1).entries()) {
        drawText(canvas, line, { x, y: top + 30 + lift + i * lineHeight(styles.words) }, styles.words);
      }
      return [];
    },
  };
}
