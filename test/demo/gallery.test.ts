import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';

import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { readTree, top } from '../house/tree.ts';
import { gallery } from './paint/gallery.ts';
import { paintIcon } from './paint/icon.ts';

/** What all sources of the demo may take of everybody's clone. */
const MOST_BYTES = 1_200_000;

const committed = (path: string): Uint8Array => readFileSync(join(top, 'test', 'demo', path));

async function decoded(path: string): Promise<StraightRaster | IndexedRaster> {
  return decodeImage(openImage(committed(path), path, inflate));
}

async function straight(path: string): Promise<StraightRaster> {
  const raster = await decoded(path);
  if (raster.kind !== 'straight')
    throw new TypeError(`Expected a straight raster for ${path} but received ${raster.kind}`);
  return raster;
}

test.each(gallery)('$path is what its painter paints', async ({ path, paint }) => {
  const { codes: ours, ...shape } = flat(await decoded(path));
  const { codes: theirs, ...painted } = flat(paint());
  expect(shape).toEqual(painted);
  expect(Buffer.compare(bytesOf(ours), bytesOf(theirs))).toBe(0);
});

test('the icon is what its painter paints', async () => {
  const icon = await decodeImage(openImage(readFileSync(join(top, 'icon.png')), 'icon.png', inflate));
  const painted = paintIcon();
  expect(icon.extent).toEqual({ width: 256, height: 256 });
  expect(Buffer.compare(bytesOf(flat(icon).codes), bytesOf(painted.codes))).toBe(0);
});

test('every image of the demo has a painter', () => {
  const images = readTree('test/demo', /\.(png|tga)$/).map((each) => each.path.replace('test/demo/', ''));
  // README's pictures are made from them, and tested where they are made.
  const sources = images.filter((path) => !path.startsWith('picture/'));
  expect(sources.sort()).toEqual(gallery.map((each) => each.path).sort());
});

test('the demo is small', () => {
  expect(gallery.reduce((sum, { path }) => sum + committed(path).length, 0)).toBeLessThan(MOST_BYTES);
});

test.each([
  'ground/cobbles.png',
  'ground/cobbles_normal.png',
  'ground/cobbles_rough.tga',
  'props/chain-link.tga',
  'props/boiler-plate_orm.png',
])('%s closes on itself', async (path) => {
  for (const steps of stepsBetween(await straight(path))) {
    const inside = steps.slice(1);
    expect(steps[0]).toBeLessThanOrEqual(Math.max(...inside));
  }
});

test.each(['foliage/alder-twig.png', 'props/chain-link.tga'])(
  '%s is black under alpha 0, and only there',
  async (path) => {
    const { codes } = await straight(path);
    const sums = Array.from({ length: codes.length / 4 }, (_, texel) => {
      const [red, green, blue, alpha] = codes.subarray(texel * 4, texel * 4 + 4);
      return { color: red + green + blue, alpha };
    });
    const hidden = sums.filter((each) => each.alpha === 0);
    expect(hidden.length).toBeGreaterThan(sums.length / 4);
    expect(hidden.filter((each) => each.color > 0)).toEqual([]);
    expect(sums.filter((each) => each.alpha > 0 && each.color === 0)).toEqual([]);
  },
);

test('normals are of unit length but for rounding', async () => {
  const { codes } = await straight('ground/cobbles_normal.png');
  // Three parts, each off by half a code of 127.5 at most.
  const most = (Math.sqrt(3) * 0.5) / 127.5;
  for (let at = 0; at < codes.length; at += 3) {
    const [x, y, z] = [0, 1, 2].map((channel) => codes[at + channel] / 127.5 - 1);
    expect(Math.abs(Math.sqrt(x * x + y * y + z * z) - 1)).toBeLessThanOrEqual(most);
  }
});

test('the height map has detail that 8 bits would lose', async () => {
  const { codes, depth } = await straight('terrain/bog.png');
  expect(depth).toBe(16);
  const codes8 = new Set(Array.from(codes, (code) => code >> 8));
  expect(new Set(codes).size).toBeGreaterThan(codes8.size * 64);
});

/** Mean steps between neighboring columns, then rows: the first of each across the tile's edge, then from edge to edge. */
function stepsBetween({ extent, channels, codes }: StraightRaster): [columns: number[], rows: number[]] {
  const { width, height } = extent;
  const code = (x: number, y: number, channel: number): number => codes[(y * width + x) * channels + channel];
  const mean = (length: number, difference: (along: number, channel: number) => number): number => {
    let sum = 0;
    for (let along = 0; along < length; along++) {
      for (let channel = 0; channel < channels; channel++) sum += Math.abs(difference(along, channel));
    }
    return sum / (length * channels);
  };
  const columns = Array.from({ length: width }, (_, x) =>
    mean(height, (y, channel) => code(x, y, channel) - code((x + width - 1) % width, y, channel)),
  );
  const rows = Array.from({ length: height }, (_, y) =>
    mean(width, (x, channel) => code(x, y, channel) - code(x, (y + height - 1) % height, channel)),
  );
  return [columns, rows];
}

/** Everything a raster holds, its texels apart. */
function flat(raster: StraightRaster | IndexedRaster) {
  if (raster.kind === 'straight') return raster;
  const { indices, palette, ...rest } = raster;
  return { ...rest, palette: [...palette], codes: indices };
}

function bytesOf(codes: Uint8Array | Uint16Array): Uint8Array {
  return new Uint8Array(codes.buffer, codes.byteOffset, codes.byteLength);
}
