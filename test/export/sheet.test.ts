import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { PNG } from 'pngjs';
import { describe, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import { SHEET_WIDTH } from '../../core/export/block.ts';
import type { Box } from '../../core/export/canvas.ts';
import type { ProofOrder } from '../../core/export/order.ts';
import { makeSheet, type Sheet } from '../../core/export/sheet.ts';
import { expandIndexed, type StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { top } from '../house/tree.ts';
import { demoOrder, goOn, ports, rasterOrder } from './orders.ts';

const DEMO = [
  'foliage/alder-twig.png',
  'sprites/wick.png',
  'sprites/wick-walk.png',
  'ground/cobbles_normal.png',
  'props/chain-link.tga',
  'ui/lantern.png',
  'terrain/bog.png',
  'props/boiler-plate_orm.png',
] as const;

const sheets = new Map<string, Promise<Sheet>>();

function sheetOf(path: string): Promise<Sheet> {
  const known = sheets.get(path) ?? makeSheet(demoOrder(path), ports, goOn);
  sheets.set(path, known);
  return known;
}

/** RGB of a box of a sheet, as pngjs reads the file; of one pixel a texel. */
function cut({ png }: Sheet, box: Box, zoom = 1): Buffer {
  const { data, width } = PNG.sync.read(Buffer.from(png));
  const bytes: number[] = [];
  for (let y = box.top; y < box.top + box.height; y += zoom) {
    for (let x = box.left; x < box.left + box.width; x += zoom) {
      const at = (y * width + x) * 4;
      bytes.push(data[at], data[at + 1], data[at + 2]);
    }
  }
  return Buffer.from(bytes);
}

async function builtLevel(
  order: ProofOrder,
  level: number,
  treatment: Treatment = order.settings.treatment,
): Promise<StraightRaster> {
  const source = await decodeImage(openImage(order.image, order.name, inflate));
  const { raster } = buildChain(source, treatment).images.find((each) => each.level === level)!;
  return raster.kind === 'indexed' ? expandIndexed(raster) : (raster as StraightRaster);
}

describe.each(DEMO)('the sheet of %s', (path) => {
  test('is as wide as every sheet, and every text lies inside, clear of other texts and of every print', async () => {
    const { png, texts, places } = await sheetOf(path);
    const { width, height } = PNG.sync.read(Buffer.from(png));
    expect(width).toBe(SHEET_WIDTH);
    const inside = (box: Box) =>
      box.left >= 0 && box.top >= 0 && box.left + box.width <= width && box.top + box.height <= height;
    expect([...texts, ...places].filter(({ box }) => !inside(box))).toEqual([]);
    const clashes = texts.flatMap((one, i) => [
      ...texts.slice(i + 1).filter((other) => overlap(one.box, other.box)),
      ...places.filter((place) => overlap(one.box, place.box)),
    ]);
    expect(clashes).toEqual([]);
    const prints = places.flatMap((one, i) => places.slice(i + 1).filter((other) => overlap(one.box, other.box)));
    expect(prints).toEqual([]);
  });

  test('names the texture, its treatment and every target, and says how it is shown', async () => {
    const { texts, places } = await sheetOf(path);
    const all = texts.map(({ text }) => text).join('\n');
    const { name, settings } = demoOrder(path);
    expect(all).toContain(name);
    expect(all).toContain(settings.globs![0].slice(0, 12));
    for (const { name: target } of settings.treatment.targets) {
      expect(places.some(({ kind, label }) => kind === 'target' && label === target)).toBe(true);
    }
    expect(all).toMatch(/depends on the screen/);
  });
});

function overlap(one: Box, other: Box): boolean {
  return (
    one.left < other.left + other.width &&
    other.left < one.left + one.width &&
    one.top < other.top + other.height &&
    other.top < one.top + one.height
  );
}

/** Codes that tables of light in float32 are off by: 2^-24 of a light near 1, at most 13 times steeper in the dark, times 255. */
const FLOAT_CODES = 1e-3;

describe('prints on a sheet, as pngjs reads them', () => {
  test('opaque levels are the built codes, byte for byte, at true size', async () => {
    const order = demoOrder('ground/cobbles_normal.png');
    const sheet = await sheetOf('ground/cobbles_normal.png');
    for (const level of [0, 1, 3, 8]) {
      const place = sheet.places.find(({ kind, label }) => kind === 'target' && label === `level ${level}`)!;
      expect(cut(sheet, place.box).equals(Buffer.from((await builtLevel(order, level)).codes))).toBe(true);
    }
  });

  test('compared kernels are their own levels, magnified and at true size', async () => {
    const order = demoOrder('ground/cobbles_normal.png');
    const sheet = await sheetOf('ground/cobbles_normal.png');
    for (const name of ['mitchell', 'lanczos3']) {
      const choice = { name, params: name === 'mitchell' ? { b: 1 / 3, c: 1 / 3 } : {} };
      const treatment = { ...order.settings.treatment, kernel: { minify: choice, magnify: choice } };
      const codes = Buffer.from((await builtLevel(order, 1, treatment)).codes);
      const places = sheet.places.filter(({ kind, label }) => kind === 'kernel' && label === name);
      expect(places.map(({ zoom }) => zoom)).toEqual([2, 1]);
      for (const { box, zoom } of places) expect(cut(sheet, box, zoom).equals(codes)).toBe(true);
    }
  });

  test('what is transparent shows the named backdrop; over black and white it is blended in light and rounded', async () => {
    const raster = noiseRaster(5, { width: 40, height: 24 }, 4, 8, 'noise');
    for (const [backdrop, light] of [
      ['black', 0],
      ['white', 1],
    ] as const) {
      const order = await rasterOrder(raster, {}, { state: { version: 1, backdrop } });
      const sheet = await makeSheet(order, ports, goOn);
      expect(sheet.texts.map(({ text }) => text).join(' ')).toContain(`transparent shows ${backdrop}`);
      const place = sheet.places.find(({ label }) => label === 'level 0')!;
      const shown = cut(sheet, place.box);
      // The formulas of IEC 61966-2-1 in double precision.
      const decode = (code: number) => (code <= 10 ? code / 255 / 12.92 : ((code / 255 + 0.055) / 1.055) ** 2.4);
      const encode = (value: number) => (value <= 0.0031308 ? value * 12.92 : 1.055 * value ** (1 / 2.4) - 0.055) * 255;
      for (let texel = 0; texel < 40 * 24; texel++) {
        const a = raster.codes[texel * 4 + 3] / 255;
        for (let i = 0; i < 3; i++) {
          const exact = encode(decode(raster.codes[texel * 4 + i]) * a + light * (1 - a));
          expect(Math.abs(shown[texel * 3 + i] - exact)).toBeLessThanOrEqual(0.5 + FLOAT_CODES);
        }
      }
    }
  });

  test('a mask is shown as it is tested, over a checker of squares', async () => {
    const order = demoOrder('foliage/alder-twig.png');
    const sheet = await sheetOf('foliage/alder-twig.png');
    const { box } = sheet.places.find(({ kind, label }) => kind === 'target' && label === 'level 1')!;
    const shown = cut(sheet, box);
    const { codes } = await builtLevel(order, 1);
    for (let texel = 0; texel < codes.length / 4; texel++) {
      const [x, y] = [texel % 128, Math.floor(texel / 128)];
      const gray = (Math.floor(x / 8) + Math.floor(y / 8)) % 2 === 0 ? 142 : 102;
      const expected = codes[texel * 4 + 3] >= 128 ? [...codes.slice(texel * 4, texel * 4 + 3)] : [gray, gray, gray];
      if (shown.compare(Buffer.from(expected), 0, 3, texel * 3, texel * 3 + 3) !== 0) {
        expect([...shown.subarray(texel * 3, texel * 3 + 3)]).toEqual(expected);
      }
    }
  });
});

describe('a sheet', () => {
  test('of the leaf is the one in README; `sizeproof proof` with `--sheet` makes it anew', async () => {
    const shown = PNG.sync.read(readFileSync(join(top, 'test/demo/picture/leaf-sheet.png')));
    const drawn = PNG.sync.read(Buffer.from((await sheetOf('foliage/alder-twig.png')).png));
    expect([shown.width, shown.height]).toEqual([drawn.width, drawn.height]);
    expect(shown.data.equals(drawn.data)).toBe(true);
  });

  test('is the same for the same order', async () => {
    const [one, other] = [await sheetOf('ui/lantern.png'), await makeSheet(demoOrder('ui/lantern.png'), ports, goOn)];
    expect(Buffer.from(one.png).equals(Buffer.from(other.png))).toBe(true);
  });

  test('takes prints, sight, size and view from what a page keeps, and nothing that does not fit', async () => {
    const state = {
      version: 1,
      sight: { kind: 'target', name: '20x20' },
      typed: [{ name: '20x20', extent: [20, 20] }],
      slots: [
        { id: 0, kernel: null, change: {} },
        { id: 4, kernel: { name: 'gaussian', params: { sigma: 0.75 } }, change: { light: 'code' } },
      ],
      show: 'a',
      backdrop: 'plaid',
      lamp: 'none',
    };
    const { texts, places } = await makeSheet(demoOrder('ui/lantern.png', { state }), ports, goOn);
    const all = texts.map(({ text }) => text).join('\n');
    expect(places.filter(({ kind }) => kind === 'kernel').map(({ label }) => label)).toEqual([
      ...['mitchell', 'mitchell', 'gaussian', 'gaussian'],
    ]);
    expect(all).toContain('Kernels at 20x20');
    expect(all).toContain('sigma 0.75, in code space');
    expect(all).toContain('The channel a is shown alone');
    const broken = {
      version: 1,
      slots: [{ id: 1, kernel: { name: 'magic', params: {} }, change: {} }],
      sight: 7,
      typed: {},
    };
    const plain = await makeSheet(demoOrder('ui/lantern.png', { state: broken }), ports, goOn);
    expect(Buffer.from(plain.png).equals(Buffer.from((await sheetOf('ui/lantern.png')).png))).toBe(true);
  });

  test('cuts what is too large to its middle, and says so', async () => {
    const raster = noiseRaster(3, { width: 2000, height: 1100 }, 1, 8, 'noise');
    const order = await rasterOrder(raster, { levels: { last: 1 }, kernel: 'box', content: 'data' });
    const { texts, places, ...rest } = await makeSheet(order, ports, goOn);
    const all = texts.map(({ text }) => text).join('\n');
    const place = places.find(({ label }) => label === 'level 0')!;
    expect(place.box).toMatchObject({ width: 416, height: 416 });
    expect(all).toContain('its middle 416×416');
    expect(all).toContain('2000×1100');
    expect(all).toMatch(/too large for the sheet/);
    const shown = cut({ texts, places, ...rest }, place.box);
    expect(shown[0]).toBe(raster.codes[342 * 2000 + 792]);
    expect(places.find(({ label }) => label === 'level 1')!.box).toMatchObject({ width: 1000, height: 550 });
  });

  test('says in amber words what passes its limit', async () => {
    const order = demoOrder('ui/lantern.png', {
      state: {
        version: 1,
        slots: [
          { id: 0, kernel: null, change: {} },
          { id: 1, kernel: { name: 'lanczos3', params: {} }, change: {} },
        ],
      },
    });
    const { texts } = await makeSheet(order, ports, goOn);
    expect(texts.map(({ text }) => text).join('\n')).toMatch(/! halo [\d.]+, over 24/);
  });

  test('tells of a kernel that cannot make an image in words in its place', async () => {
    const state = {
      version: 1,
      sight: { kind: 'target', name: '2.5x' },
      typed: [{ name: '2.5x', scale: 2.5 }],
      slots: [
        { id: 0, kernel: null, change: {} },
        { id: 1, kernel: { name: 'epx', params: {} }, change: {} },
      ],
    };
    const raster = noiseRaster(3, { width: 20, height: 20 }, 3, 8, 'noise');
    const { places, texts } = await makeSheet(await rasterOrder(raster, {}, { state }), ports, goOn);
    const kernels = places.filter(({ kind }) => kind === 'kernel').map(({ label }) => label);
    expect(new Set(kernels)).toEqual(new Set(['kaiser']));
    expect(texts.map(({ text }) => text).join(' ')).toContain('Kernel epx magnifies by whole factors');
  });

  test('of a damaged file is refused, and stops when it is asked to', async () => {
    const order = demoOrder('ui/lantern.png');
    const damaged = { ...order, image: order.image.slice(0, 60) };
    expect((await problemOf(() => makeSheet(damaged, ports, goOn)))?.code).toBe('png-file-truncated');
    await expect(makeSheet(order, ports, { cancelled: true })).rejects.toThrow('cancelled');
  });
});
