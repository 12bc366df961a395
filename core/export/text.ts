import type { Canvas, Rgb } from './canvas.ts';
import { ASCENT_ROWS, GLYPH_ROWS, type Glyph, glyphFor } from './face.ts';

/** How a text is set. */
export interface Style {
  /** Pixels a texel of the face, 1 or more. */
  readonly scale: number;
  /** `bold` strokes are one texel wider. */
  readonly weight: 'plain' | 'bold';
  readonly color: Rgb;
}

/** Texels between two glyphs. */
const GAP = 1;

/** Pixels from one base line to the next. */
export function lineHeight({ scale }: Pick<Style, 'scale'>): number {
  return (GLYPH_ROWS + 5) * scale;
}

/** Pixels that a text takes on one line. */
export function textWidth(text: string, style: Pick<Style, 'scale' | 'weight'>): number {
  const glyphs = glyphsOf(text);
  const texels = glyphs.reduce((sum, glyph) => sum + glyph.width + GAP + bolder(style), 0);
  return Math.max(0, texels - GAP) * style.scale;
}

/** Draws a line of text with its highest texel at `y`. */
export function drawText(
  canvas: Canvas,
  text: string,
  at: { readonly x: number; readonly y: number },
  style: Style,
): void {
  const { scale, color } = style;
  const box = { left: at.x, top: at.y, width: textWidth(text, style), height: GLYPH_ROWS * scale };
  canvas.texts.push({ text, box });
  let x = at.x;
  for (const glyph of glyphsOf(text)) {
    for (const [row, bits] of glyph.rows.entries()) {
      const inked = style.weight === 'bold' ? bits | (bits << 1) : bits;
      for (let column = 0; column <= glyph.width; column++) {
        if ((inked & (1 << column)) === 0) continue;
        canvas.fill({ left: x + column * scale, top: at.y + row * scale, width: scale, height: scale }, color);
      }
    }
    x += (glyph.width + GAP + bolder(style)) * scale;
  }
}

/** Pixels above the base line. */
export function ascent({ scale }: Pick<Style, 'scale'>): number {
  return ASCENT_ROWS * scale;
}

/** A text in lines that are at most `width` pixels wide: cut between words, and within a word that is longer than a line. */
export function wrapText(text: string, width: number, style: Pick<Style, 'scale' | 'weight'>): readonly string[] {
  const lines: string[] = [];
  let line = '';
  const fits = (candidate: string): boolean => textWidth(candidate, style) <= width;
  for (const word of text.split(' ')) {
    const joined = line === '' ? word : `${line} ${word}`;
    if (fits(joined)) {
      line = joined;
      continue;
    }
    if (line !== '') lines.push(line);
    line = '';
    for (const character of word) {
      if (line !== '' && !fits(line + character)) {
        lines.push(line);
        line = '';
      }
      line += character;
    }
  }
  return [...lines, line];
}

/** A text that is at most `width` pixels wide; what is left out in its middle is three dots, so that a name keeps its ending. */
export function shortenText(text: string, width: number, style: Pick<Style, 'scale' | 'weight'>): string {
  if (textWidth(text, style) <= width) return text;
  const characters = [...text];
  for (let kept = characters.length - 1; kept > 0; kept--) {
    const head = Math.ceil(kept / 2);
    const short = `${characters.slice(0, head).join('')}...${characters.slice(characters.length - (kept - head)).join('')}`;
    if (textWidth(short, style) <= width) return short;
  }
  return '';
}

function bolder({ weight }: Pick<Style, 'weight'>): 0 | 1 {
  return weight === 'bold' ? 1 : 0;
}

function glyphsOf(text: string): readonly Glyph[] {
  // Composed, so that a letter with its accent is one character.
  return [...text.normalize('NFC')].map(glyphFor);
}
