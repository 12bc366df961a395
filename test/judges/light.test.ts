import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { noiseRaster } from '../fixtures/noise.ts';
import { painted } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { builders } from '../laws/builders.ts';

// A whole level in linear light against sharp's own route: to scRGB, resize, back to sRGB.

describe.each(builders)('$name against sharp in linear light', (builder) => {
  it.each([
    ['triangle', 'linear'],
    ['catmull-rom', 'cubic'],
    ['mitchell', 'mitchell'],
    ['lanczos3', 'lanczos3'],
  ] as const)('%s differs by one code at most on mid-range data', async (ours, theirs) => {
    const image = noiseRaster(9, { width: 64, height: 64 }, 3, 8, 'middle');
    const judged = await sharp(image.codes, { raw: { width: 64, height: 64, channels: 3 } })
      .pipelineColorspace('scrgb')
      .resize(32, 32, { kernel: theirs, fit: 'fill' })
      .toColorspace('srgb')
      .raw()
      .toBuffer();
    const [, level] = builder.levels(image, treatment({ kernel: both(ours) }));
    expect(judged.length).toBe(level.codes.length);
    // Its tables of scRGB have fewer steps than our thresholds: about a fifth of the codes differ, by one.
    let worst = 0;
    level.codes.forEach((code, i) => {
      worst = Math.max(worst, Math.abs(code - judged[i]));
    });
    expect(worst).toBeLessThanOrEqual(1);
  });

  it('agrees that a checkerboard is 188', async () => {
    const board = painted({ width: 32, height: 32 }, 3, 8, (x, y) => ((x + y) % 2 === 0 ? [0, 0, 0] : [255, 255, 255]));
    const judged = await sharp(board.codes, { raw: { width: 32, height: 32, channels: 3 } })
      .pipelineColorspace('scrgb')
      .resize(16, 16, { kernel: 'linear', fit: 'fill' })
      .toColorspace('srgb')
      .raw()
      .toBuffer();
    const [, level] = builder.levels(board, treatment({ kernel: both('box') }));
    // Away from the edge, where a tent sees half of each.
    const middle = (8 * 16 + 8) * 3;
    expect([judged[middle], level.codes[middle]]).toEqual([188, 188]);
  });
});
