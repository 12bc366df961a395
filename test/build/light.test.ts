import { describe, expect, it } from 'vitest';
import type { StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { build, container, judged, pngOf } from '../fixtures/built.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted, texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { referenceChain } from '../reference/chain.ts';
import { decodeSrgb, encodeSrgb } from '../reference/transfer.ts';

// What the numbers in the files stand for, against doubles worked out from the source.

const RGBA8_SRGB = 43;
const RGBA16_UNORM = 91;
const deep = withAlpha(noiseRaster(7, { width: 6, height: 4 }, 4, 16, 'noise'), 7, 2, 4);
const shallow = withAlpha(noiseRaster(8, { width: 6, height: 4 }, 4, 8, 'noise'), 8, 2, 4);

describe('16-bit sRGB color', () => {
  it('is sRGB in PNG and linear light in KTX2, each within a code of doubles', async () => {
    const one = treatment({ kernel: both('box'), png: { base: true }, fill: 'none' });
    const { files } = await build(pngOf(deep), one);
    const { vkFormat, levels } = container(files.get('art/moss.ktx2'), 16);
    expect(vkFormat).toBe(RGBA16_UNORM);
    expect(levels.length).toBe(3);
    levels.forEach(({ codes, extent }, level) => {
      const png = judged(files.get(`art/moss.${level}.png`));
      expect(png.depth).toBe(16);
      eachTexel({ ...png, extent }, (x, y, texel) => {
        const { color, alpha } = boxed(deep, level, x, y);
        const stored = texelOf(codes, extent.width, x, y);
        for (let channel = 0; channel < 3; channel++) {
          // Hidden color keeps its codes at level 0; below it is black.
          const hidden = alpha === 0 && level > 0;
          const light = hidden ? 0 : color[channel];
          expect(Math.abs(stored[channel] - light * 65535)).toBeLessThanOrEqual(1);
          expect(Math.abs(texel[channel] - encodeSrgb(light) * 65535)).toBeLessThanOrEqual(1);
        }
        for (const each of [stored[3], texel[3]]) expect(Math.abs(each - alpha * 65535)).toBeLessThanOrEqual(1);
      });
    });
    expect(judged(files.get('art/moss.0.png')).codes).toEqual(deep.codes);
  });

  it('is linear light in KTX2 where codes were filtered as they are', async () => {
    const row = painted({ width: 2, height: 1 }, 3, 16, (x) => (x === 0 ? [10000, 0, 65535] : [50000, 0, 65535]));
    const one = treatment({ kernel: both('box'), light: 'code' });
    const { files } = await build(pngOf(row), one);
    const { levels } = container(files.get('art/moss.ktx2'), 16);
    const expected = [
      [10000, 0, 65535],
      [30000, 0, 65535],
    ].map((codes) => codes.map((code) => Math.round(decodeSrgb(code / 65535) * 65535)));
    levels.forEach(({ codes }, level) => {
      expect(Array.from(codes.subarray(0, 4))).toEqual([...expected[level], 65535]);
    });
    expect(texelAt(judged(files.get('art/moss.1.png')), 0, 0)).toEqual([30000, 0, 65535]);
  });

  it('is stored as it is where it is linear already', async () => {
    const { files } = await build(pngOf(deep), treatment({ transfer: 'linear', levels: { first: 0, last: 0 } }));
    expect(container(files.get('art/moss.ktx2'), 16).levels[0].codes).toEqual(deep.codes);
  });

  it('is linear light in cells of a sheet, gutters and all', async () => {
    const sheet = noiseRaster(5, { width: 12, height: 6 }, 3, 16, 'noise');
    const one = treatment({ outputs: ['ktx2'], grid: { cell: [4, 4], gutter: 1 } });
    const { codes } = container((await build(pngOf(sheet), one)).files.get('art/moss.ktx2'), 16).levels[0];
    eachTexel(sheet, (x, y, texel) => {
      const stored = texelOf(codes, 12, x, y);
      texel.forEach((code, channel) => {
        expect(Math.abs(stored[channel] - decodeSrgb(code / 65535) * 65535)).toBeLessThanOrEqual(0.51);
      });
    });
  });
});

describe('a premultiplied container', () => {
  const cases: [string, StraightRaster, Partial<Treatment>][] = [
    ['8-bit sRGB', shallow, {}],
    ['8-bit linear', shallow, { transfer: 'linear' }],
    ['16-bit sRGB', deep, {}],
    ['16-bit linear', deep, { transfer: 'linear' }],
    ['8-bit sRGB filtered as codes', shallow, { light: 'code' }],
    ['16-bit sRGB filtered as codes', deep, { light: 'code' }],
    ['8-bit sRGB moved', shallow, { kernel: both('nearest') }],
    ['16-bit sRGB moved', deep, { kernel: both('majority'), derive: 'base' }],
  ];
  it.each(cases)('of %s holds light times alpha in every texel', async (_, raster, keys) => {
    const straight = treatment({ outputs: ['ktx2'], kernel: both('box'), fill: 'none', ...keys });
    const one = { ...straight, alpha: { ...straight.alpha, store: 'premultiplied' } as const };
    const { files } = await build(pngOf(raster), one);
    const read = container(files.get('art/moss.ktx2'), raster.depth);
    expect(read.premultiplied).toBe(true);
    expect(read.vkFormat).toBe(raster.depth === 16 ? RGBA16_UNORM : one.transfer === 'srgb' ? RGBA8_SRGB : 37);
    const max = raster.depth === 8 ? 255 : 65535;
    const coded = one.transfer === 'srgb';
    const encoded = coded && raster.depth === 8;
    const moved = await build(pngOf(raster), { ...straight, outputs: ['png'], png: { base: true } });
    read.levels.forEach(({ codes, extent }, level) => {
      for (let y = 0; y < extent.height; y++) {
        for (let x = 0; x < extent.width; x++) {
          const stored = texelOf(codes, extent.width, x, y);
          const { color, alpha } = straightOf(
            raster,
            one,
            judged(moved.files.get(`art/moss.${level}.png`)),
            level,
            x,
            y,
          );
          expect(Math.abs(stored[3] - alpha * max)).toBeLessThanOrEqual(0.51);
          for (let channel = 0; channel < 3; channel++) {
            const light = color[channel] * alpha;
            expect(Math.abs(stored[channel] - (encoded ? encodeSrgb(light) : light) * max)).toBeLessThanOrEqual(0.55);
            const through = (encoded ? encodeSrgb(alpha) : alpha) * max;
            expect(stored[channel]).toBeLessThanOrEqual(Math.round(through));
          }
        }
      }
    });
  });

  it('never lets color above alpha where a kernel overshoots', async () => {
    // Alpha is even, so that color overshoots and alpha does not.
    const edge = painted({ width: 16, height: 16 }, 4, 8, (x, y) =>
      x + y < 14 ? [255, 255, 255, 100] : [0, 0, 0, 100],
    );
    for (const transfer of ['srgb', 'linear'] as const) {
      const one = treatment({
        outputs: ['ktx2'],
        transfer,
        kernel: both('lanczos3'),
        alpha: { store: 'premultiplied' },
      });
      for (const { codes } of container((await build(pngOf(edge), one)).files.get('art/moss.ktx2'), 8).levels) {
        for (let at = 0; at < codes.length; at += 4) {
          const through = transfer === 'srgb' ? encodeSrgb((codes[at + 3] + 0.5) / 255) * 255 + 0.5 : codes[at + 3];
          expect(codes[at]).toBeLessThanOrEqual(through);
        }
      }
    }
  });

  it('of an indexed source multiplies too', async () => {
    const palette = Uint8Array.of(200, 100, 0, 128, 0, 255, 0, 255);
    const indexed = { kind: 'indexed', extent: { width: 2, height: 1 }, indexBits: 1, palette, alphaCount: 1 } as const;
    const png = pngOf({ ...indexed, indices: Uint8Array.of(0, 1) });
    const one = treatment({ outputs: ['ktx2'], kernel: both('nearest'), alpha: { store: 'premultiplied' } });
    const read = container((await build(png, one)).files.get('art/moss.ktx2'), 8);
    expect(read.premultiplied).toBe(true);
    const through = [200, 100, 0].map((code) => Math.round(encodeSrgb((decodeSrgb(code / 255) * 128) / 255) * 255));
    expect(Array.from(read.levels[0].codes)).toEqual([...through, 128, 0, 255, 0, 255]);
  });
});

describe('the luminance of a manifest', () => {
  it('is light, whatever kernels weigh and whatever is stored', async () => {
    const gray = painted({ width: 2, height: 2 }, 4, 8, () => [188, 188, 188, 128]);
    const light = decodeSrgb(188 / 255);
    for (const keys of [{}, { light: 'code' }, { kernel: both('nearest') }] as const) {
      const { manifest } = await build(pngOf(gray), treatment(keys));
      for (const { luminance } of manifest.levels) expect(luminance).toBeCloseTo(light, 5);
    }
    const alpha = { store: 'premultiplied' } as const;
    const { manifest } = await build(pngOf(gray), treatment({ outputs: ['ktx2'], alpha }));
    // Codes of light times alpha are coarser: half a code of 8 bits at 0.25 is 0.002, twice that over alpha.
    for (const { luminance } of manifest.levels) expect(Math.abs(luminance! - light)).toBeLessThan(0.005);
  });
});

/** Straight light and alpha of a level by the box kernel, in doubles from the source. Extents are even down to level 1. */
function boxed(source: StraightRaster, level: number, x: number, y: number): { color: number[]; alpha: number } {
  const whole = { ...treatment({ kernel: both('box'), fill: 'none' }) };
  const doubles = level === 0 ? null : referenceChain(source, whole)[level];
  const max = source.depth === 8 ? 255 : 65535;
  if (doubles === null) {
    const texel = texelAt(source, x, y);
    return { color: texel.slice(0, 3).map((code) => decodeSrgb(code / max)), alpha: texel[3] / max };
  }
  const at = (y * doubles.extent.width + x) * 4;
  const [r, g, b, alpha] = doubles.straight.subarray(at, at + 4);
  return { color: [r, g, b], alpha };
}

/** What a texel of a level stands for before it is multiplied: doubles where it is filtered, codes where it is moved. */
function straightOf(
  source: StraightRaster,
  one: Treatment,
  moved: StraightRaster,
  level: number,
  x: number,
  y: number,
): { color: number[]; alpha: number } {
  const max = source.depth === 8 ? 255 : 65535;
  const light = (share: number): number => (one.transfer === 'srgb' ? decodeSrgb(share) : share);
  if (level === 0 || one.kernel.minify.name !== 'box') {
    const texel = texelAt(moved, x, y);
    return { color: texel.slice(0, 3).map((code) => light(code / max)), alpha: texel[3] / max };
  }
  const straight = { ...one, alpha: { ...one.alpha, store: 'straight' } as const };
  const doubles = referenceChain(source, straight)[level];
  const at = (y * doubles.extent.width + x) * 4;
  const [r, g, b, alpha] = doubles.straight.subarray(at, at + 4);
  const late = one.light === 'code' && one.transfer === 'srgb';
  const color = [r, g, b].map((each) => (Number.isNaN(each) ? 0 : late ? decodeSrgb(each) : each));
  return { color, alpha };
}

function eachTexel(raster: StraightRaster, visit: (x: number, y: number, texel: number[]) => void): void {
  for (let y = 0; y < raster.extent.height; y++) {
    for (let x = 0; x < raster.extent.width; x++) visit(x, y, texelAt(raster, x, y));
  }
}

function texelOf(codes: ArrayLike<number>, width: number, x: number, y: number): number[] {
  return Array.from({ length: 4 }, (_, channel) => codes[(y * width + x) * 4 + channel]);
}
