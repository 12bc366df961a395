import { createHash } from 'node:crypto';
import { describe, expect, it } from 'vitest';
import { hashPixels } from '../../core/codec/pixels.ts';
import type { ManifestImage } from '../../core/manifest/manifest.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { type Built, build, container, judged, pngOf } from '../fixtures/built.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { flat, painted, texelAt } from '../fixtures/picture.ts';
import { chunk } from '../fixtures/rawpng.ts';
import { writeTga } from '../fixtures/tga.ts';
import { both, treatment } from '../fixtures/treatment.ts';

const leafy = withAlpha(noiseRaster(3, { width: 12, height: 5 }, 4, 8, 'noise'), 3, 3, 4);
const plain = noiseRaster(4, { width: 6, height: 4 }, 3, 8, 'noise');

describe('the files', () => {
  it.each<[string, Treatment, string[]]>([
    ['levels and a container', treatment(), ['art/moss.1.png', 'art/moss.2.png', 'art/moss.3.png', 'art/moss.ktx2']],
    ['PNG alone', treatment({ outputs: ['png'] }), ['art/moss.1.png', 'art/moss.2.png', 'art/moss.3.png']],
    ['KTX2 alone', treatment({ outputs: ['ktx2'] }), ['art/moss.ktx2']],
    [
      'the base where it is asked for',
      treatment({ outputs: ['png'], png: { base: true } }),
      ['art/moss.0.png', 'art/moss.1.png', 'art/moss.2.png', 'art/moss.3.png'],
    ],
    [
      'a part of the levels',
      treatment({ levels: { first: 1, last: 2 } }),
      ['art/moss.1.png', 'art/moss.2.png', 'art/moss.ktx2'],
    ],
    [
      'the last level for one that does not exist',
      treatment({ levels: { first: 9, last: null } }),
      ['art/moss.3.png', 'art/moss.ktx2'],
    ],
    [
      'targets alone',
      treatment({ levels: 'none', targets: [{ name: '2x', scale: 2 }] }),
      ['art/moss.2x.png', 'art/moss.ktx2'],
    ],
    ['targets and the base', treatment({ levels: 'none', png: { base: true }, outputs: ['png'] }), ['art/moss.0.png']],
    [
      'levels before targets',
      treatment({
        levels: { first: 3, last: null },
        targets: [
          { name: '0.75x', scale: 0.75 },
          { name: '20x20', cell: [20, 20] },
        ],
      }),
      ['art/moss.3.png', 'art/moss.0.75x.png', 'art/moss.20x20.png', 'art/moss.ktx2'],
    ],
    [
      'another name',
      treatment({ levels: { first: 1, last: 1 }, name: 'out/{width}/{name}_{level}' }),
      ['out/6/moss_1.png', 'out/6/moss.ktx2'],
    ],
  ])('are %s', async (_, one, paths) => {
    expect([...(await build(pngOf(leafy), one)).files.keys()]).toEqual(paths);
  });

  it.each([
    ['height', { height: { minmax: true } }, ['min', 'max']],
    ['normal', { normal: { roughness: { constant: 0.5 } } }, ['roughness']],
  ] as const)('of a %s map have those of its companions behind them', async (content, keys, uses) => {
    const one = treatment({ content, ...keys, levels: { first: 1, last: null }, alpha: { use: 'data' } });
    const gray = content === 'height' ? noiseRaster(1, { width: 4, height: 4 }, 1, 8, 'noise') : plain;
    const { files } = await build(pngOf(gray), one);
    const stems = ['moss', ...uses.map((use) => `moss.${use}`)];
    expect([...files.keys()]).toEqual([
      ...stems.flatMap((stem) => [`art/${stem}.1.png`, `art/${stem}.2.png`]),
      ...stems.map((stem) => `art/${stem}.ktx2`),
    ]);
  });

  it('have a level 0 only where its codes are not the source’s', async () => {
    const png = (overrides: Parameters<typeof treatment>[0]): Promise<Built> =>
      build(pngOf(leafy), treatment({ outputs: ['png'], ...overrides }));
    for (const [overrides, written] of [
      [{}, false],
      [{ fill: 'all' }, true],
      [{ depth: 16 }, true],
      [{ depth: 8 }, false],
      [{ alpha: { use: 'mask', keepCoverage: true } }, false],
    ] as const) {
      const { files, manifest } = await png(overrides);
      expect([overrides, files.has('art/moss.0.png')]).toEqual([overrides, written]);
      expect(manifest.levels[0].pixels === manifest.sources[0].pixels).toBe(!written);
    }
    // Nothing hidden, nothing filled.
    const opaque = await build(pngOf(flat({ width: 2, height: 2 }, 8, [9, 8, 7, 255])), treatment({ fill: 'all' }));
    expect(opaque.files.has('art/moss.0.png')).toBe(false);
  });

  it('have a level 0 where normals are made unit', async () => {
    const one = treatment({ content: 'normal', outputs: ['png'] });
    const dull = flat({ width: 2, height: 2 }, 8, [128, 128, 200]);
    expect((await build(pngOf(dull), one)).files.has('art/moss.0.png')).toBe(false);
    const unit = await build(pngOf(dull), { ...one, normal: { ...one.normal, base: 'renormalise' } });
    expect(texelAt(judged(unit.files.get('art/moss.0.png')), 0, 0)).toEqual([128, 128, 255]);
  });
});

describe('the manifest', () => {
  it('lists each file with its SHA-256, relative to its own folder', async () => {
    const one = treatment({ targets: [{ name: '2x', scale: 2 }], name: 'tex/{path}/{name}.{level}{target}' });
    const { files, manifest } = await build(pngOf(leafy), one);
    const listed = [
      ...manifest.levels.flatMap(({ file }) => file ?? []),
      ...manifest.targets.flatMap(({ file }) => file ?? []),
      ...manifest.containers,
    ];
    expect(listed.map(({ path }) => path)).toEqual([...files.keys()].map((path) => `../${path}`));
    expect(listed.map(({ sha256 }) => sha256)).toEqual([...files.values()].map(sha256));
  });

  it('says what the source is', async () => {
    const gamma = chunk('gAMA', [0, 0, 0xb1, 0x8f]);
    const bytes = pngOf(leafy, [gamma]);
    const { manifest } = await build(bytes, treatment());
    expect(manifest.sources).toEqual([
      {
        path: '../src/moss.png',
        use: 'image',
        sha256: sha256(bytes),
        pixels: hashPixels(leafy, newHash),
        extent: [12, 5],
        depth: 8,
        channels: 4,
        colorChunks: ['gAMA 45455'],
      },
    ]);
    expect(manifest).toMatchObject({ format: 1, algorithm: 1, settings: treatment() });
    expect(manifest.encoder).toMatch(/^[0-9a-f]{64}$/);
  });

  it('hashes the pixels that another reader finds in each PNG', async () => {
    for (const channels of [1, 2, 3, 4] as const) {
      for (const depth of [8, 16] as const) {
        const raster = noiseRaster(channels + depth, { width: 7, height: 5 }, channels, depth, 'noise');
        const one = treatment({ png: { base: true }, targets: [{ name: '0.75x', scale: 0.75 }] });
        const { manifest, files } = await build(pngOf(raster), one);
        for (const image of [...manifest.levels, ...manifest.targets]) {
          const read = judged(files.get(`art/${image.file!.path}`));
          expect(read.channels).toBe(channels);
          expect(hashPixels(read, newHash)).toBe(image.pixels);
          expect([read.extent.width, read.extent.height]).toEqual(image.extent);
        }
      }
    }
  });

  it('counts levels from the source’s level 0 whatever is shipped', async () => {
    const { manifest, files } = await build(pngOf(leafy), treatment({ levels: { first: 1, last: 2 } }));
    expect(manifest.levels.map(({ level, extent }) => [level, extent])).toEqual([
      [1, [6, 2]],
      [2, [3, 1]],
    ]);
    expect(container(files.get('art/moss.ktx2'), 8).levels.map(({ extent }) => extent)).toEqual([
      { width: 6, height: 2 },
      { width: 3, height: 1 },
    ]);
    const whole = await build(pngOf(leafy), treatment());
    expect(manifest.levels.map(withoutFile)).toEqual(whole.manifest.levels.slice(1, 3).map(withoutFile));
  });

  it('is the same for the same input, and for a source of another coding', async () => {
    const one = treatment({ targets: [{ name: '2x', scale: 2 }] });
    const first = await build(pngOf(leafy), one);
    expect(await build(pngOf(leafy), one)).toEqual(first);
    const interlaced = await build(pngOf(leafy, [], 1), one);
    expect(interlaced.manifest).toEqual(withSource(first, interlaced));
    const texel = (x: number, y: number): number => {
      const [r, g, b, a] = texelAt(leafy, x, y);
      return ((a * 256 + r) * 256 + g) * 256 + b;
    };
    for (const type of [2, 10]) {
      const tga = writeTga({ ...leafy.extent, type, texelBits: 32, attributeBits: 8, texel });
      const built = await build(tga, one, { texture: 'art/moss.tga' });
      expect(built.manifest).toEqual(withSource(first, built));
      expect(built.files).toEqual(first.files);
    }
  });
});

describe('the container', () => {
  it.each([
    [1, 8, 15],
    [2, 8, 43],
    [3, 8, 29],
    [4, 8, 43],
  ] as const)('of %i channels at %i bits holds the codes of the PNGs', async (channels, depth, vkFormat) => {
    const raster = noiseRaster(channels, { width: 9, height: 6 }, channels, depth, 'noise');
    const { files } = await build(pngOf(raster), treatment({ png: { base: true } }));
    const read = container(files.get('art/moss.ktx2'), depth);
    expect(read.vkFormat).toBe(vkFormat);
    expect(read.levels.length).toBe(4);
    read.levels.forEach(({ codes, extent }, level) => {
      const png = judged(files.get(`art/moss.${level}.png`));
      expect(extent).toEqual(png.extent);
      // Gray and alpha are spread over four channels.
      const spread = channels === 2 ? [0, 0, 0, 1] : Array.from({ length: channels }, (_, channel) => channel);
      const expected = painted(extent, spread.length as 1 | 3 | 4, depth, (x, y) =>
        spread.map((channel) => texelAt(png, x, y)[channel]),
      );
      expect(codes).toEqual(expected.codes);
    });
  });

  it.each([1, 2, 3, 4] as const)('leaves 16-bit data of %i channels untouched', async (channels) => {
    const raster = noiseRaster(channels, { width: 4, height: 4 }, channels, 16, 'noise');
    const one = treatment({
      content: 'data',
      alpha: { use: 'data' },
      levels: { first: 0, last: 0 },
      png: { base: true },
    });
    const { files } = await build(pngOf(raster), one);
    expect(judged(files.get('art/moss.0.png')).codes).toEqual(raster.codes);
    const { codes } = container(files.get('art/moss.ktx2'), 16).levels[0];
    const stored = channels === 3 ? 4 : channels;
    for (let texel = 0; texel < 16; texel++) {
      expect(Array.from(codes.subarray(texel * stored, texel * stored + channels))).toEqual(
        Array.from(raster.codes.subarray(texel * channels, (texel + 1) * channels)),
      );
    }
  });

  it('says sRGB of gray and alpha whose transfer is given for each channel', async () => {
    const raster = noiseRaster(2, { width: 2, height: 2 }, 2, 8, 'noise');
    const one = treatment({ outputs: ['ktx2'], transfer: ['srgb', 'linear'] });
    expect(container((await build(pngOf(raster), one)).files.get('art/moss.ktx2'), 8).vkFormat).toBe(43);
  });
});

describe('a target', () => {
  it.each([
    [5, 3, 4, 2],
    [7, 1, 5, 1],
    [1, 9, 1, 7],
    [6, 10, 5, 8],
  ])('of %i x %i at 0.75x is %i x %i', async (width, height, wide, high) => {
    const one = treatment({ levels: 'none', outputs: ['png'], targets: [{ name: '0.75x', scale: 0.75 }] });
    const { manifest } = await build(pngOf(noiseRaster(1, { width, height }, 4, 8, 'noise')), one);
    expect(manifest.targets.map(({ extent }) => extent)).toEqual([[wide, high]]);
    expect(manifest.levels[0].file).toBeUndefined();
  });

  it('in a cell is centered on what is transparent, in the color of its edge', async () => {
    const art = painted({ width: 2, height: 1 }, 4, 8, (x) => (x === 0 ? [200, 0, 0, 255] : [0, 0, 100, 128]));
    const one = treatment({
      levels: 'none',
      outputs: ['png'],
      kernel: both('nearest'),
      targets: [{ name: 'c', cell: [5, 4] }],
    });
    const cell = judged((await build(pngOf(art), one)).files.get('art/moss.c.png'));
    expect(cell.extent).toEqual({ width: 5, height: 4 });
    // The scale is 5/2: the picture is 5 x 3 and stands half a texel up. floor((x + 1/2) 2/5) picks 0 0 1 1 1.
    const red = [200, 0, 0];
    const blue = [0, 0, 100];
    for (let y = 0; y < 4; y++) {
      const row = Array.from({ length: 5 }, (_, x) => texelAt(cell, x, y));
      expect(row.map((texel) => texel.slice(0, 3))).toEqual([red, red, blue, blue, blue]);
      expect(row.map((texel) => texel[3])).toEqual(y < 3 ? [255, 255, 128, 128, 128] : [0, 0, 0, 0, 0]);
    }
  });

  it('in a cell is transparent round a picture without alpha, too', async () => {
    const one = treatment({ levels: 'none', outputs: ['png'], targets: [{ name: 'c', cell: [6, 4] }] });
    for (const color of [[10], [10, 20, 30]]) {
      const cell = judged(
        (await build(pngOf(flat({ width: 2, height: 2 }, 8, color)), one)).files.get('art/moss.c.png'),
      );
      const row = Array.from({ length: 6 }, (_, x) => texelAt(cell, x, 1));
      expect(row.map((texel) => texel.at(-1))).toEqual([0, 255, 255, 255, 255, 0]);
      for (const texel of row) expect(texel.slice(0, -1)).toEqual(color);
    }
  });
});

function sha256(bytes: Uint8Array): string {
  return createHash('sha256').update(bytes).digest('hex');
}

function withoutFile({ file: _, ...image }: ManifestImage): Omit<ManifestImage, 'file'> {
  return image;
}

/** The manifest of one build with the source hash of another. */
function withSource(one: Built, other: Built): unknown {
  const sources = one.manifest.sources.map((source, i) => ({ ...source, sha256: other.manifest.sources[i].sha256 }));
  return { ...one.manifest, sources };
}
