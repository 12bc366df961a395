import Pica from 'pica';
import { describe, expect, it } from 'vitest';
import { noiseRaster } from '../fixtures/noise.ts';
import { both } from '../fixtures/treatment.ts';
import { filters } from '../laws/filters.ts';
import { resampleDoubles } from '../reference/resample.ts';

// pica resizes 8-bit codes with 14-bit taps and keeps 15 bits between its passes; aligned centers, taps cut at the edge and
// renormalised. So the interior alone is compared, in code space, on mid-range data: it clamps negatives between passes.

const pica = new Pica({ features: ['js'] });

describe.each(filters)('$name against pica', (filter) => {
  it.each([
    ['lanczos2', 'lanczos2', 32, 2],
    ['lanczos3', 'lanczos3', 32, 3],
    ['lanczos2', 'lanczos2', 40, 2],
    ['lanczos3', 'lanczos3', 40, 3],
    ['lanczos3', 'lanczos3', 16, 3],
    ['lanczos2', 'lanczos2', 128, 2],
    ['lanczos3', 'lanczos3', 128, 3],
    ['box', 'box', 32, 1],
  ])('%s is its %s from 64 to %i', async (ours, theirs, to, support) => {
    const source = noiseRaster(3, { width: 64, height: 64 }, 3, 8, 'middle');
    const rgba = new Uint8Array(64 * 64 * 4).fill(255);
    for (let texel = 0; texel < 64 * 64; texel++) rgba.set(source.codes.subarray(texel * 3, texel * 3 + 3), texel * 4);
    const judged = await pica.resizeBuffer({
      src: rgba,
      width: 64,
      height: 64,
      toWidth: to,
      toHeight: to,
      filter: theirs,
    });
    const image = { width: 64, height: 64, channels: 3, values: Float64Array.from(source.codes) };
    const result = filter.filter(image, { width: to, height: to }, both(ours), {
      x: 'clamp-to-edge',
      y: 'clamp-to-edge',
    });
    // Texels whose kernel reaches over the edge: its support in target texels, or in source texels magnified.
    const rim = Math.ceil(support * Math.max(1, to / 64)) + 1;
    let worst = 0;
    for (let y = rim; y < to - rim; y++) {
      for (let x = rim; x < to - rim; x++) {
        for (let c = 0; c < 3; c++) {
          const code = Math.round(result.values[(y * to + x) * 3 + c]);
          worst = Math.max(worst, Math.abs(code - judged[(y * to + x) * 4 + c]));
        }
      }
    }
    expect(worst).toBeLessThanOrEqual(1);
  });
});

// The judges can tell: a kernel that is not the one asked for lies further away than any tolerance above.
it('tells lanczos2 from lanczos3', () => {
  const source = noiseRaster(3, { width: 64, height: 64 }, 1, 8, 'middle');
  const image = { width: 64, height: 64, channels: 1, values: Float64Array.from(source.codes) };
  const wrap = { x: 'clamp-to-edge', y: 'clamp-to-edge' } as const;
  const [two, three] = ['lanczos2', 'lanczos3'].map(
    (name) => resampleDoubles(image, { width: 32, height: 32 }, both(name), wrap).values,
  );
  expect(Math.max(...two.map((value, i) => Math.abs(value - three[i])))).toBeGreaterThan(3);
});
