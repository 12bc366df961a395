import { describe, expect, it } from 'vitest';
import { expandIndexed, type IndexedRaster, type StraightRaster } from '../../core/raster/raster.ts';
import { build, container, judged, pngOf } from '../fixtures/built.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted, texelAt } from '../fixtures/picture.ts';
import { chunk } from '../fixtures/rawpng.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { decodeSrgb, encodeSrgb } from '../reference/transfer.ts';

const u32 = (...values: number[]): number[] =>
  values.flatMap((value) => [value >>> 24, (value >>> 16) & 255, (value >>> 8) & 255, value & 255]);
const gama = (value: number): Uint8Array => chunk('gAMA', u32(value));
const srgb = chunk('sRGB', [0]);
const linearCicp = chunk('cICP', [1, 8, 0, 1]);
const chrm = chunk('cHRM', u32(31270, 32900, 68000, 32000, 26500, 69000, 15000, 6000));
const iccp = chunk('iCCP', [65, 0, 0, 0x78, 0x9c, 3, 0, 0, 0, 0, 1]);

const raster = withAlpha(noiseRaster(11, { width: 4, height: 2 }, 4, 8, 'noise'), 11, 2, 4);
const deep = noiseRaster(12, { width: 4, height: 2 }, 3, 16, 'noise');
const obey = treatment({ colorChunks: 'obey', kernel: both('box'), fill: 'none', png: { base: true } });
const light = (share: number, gamma: number): number => share ** (1 / gamma);

describe('an ignored chunk', () => {
  it.each([
    ['gAMA', gama(100000)],
    ['sRGB', srgb],
    ['cICP', linearCicp],
    ['cHRM', chrm],
    ['iCCP', iccp],
  ])('%s changes no pixel and is named in the manifest', async (name, bytes) => {
    const plain = await build(pngOf(raster), treatment());
    const tagged = await build(pngOf(raster, [bytes]), treatment());
    expect(tagged.files).toEqual(plain.files);
    expect({ ...tagged.manifest, sources: [] }).toEqual({ ...plain.manifest, sources: [] });
    expect(tagged.manifest.sources[0].colorChunks.map((each) => each.split(' ')[0])).toEqual([name]);
  });
});

describe('an obeyed chunk', () => {
  it.each([
    ['sRGB', srgb],
    ['cICP of sRGB', chunk('cICP', [1, 13, 0, 1])],
  ])('%s changes nothing', async (_, bytes) => {
    const plain = await build(pngOf(raster), obey);
    const tagged = await build(pngOf(raster, [bytes]), obey);
    expect(tagged.files).toEqual(plain.files);
    expect(tagged.manifest.notes).toEqual([]);
    expect((await build(pngOf(raster, [bytes]), { ...obey, png: { base: false } })).files.has('art/moss.0.png')).toBe(
      false,
    );
  });

  it.each([
    ['gAMA 45455', gama(45455), 0.45455],
    ['gAMA 55556', gama(55556), 0.55556],
    ['gAMA 100000', gama(100000), 1],
    ['cICP of linear light', linearCicp, 1],
  ])('%s says how codes stand for light; files hold sRGB', async (_, bytes, gamma) => {
    const { files, manifest } = await build(pngOf(raster, [bytes]), { ...obey, png: { base: false } });
    expect(manifest.notes).toEqual([`Level 0 is changed: colors encoded with gamma ${gamma} become sRGB.`]);
    const base = judged(files.get('art/moss.0.png'));
    each(raster, (x, y, texel) => {
      const stored = texelAt(base, x, y);
      expect(stored[3]).toBe(texel[3]);
      for (let c = 0; c < 3; c++)
        expect(Math.abs(stored[c] - encodeSrgb(light(texel[c] / 255, gamma)) * 255)).toBeLessThanOrEqual(0.501);
    });
    // Level 1 comes from the light of the source, not from the codes of level 0.
    const level = judged(files.get('art/moss.1.png'));
    each(level, (x, y, stored) => {
      const four = [0, 1].flatMap((v) => [0, 1].map((u) => texelAt(raster, 2 * x + u, 2 * y + v)));
      const alpha = four.reduce((sum, texel) => sum + texel[3], 0);
      for (let c = 0; c < 3 && alpha > 0; c++) {
        const mean = four.reduce((sum, texel) => sum + light(texel[c] / 255, gamma) * texel[3], 0) / alpha;
        expect(Math.abs(stored[c] - encodeSrgb(mean) * 255)).toBeLessThanOrEqual(0.501);
      }
    });
    const { levels, vkFormat } = container(files.get('art/moss.ktx2'), 8);
    expect(vkFormat).toBe(43);
    expect(levels[0].codes).toEqual(base.codes);
    expect(levels[1].codes).toEqual(level.codes);
  });

  it('is obeyed once where a container holds linear light', async () => {
    const { files } = await build(pngOf(deep, [gama(100000)]), obey);
    // Linear codes in, linear light out: bit for bit.
    const { codes } = container(files.get('art/moss.ktx2'), 16).levels[0];
    each(deep, (x, y, texel) =>
      expect(Array.from(codes.subarray((y * 4 + x) * 4, (y * 4 + x) * 4 + 3))).toEqual(texel),
    );
    const base = judged(files.get('art/moss.0.png'));
    each(deep, (x, y, texel) => {
      texelAt(base, x, y).forEach((code, c) => {
        expect(Math.abs(code - encodeSrgb(texel[c] / 65535) * 65535)).toBeLessThanOrEqual(0.55);
      });
    });
  });

  it('is obeyed once where color is premultiplied', async () => {
    const one = treatment({
      colorChunks: 'obey',
      outputs: ['ktx2'],
      kernel: both('box'),
      alpha: { store: 'premultiplied' },
    });
    const { codes } = container((await build(pngOf(raster, [gama(100000)]), one)).files.get('art/moss.ktx2'), 8)
      .levels[0];
    each(raster, (x, y, texel) => {
      for (let c = 0; c < 3; c++) {
        const exact = encodeSrgb(((texel[c] / 255) * texel[3]) / 255) * 255;
        expect(Math.abs(codes[(y * 4 + x) * 4 + c] - exact)).toBeLessThanOrEqual(0.501);
      }
    });
  });

  it.each(['nearest', 'majority', 'detail', 'epx', 'monotone'])(
    'is obeyed once where %s makes images from codes',
    async (name) => {
      const flat = painted({ width: 4, height: 4 }, 3, 8, () => [10, 100, 200]);
      const grows = name === 'epx' || name === 'monotone';
      const kernel = { minify: both(grows ? 'box' : name).minify, magnify: both(grows ? name : 'box').magnify };
      const one = { ...obey, kernel, derive: 'base' as const, targets: grows ? [{ name: '2x', scale: 2 }] : [] };
      const { files } = await build(pngOf(flat, [gama(100000)]), one);
      const expected = [10, 100, 200].map((code) => Math.round(encodeSrgb(code / 255) * 255));
      for (const path of [
        'art/moss.0.png',
        'art/moss.1.png',
        'art/moss.2.png',
        ...(grows ? ['art/moss.2x.png'] : []),
      ]) {
        expect([path, texelAt(judged(files.get(path)), 0, 0)]).toEqual([path, expected]);
      }
    },
  );

  it('gives sRGB where kernels weigh codes as they are', async () => {
    const row = painted({ width: 2, height: 1 }, 3, 8, (x) => (x === 0 ? [0, 50, 255] : [255, 50, 255]));
    const { files } = await build(pngOf(row, [gama(100000)]), { ...obey, light: 'code' });
    const fifty = Math.round(encodeSrgb(50 / 255) * 255);
    expect(texelAt(judged(files.get('art/moss.0.png')), 0, 0)).toEqual([0, fifty, 255]);
    // The mean of sRGB codes 0 and 255, half to even.
    expect(texelAt(judged(files.get('art/moss.1.png')), 0, 0)).toEqual([128, fifty, 255]);
  });

  it('is light to detail, too', async () => {
    // With lambda 0 detail is the plain area average.
    const row = painted({ width: 2, height: 1 }, 3, 8, (x) => (x === 0 ? [0, 50, 255] : [255, 50, 255]));
    const kernel = { minify: both('detail', { lambda: 0 }).minify, magnify: both('box').magnify };
    const { files } = await build(pngOf(row, [gama(100000)]), { ...obey, kernel, derive: 'base' });
    const codes = [0.5, 50 / 255, 1].map((share) => Math.round(encodeSrgb(share) * 255));
    expect(texelAt(judged(files.get('art/moss.1.png')), 0, 0)).toEqual(codes);
  });

  it('makes colors of indices', async () => {
    const palette = Uint8Array.of(50, 100, 0, 255, 255, 0, 128, 255);
    const extent = { width: 2, height: 2 };
    const art: IndexedRaster = {
      kind: 'indexed',
      extent,
      indexBits: 1,
      palette,
      alphaCount: 0,
      indices: Uint8Array.of(0, 1, 1, 0),
    };
    const one = { ...obey, kernel: both('nearest') };
    const indexed = await build(pngOf(art, [gama(100000)]), one);
    const expanded = await build(pngOf(expandIndexed(art), [gama(100000)]), one);
    expect(indexed.files).toEqual(expanded.files);
  });

  it('is obeyed in gutters of a sheet as in its cells', async () => {
    const sheet = painted({ width: 12, height: 6 }, 3, 8, () => [10, 100, 200]);
    const one = { ...obey, grid: { cell: [4, 4] as const, gutter: 1 } };
    const { files } = await build(pngOf(sheet, [gama(100000)]), one);
    const expected = [10, 100, 200].map((code) => Math.round(encodeSrgb(code / 255) * 255));
    each(judged(files.get('art/moss.0.png')), (x, y, texel) => expect([x, y, texel]).toEqual([x, y, expected]));
  });

  it('is not asked where the settings say that codes are linear light', async () => {
    const linear = { ...obey, transfer: 'linear' as const, png: { base: false } };
    const plain = await build(pngOf(raster), linear);
    const tagged = await build(pngOf(raster, [gama(45455)]), linear);
    expect(tagged.files).toEqual(plain.files);
    expect(tagged.manifest.notes).toEqual([]);
  });

  it('is not asked of what is no color', async () => {
    const one = treatment({ content: 'data', alpha: { use: 'data' }, colorChunks: 'obey' });
    const tagged = await build(pngOf(raster, [iccp]), one);
    expect(tagged.files).toEqual((await build(pngOf(raster), one)).files);
  });

  it('changes at depth 16 what it changes at 8', async () => {
    const { files } = await build(pngOf(raster, [gama(100000)]), { ...obey, depth: 16 });
    const base = judged(files.get('art/moss.0.png'));
    each(raster, (x, y, texel) => {
      const stored = texelAt(base, x, y);
      expect(stored[3]).toBe(texel[3] * 257);
      for (let c = 0; c < 3; c++)
        expect(Math.abs(stored[c] - encodeSrgb(texel[c] / 255) * 65535)).toBeLessThanOrEqual(0.6);
    });
  });

  it.each([
    ['iCCP', iccp, 'A'],
    ['cHRM', chrm, '31270 32900 68000 32000 26500 69000 15000 6000'],
    ['cICP', chunk('cICP', [9, 16, 0, 1]), '9 16 0 1'],
  ])('%s is refused in words', async (name, bytes, value) => {
    const problem = await problemOf(() => build(pngOf(raster, [bytes]), obey));
    expect(problem).toMatchObject({ code: 'color-chunk', values: { chunk: name, value } });
  });
});

it('knows gamma 45455 to be near sRGB and not it', () => {
  expect(Math.abs(light(0.5, 0.45455) - decodeSrgb(0.5))).toBeLessThan(0.005);
});

function each(raster: StraightRaster, visit: (x: number, y: number, texel: number[]) => void): void {
  for (let y = 0; y < raster.extent.height; y++) {
    for (let x = 0; x < raster.extent.width; x++) visit(x, y, texelAt(raster, x, y));
  }
}
