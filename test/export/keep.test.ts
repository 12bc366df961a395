import { describe, expect, test } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import { isLarge, keepMiddle } from '../../core/export/keep.ts';
import { SOURCE_LIMIT } from '../../core/export/order.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { demoOrder, rasterOrder } from './orders.ts';

describe('the middle of a source', () => {
  test('is its own texels, begins where eight levels begin a texel, and says where', async () => {
    const raster = noiseRaster(2, { width: 3000, height: 40 }, 1, 8, 'noise');
    const kept = await keepMiddle(await rasterOrder(raster, { content: 'data' }), inflate);
    const cut = (await decodeImage(openImage(kept.image, kept.name, inflate))) as StraightRaster;
    expect(cut.extent).toEqual({ width: 2048, height: 40 });
    for (const y of [0, 39]) {
      const row = raster.codes.subarray(y * 3000 + 256, y * 3000 + 256 + 2048);
      expect(Buffer.from(cut.codes.subarray(y * 2048, (y + 1) * 2048)).equals(Buffer.from(row))).toBe(true);
    }
    expect(kept.remark).toContain('2048×40 of 3000×40');
    expect(kept.remark).toContain('256, 0');
  });

  test('keeps whole cells of a grid', async () => {
    const raster = noiseRaster(2, { width: 3000, height: 60 }, 1, 8, 'noise');
    const order = await rasterOrder(raster, {
      content: 'data',
      grid: { cell: [58, 58], gutter: 1 },
      levels: { last: 0 },
    });
    const kept = await keepMiddle(order, inflate);
    const { header } = openImage(kept.image, kept.name, inflate);
    expect(header.extent).toEqual({ width: 2040, height: 60 });
  });

  test('is asked for above 50 MB, the roughness map counted in', () => {
    const order = demoOrder('ui/lantern.png');
    const half = new Uint8Array(SOURCE_LIMIT / 2);
    expect(isLarge({ ...order, image: half, roughness: half })).toBe(false);
    expect(isLarge({ ...order, image: half, roughness: new Uint8Array(SOURCE_LIMIT / 2 + 1) })).toBe(true);
  });
});
