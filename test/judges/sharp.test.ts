import sharp from 'sharp';
import { describe, expect, it } from 'vitest';
import { numbers } from '../fixtures/noise.ts';
import { both } from '../fixtures/treatment.ts';
import { filters } from '../laws/filters.ts';
import { doubles } from '../reference/doubles.ts';

// sharp (libvips) resamples floats with the same conventions as ours: aligned centers, kernel stretched when minifying,
// normalised taps, clamped edges. At ratio 2 all its phases lie on the 1/64 steps of its phase table and it does not shrink
// by boxes first, so only there is it exact; enlarging, its releases up to 8.18 sample half a target texel off.

const clamped = { x: 'clamp-to-edge', y: 'clamp-to-edge' } as const;

const ROUTES = [
  ['triangle', 'linear'],
  ['catmull-rom', 'cubic'],
  ['mitchell', 'mitchell'],
  ['lanczos2', 'lanczos2'],
  ['lanczos3', 'lanczos3'],
] as const;

describe.each(filters)('$name against sharp, floats, two to one', (filter) => {
  it.each(ROUTES)('%s is its %s', async (ours, theirs) => {
    const next = numbers(5);
    const image = doubles(64, 64, 1);
    // Within 30 % and 70 %: sharp clips what leaves the range. It gets its floats as 0..65535.
    for (let i = 0; i < image.values.length; i++) image.values[i] = Math.fround(0.3 + (0.4 * next()) / 2 ** 32);
    const { data } = await sharp(
      Float32Array.from(image.values, (value) => value * 65535),
      {
        raw: { width: 64, height: 64, channels: 1 },
      },
    )
      .resize(32, 32, { kernel: theirs, fit: 'fill' })
      .toColorspace('grey16')
      .raw({ depth: 'float' })
      .toBuffer({ resolveWithObject: true });
    const judged = new Float32Array(data.buffer, data.byteOffset, 32 * 32);
    const result = filter.filter(image, { width: 32, height: 32 }, both(ours), clamped);
    // It cuts its results to whole codes of 16 bits: less than one code below ours.
    let worst = 0;
    result.values.forEach((value, i) => {
      worst = Math.max(worst, Math.abs(value * 65535 - 0.5 - judged[i]));
    });
    expect(worst).toBeLessThanOrEqual(0.5 + 0.05);
  });
});
