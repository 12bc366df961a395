import { describe, expect, test } from 'vitest';
import { openPng } from '../../core/codec/png/open.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { asJudged, decodeRgba, firstDifference, judgeRgba } from '../fixtures/judge.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { openTestData } from '../fixtures/testdata.ts';

/** Odd files that hold a whole image. */
const READABLE = [
  'F-exif-chunk-early.png', // eXIf before everything else, as the standard allows.
  'acid2.png', // tRNS and a background.
  'broken_iccp.png', // A profile that no one can decode; it is named and not decoded.
  'issue#1825.png', // Two profiles.
  'issue#202.png', // An animation; the still image is read.
  'issue#403.png', // A palette of one entry, with ones in the bits that pad the rows.
  'large-text-chunks-issue#337.png', // 137 081 bytes of text before the image data.
];

const REFUSED: Readonly<Record<string, readonly [code: string, values: Record<string, string | number>]>> = {
  // Ancillary chunks renamed without their CRC.
  'cicp_pq.png': ['png-chunk-crc', { chunk: 'cLLI' }],
  'issue#430.png': ['png-chunk-crc', { chunk: 'iCCP' }],
  'invalid_palette_index.png': ['png-palette-index', { found: 255, entries: 17 }],
  'x_consecutive_idat.png': ['png-chunk-order', { chunk: 'IDAT', after: 'gAMA' }],
  'x_ihdr_missing.png': ['png-chunk-crc', { chunk: 'IDAT', offset: 8 }],
  'x_image-issue#1075.png': ['png-promise', { expected: 1449 * (1 + 1024 * 3), found: 0 }],
  'x_interlaced_chck.png': ['png-chunk-crc', { chunk: 'IDAT' }],
  'x_issue#214.png': ['extent-out-of-range', { width: 0, height: 3 }],
  'x_issue#230.0.png': ['extent-out-of-range', { width: 4293328897, height: 0 }],
  'x_issue#230.1.png': ['extent-out-of-range', { width: 4294967295, height: 536883232 }],
  'x_unexpected_eof.png': ['png-chunk-name', { offset: 8 }],
};

const files = openTestData('badpng');

describe.skipIf(files === null)('Damaged and odd files', () => {
  test('are all expected', () => {
    expect([...files!.names].sort()).toEqual([...READABLE, ...Object.keys(REFUSED)].sort());
  });

  test.each(READABLE)('%s is read as the judge reads it', async (name) => {
    const bytes = files!.read(name);
    const ours = await decodeRgba(openPng(bytes, inflate));
    expect(firstDifference(asJudged(ours, bytes), judgeRgba(bytes))).toBeNull();
  });

  test.each(Object.entries(REFUSED))('%s is refused', async (name, [code, values]) => {
    const problem = await problemOf(async () => decodeRgba(openPng(files!.read(name), inflate)));
    expect(problem).toMatchObject({ code, values });
  });
});
