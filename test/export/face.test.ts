import { expect, test } from 'vitest';
import { Canvas } from '../../core/export/canvas.ts';
import { drawnCharacters, GLYPH_ROWS, glyphFor } from '../../core/export/face.ts';
import { drawText, shortenText, textWidth, wrapText } from '../../core/export/text.ts';

const ascii = Array.from({ length: 95 }, (_, i) => String.fromCharCode(32 + i));
const plain = { scale: 1, weight: 'plain', color: [255, 255, 255] } as const;
const styles = [
  plain,
  { ...plain, weight: 'bold' },
  { ...plain, scale: 3 },
  { ...plain, scale: 2, weight: 'bold' },
] as const;

test('every character of ASCII is drawn, and the sign of extents', () => {
  expect([...ascii, '×'].filter((character) => !drawnCharacters.includes(character))).toEqual([]);
});

test('no two characters look the same', () => {
  const looks = drawnCharacters.map((character) => JSON.stringify(glyphFor(character)));
  expect(new Set(looks).size).toBe(looks.length);
});

test('each glyph keeps to its rows and its width, and has ink at both of its sides', () => {
  for (const character of drawnCharacters.filter((each) => each !== ' ')) {
    const { width, rows } = glyphFor(character);
    const inked = rows.reduce((all, row) => all | row, 0);
    expect({ character, rows: rows.length, beyond: inked >>> width }).toEqual({
      character,
      rows: GLYPH_ROWS,
      beyond: 0,
    });
    expect({ character, left: inked & 1, right: (inked >>> (width - 1)) & 1 }).toEqual({
      character,
      left: 1,
      right: 1,
    });
  }
});

test('figures are all of one width, so that numbers stand below each other', () => {
  expect(new Set([...'0123456789'].map((digit) => glyphFor(digit).width)).size).toBe(1);
});

test('an accent leaves its letter; what has none is a box', () => {
  expect(glyphFor('é')).toEqual(glyphFor('e'));
  expect(glyphFor('字')).toEqual(glyphFor('\u2603'));
  expect(drawnCharacters.map(glyphFor)).not.toContainEqual(glyphFor('字'));
});

test.each(styles)('text stays in the box that is measured for it: %o', (style) => {
  const text = 'Quartz glyph, 48x48 {~} "jab" 90.5 %';
  const width = textWidth(text, style);
  const canvas = new Canvas({ width: width + 20, height: GLYPH_ROWS * style.scale + 20 }, [0, 0, 0]);
  drawText(canvas, text, { x: 10, y: 10 }, style);
  const columns: number[] = [];
  for (let at = 0; at < canvas.codes.length; at += 3) {
    if (canvas.codes[at] !== 0) columns.push((at / 3) % canvas.extent.width);
  }
  expect(Math.min(...columns)).toBe(10);
  expect(Math.max(...columns)).toBe(10 + width - 1);
});

test('lines are as wide as they may be and no wider; nothing is lost at their ends', () => {
  const text = 'one or two words and a_word_that_is_longer_than_any_line_may_be at the end';
  for (const width of [20, 60, 100, 400]) {
    const lines = wrapText(text, width, plain);
    expect(lines.filter((line) => textWidth(line, plain) > width)).toEqual([]);
    expect(lines.join('').replaceAll(' ', '')).toBe(text.replaceAll(' ', ''));
  }
});

test('a name that is cut keeps its beginning and its ending', () => {
  const short = shortenText('a-very-long-name-of-a-texture.png', 120, plain);
  expect(short).toMatch(/^a-very.*\.\.\..*\.png$/);
  expect(textWidth(short, plain)).toBeLessThanOrEqual(120);
});
