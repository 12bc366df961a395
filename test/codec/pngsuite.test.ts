import { describe, expect, test } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { plainFilters } from '../../core/codec/png/filters.ts';
import { openPng } from '../../core/codec/png/open.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { asJudged, decodeRgba, firstDifference, judgeRgba } from '../fixtures/judge.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { simdFilters } from '../fixtures/simd.ts';
import { openTestData } from '../fixtures/testdata.ts';

/** Damage as PngSuite's README describes it, with the problem it has to lead to. */
const DAMAGED: Readonly<Record<string, readonly [code: string, values: Record<string, string | number>]>> = {
  'xs1n0g01.png': ['png-signature', { found: '09 50 4e 47 0d 0a 1a 0a' }],
  'xs2n0g01.png': ['png-signature', { found: '89 51 4e 47 0d 0a 1a 0a' }],
  'xs4n0g01.png': ['png-signature', { found: '89 50 4e 67 0d 0a 1a 0a' }],
  'xs7n0g01.png': ['png-signature', { found: '89 50 4e 47 0d 0a 20 0a' }],
  'xcrn0g04.png': ['png-signature', { found: '89 50 4e 47 0d 0d 1a 0d' }],
  'xlfn0g04.png': ['png-signature', { found: '89 50 4e 47 0a 0a 1a 0a' }],
  'xhdn0g08.png': ['png-chunk-crc', { chunk: 'IHDR', offset: 8 }],
  'xcsn0g01.png': ['png-chunk-crc', { chunk: 'IDAT', offset: 49 }],
  'xc1n0g08.png': ['png-header', { field: 'color type', found: 1 }],
  'xc9n2c08.png': ['png-header', { field: 'color type', found: 9 }],
  'xd0n2c08.png': ['png-header', { found: 0, allowed: '8, 16' }],
  'xd3n2c08.png': ['png-header', { found: 3, allowed: '8, 16' }],
  'xd9n2c08.png': ['png-header', { found: 99, allowed: '8, 16' }],
  'xdtn0g01.png': ['png-missing-chunk', { chunk: 'IDAT', offset: 49, found: 'IEND' }],
};

const suite = openTestData('pngsuite');

describe.skipIf(suite === null)('PngSuite', () => {
  const names = suite?.names ?? [];
  const valid = names.filter((name) => !name.startsWith('x') && name !== 'PngSuite.png');

  test('is complete', () => {
    expect(valid).toHaveLength(161);
    expect(names.filter((name) => name.startsWith('x'))).toEqual(Object.keys(DAMAGED).sort());
  });

  test.each([...valid, 'PngSuite.png'])(
    '%s reads as the judge reads it, by plain filters and by the kernels',
    async (name) => {
      const bytes = suite!.read(name);
      const judged = judgeRgba(bytes);
      for (const filters of [plainFilters, simdFilters()]) {
        const ours = await decodeRgba(openPng(bytes, inflate, { filters }));
        expect(firstDifference(asJudged(ours, bytes), judged)).toBeNull();
      }
    },
  );

  test.each(Object.entries(DAMAGED))('%s is refused', async (name, [code, values]) => {
    const problem = await problemOf(async () => decodeImage(openPng(suite!.read(name), inflate)));
    expect(problem).toMatchObject({ code, values });
  });
});
