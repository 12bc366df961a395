import { expect, test } from 'vitest';
import { LUMINANCE_BLUE, LUMINANCE_GREEN, LUMINANCE_RED, luminance } from '../../core/color/luminance.ts';
import { decodeSrgb } from '../../core/color/transfer.ts';

test('the weights sum to exactly 1', () => {
  // As integers of 1/10000, since the decimals have no exact double.
  const parts = [LUMINANCE_RED, LUMINANCE_GREEN, LUMINANCE_BLUE].map((weight) => Math.round(weight * 10000));
  expect(parts).toEqual([2126, 7152, 722]);
  expect(parts[0] + parts[1] + parts[2]).toBe(10000);
});

// Contrast (L1 + 0.05) / (L2 + 0.05) on white, WCAG 2.2; measured alike with two color libraries, to six decimals.
test.each([
  [0x00, 21],
  [0x76, 4.542225],
  [0x77, 4.478089],
  [0x94, 3.03347],
  [0x95, 2.995346],
])('contrast of gray %d on white', (code, contrast) => {
  const gray = decodeSrgb(code / 255);
  expect(Math.abs(1.05 / (luminance(gray, gray, gray) + 0.05) - contrast)).toBeLessThan(5e-7);
});
