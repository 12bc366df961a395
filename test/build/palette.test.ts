import { describe, expect, it } from 'vitest';
import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import { expandIndexed, type IndexedRaster } from '../../core/raster/raster.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { build, container, judged, pngOf } from '../fixtures/built.ts';
import { texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';

// Indexed art: two entries are alike in color, the order is nobody's, one entry is clear.
const palette = Uint8Array.of(9, 9, 9, 0, 200, 0, 0, 255, 0, 0, 200, 128, 200, 0, 0, 255);
const art: IndexedRaster = {
  kind: 'indexed',
  extent: { width: 4, height: 4 },
  indexBits: 2,
  palette,
  alphaCount: 3,
  indices: Uint8Array.of(3, 3, 1, 2, 3, 0, 2, 2, 0, 0, 2, 1, 0, 1, 1, 1),
};

async function indexedPng(bytes: Uint8Array | undefined): Promise<IndexedRaster> {
  const raster = await decodeImage(openImage(bytes ?? new Uint8Array(), 'a.png', inflate));
  if (raster.kind !== 'indexed') throw new TypeError('Expected an indexed PNG');
  return raster;
}

describe('kernels that move codes', () => {
  it.each([
    // floor((x + 1/2) 2): texels 1 and 3 of rows 1 and 3.
    ['nearest', [0, 2, 1, 1]],
    // The most area: red of both entries beside each other, a tie of clear, ... by the center.
    ['majority', [3, 2, 0, 1]],
  ])('%s keeps palette, order and indices at each level', async (name, level1) => {
    const one = treatment({ kernel: { minify: both(name).minify, magnify: both('nearest').magnify }, derive: 'base' });
    const { files, manifest } = await build(pngOf(art), one);
    expect(manifest.sources[0]).toMatchObject({ channels: 4, depth: 8 });
    const level = await indexedPng(files.get('art/moss.1.png'));
    expect(level).toEqual({ ...art, extent: { width: 2, height: 2 }, indices: Uint8Array.from(level1) });
    // Colors of the container are the palette's.
    const { levels } = container(files.get('art/moss.ktx2'), 8);
    expect(levels[0].codes).toEqual(expandIndexed(art).codes);
    expect(levels[1].codes).toEqual(expandIndexed(level).codes);
    expect(manifest.levels[0].pixels).toBe(manifest.sources[0].pixels);
  });

  it.each(['nearest', 'epx'])('%s keeps them in targets', async (name) => {
    const one = treatment({
      kernel: { minify: both('nearest').minify, magnify: both(name).magnify },
      levels: 'none',
      outputs: ['png'],
      targets: [
        { name: '2x', scale: 2 },
        { name: 'c', cell: [12, 13] },
      ],
    });
    const { files } = await build(pngOf(art), one);
    const double = await indexedPng(files.get('art/moss.2x.png'));
    expect([double.palette, double.alphaCount, double.indexBits]).toEqual([palette, 3, 2]);
    expect(double.indices[0]).toBe(3);
    const cell = await indexedPng(files.get('art/moss.c.png'));
    // Three times as large, and a row of the clear entry below.
    expect([cell.palette, cell.indices[0], cell.indices[12 * 12 - 1], cell.indices[12 * 12]]).toEqual([
      palette,
      3,
      1,
      0,
    ]);
  });

  it('leave an indexed picture in a cell RGBA where its palette has nothing clear', async () => {
    const opaque = { ...art, alphaCount: 0 };
    const one = treatment({
      kernel: both('nearest'),
      levels: 'none',
      outputs: ['png'],
      targets: [{ name: 'c', cell: [6, 4] }],
    });
    const cell = judged((await build(pngOf(opaque), one)).files.get('art/moss.c.png'));
    expect(cell.channels).toBe(4);
    expect(texelAt(cell, 0, 0)).toEqual([200, 0, 0, 0]);
    expect(texelAt(cell, 1, 0)).toEqual([200, 0, 0, 255]);
  });
});

describe('kernels that weigh', () => {
  it.each([
    [3, 4],
    [0, 3],
  ])('make colors of a palette with %i alphas: %i channels', async (alphaCount, channels) => {
    const { files } = await build(pngOf({ ...art, alphaCount }), treatment({ kernel: both('box') }));
    expect(files.has('art/moss.0.png')).toBe(false);
    expect(judged(files.get('art/moss.1.png'))).toMatchObject({ channels, depth: 8 });
    expect((await build(pngOf({ ...art, alphaCount }), treatment({ kernel: both('box') }))).files).toEqual(files);
  });

  it('give what the expanded picture gives', async () => {
    for (const name of ['box', 'kaiser', 'detail', 'nearest']) {
      const one = treatment({ kernel: { minify: both(name).minify, magnify: both('box').magnify }, derive: 'base' });
      const indexed = await build(pngOf(art), one);
      const expanded = await build(pngOf(expandIndexed(art)), one);
      expect(indexed.manifest.levels.map(({ pixels }) => pixels)).toEqual(
        expanded.manifest.levels.map(({ pixels }) => pixels),
      );
      expect(indexed.files.get('art/moss.ktx2')).toEqual(expanded.files.get('art/moss.ktx2'));
    }
  });
});

describe('what changes codes makes colors of indices', () => {
  it.each([
    ['depth', { depth: 16 }],
    ['fill', { fill: 'all' }],
    ['coverage', { alpha: { use: 'mask', keepCoverage: true } }],
  ] as const)('%s', async (_, keys) => {
    const one = treatment({ kernel: both('nearest'), png: { base: true }, ...keys });
    const { files } = await build(pngOf(art), one);
    for (const level of [0, 1, 2]) expect(judged(files.get(`art/moss.${level}.png`)).channels).toBe(4);
    const source = expandIndexed(art);
    const expanded = await build(pngOf(source), one);
    expect(files.get('art/moss.ktx2')).toEqual(expanded.files.get('art/moss.ktx2'));
  });

  it('unit normals', async () => {
    const blue = Uint8Array.of(128, 128, 200, 255, 255, 128, 200, 255);
    const normals = { ...art, palette: blue, alphaCount: 0, indices: art.indices.map((index) => index % 2) };
    const one = treatment({
      content: 'normal',
      kernel: both('nearest'),
      outputs: ['png'],
      normal: { base: 'renormalise' },
    });
    const base = judged((await build(pngOf(normals), one)).files.get('art/moss.0.png'));
    expect(texelAt(base, 1, 1)).toEqual([128, 128, 255]);
  });
});
