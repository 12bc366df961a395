import { converter } from 'culori';
import { expect, it } from 'vitest';
import { decodeSrgb } from '../reference/transfer.ts';

it('decodes all 256 sRGB codes as culori does', () => {
  const linear = converter('lrgb');
  for (let code = 0; code < 256; code++) {
    const share = code / 255;
    // Both use the same formula; Math.pow of one engine gives both the same last digit.
    expect(decodeSrgb(share)).toBe(linear({ mode: 'rgb', r: share, g: share, b: share }).r);
  }
});
