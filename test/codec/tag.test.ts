import { describe, expect, it } from 'vitest';
import type { ColorChunk } from '../../core/codec/source.ts';
import { obeyedGamma } from '../../core/codec/tag.ts';
import { problemOf } from '../fixtures/refusal.ts';

const SRGB_CHRM = '31270 32900 64000 33000 30000 60000 15000 6000';

function chunks(text: string): ColorChunk[] {
  return text
    .split(', ')
    .filter((each) => each !== '')
    .map((each) => {
      const [name, ...value] = each.split(' ');
      return { name: name as ColorChunk['name'], value: value.join(' ') };
    });
}

describe('chunks that can be obeyed', () => {
  it.each([
    ['', null],
    ['sRGB 0', null],
    ['sRGB 3', null],
    ['gAMA 45455', 0.45455],
    ['gAMA 100000', 1],
    ['gAMA 55556', 0.55556],
    [`gAMA 45455, cHRM ${SRGB_CHRM}`, 0.45455],
    // Writers round the primaries differently: BT.709's in more digits.
    ['gAMA 100000, cHRM 31269 32899 63999 33001 30000 60000 15000 5999', 1],
    [`cHRM ${SRGB_CHRM}`, null],
    // sRGB rules over gAMA and cHRM: PNG, 11.3.2.5.
    ['gAMA 100000, cHRM 1 2 3 4 5 6 7 8, sRGB 0', null],
    // cICP: primaries 1 (BT.709), transfer 13 (sRGB) or 8 (linear), no matrix, full range. H.273, tables 2 to 4.
    ['cICP 1 13 0 1', null],
    ['cICP 1 8 0 1', 1],
    // cICP rules over all others: PNG, 4.3.
    ['iCCP Some profile, gAMA 55556, cICP 1 13 0 1', null],
    ['sRGB 0, cICP 1 8 0 1', 1],
  ] as const)('%s means %s', (text, gamma) => {
    expect(obeyedGamma(chunks(text))).toBe(gamma);
  });
});

describe('chunks that cannot', () => {
  it.each([
    ['iCCP Display P3', 'iCCP', 'Display P3'],
    // A profile rules over sRGB and gAMA.
    ['sRGB 0, iCCP Display P3', 'iCCP', 'Display P3'],
    ['gAMA 45455, iCCP x', 'iCCP', 'x'],
    ['cICP 12 13 0 1', 'cICP', '12 13 0 1'],
    ['cICP 9 16 0 1', 'cICP', '9 16 0 1'],
    ['cICP 1 1 0 1', 'cICP', '1 1 0 1'],
    // A narrow range.
    ['cICP 1 13 0 0', 'cICP', '1 13 0 0'],
    // Display P3's primaries.
    [
      'gAMA 45455, cHRM 31270 32900 68000 32000 26500 69000 15000 6000',
      'cHRM',
      '31270 32900 68000 32000 26500 69000 15000 6000',
    ],
    ['cHRM 31270 32900', 'cHRM', '31270 32900'],
    ['gAMA 0', 'gAMA', '0'],
  ])('%s is refused', async (text, chunk, value) => {
    expect(await problemOf(() => obeyedGamma(chunks(text)))).toMatchObject({
      code: 'color-chunk',
      values: { chunk, value },
    });
  });
});
