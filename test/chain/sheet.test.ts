import { describe, expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { planSheet, targetExtent } from '../../core/chain/grid.ts';
import type { ChainImage } from '../../core/chain/image.ts';
import type { Wrap } from '../../core/kernel/wrap.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted, texelAt } from '../fixtures/picture.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { both, treatment } from '../fixtures/treatment.ts';

const box = treatment({ kernel: both('box') });

function straight(image: ChainImage | undefined): StraightRaster {
  if (image?.raster.kind !== 'straight') throw new TypeError('Expected a straight raster');
  return image.raster;
}

describe('a plan', () => {
  it.each([
    [[64, 32], [8, 8], 0, { columns: 8, rows: 4, levels: 4 }],
    [[24, 12], [8, 8], 2, { columns: 2, rows: 1, levels: 2 }],
    // 12 halves twice, a gutter of 4 as well.
    [[40, 20], [12, 12], 4, { columns: 2, rows: 1, levels: 3 }],
    [[9, 3], [3, 3], 0, { columns: 3, rows: 1, levels: 1 }],
    [[6, 4], [1, 4], 0, { columns: 6, rows: 1, levels: 1 }],
  ] as const)('of %j in cells of %j with a gutter of %i', ([width, height], cell, gutter, expected) => {
    expect(planSheet({ width, height }, { cell, gutter })).toMatchObject(expected);
  });

  it.each([
    [[65, 32], [8, 8], 0, { extent: '65x32', cell: '8x8', gutter: 0, rest: '1x0' }],
    [[64, 30], [8, 8], 0, { extent: '64x30', cell: '8x8', gutter: 0, rest: '0x6' }],
    [[64, 64], [8, 8], 1, { extent: '64x64', cell: '8x8', gutter: 1, rest: '4x4' }],
    // A cell larger than its sheet leaves all of it.
    [[4, 4], [8, 8], 0, { extent: '4x4', cell: '8x8', gutter: 0, rest: '4x4' }],
  ] as const)(
    'of %j in cells of %j with a gutter of %i is refused with the remainder',
    async ([width, height], cell, gutter, values) => {
      const problem = await problemOf(() => planSheet({ width, height }, { cell, gutter }));
      expect(problem).toMatchObject({ code: 'grid-remainder', values });
    },
  );

  it('takes scales that leave cells and gutters whole', async () => {
    const plan = planSheet({ width: 24, height: 12 }, { cell: [8, 8], gutter: 2 });
    expect(targetExtent(plan, { name: '2x', scale: 2 })).toEqual({ width: 48, height: 24 });
    expect(targetExtent(plan, { name: '0.5x', scale: 0.5 })).toEqual({ width: 12, height: 6 });
    for (const scale of [0.25, 1.1]) {
      expect((await problemOf(() => targetExtent(plan, { name: 't', scale })))?.code).toBe('grid-target');
    }
    for (const target of [
      { name: 'e', extent: [48, 24] },
      { name: 'c', cell: [48, 48] },
    ] as const) {
      expect((await problemOf(() => targetExtent(plan, target)))?.code).toBe('grid-scale');
    }
  });
});

describe('level 0', () => {
  it('is the source, gutters and all', () => {
    const sheet = noiseRaster(1, { width: 20, height: 10 }, 4, 8, 'noise');
    const [base] = buildChain(sheet, { ...box, grid: { cell: [8, 8], gutter: 1 } }).images;
    expect(straight(base).codes).toEqual(sheet.codes);
  });

  it('is changed in gutters as in cells where the depth is', () => {
    const sheet = noiseRaster(1, { width: 20, height: 10 }, 4, 8, 'noise');
    const [base] = buildChain(sheet, { ...box, depth: 16, grid: { cell: [8, 8], gutter: 1 } }).images;
    expect(Array.from(straight(base).codes)).toEqual(Array.from(sheet.codes, (code) => code * 257));
  });

  it('is left alone in the caller’s memory where cells are filled', () => {
    const sheet = withAlpha(noiseRaster(1, { width: 8, height: 4 }, 4, 8, 'noise'), 1, 5, 3);
    const before = sheet.codes.slice();
    const [base] = buildChain(sheet, { ...box, fill: 'all', grid: { cell: [4, 4], gutter: 0 } }).images;
    expect(sheet.codes).toEqual(before);
    expect(straight(base).codes).not.toEqual(before);
  });
});

describe('gutters', () => {
  // Two cells of 4 x 4; texel values tell the place in the cell. The sheet's own gutters hold 255.
  const cellOf = (x: number, y: number): number => 10 * y + x;
  const sheet = painted({ width: 16, height: 8 }, 1, 8, (x, y) => {
    const [u, v] = [(x % 8) - 2, y - 2];
    return [u < 0 || u > 3 || v < 0 || v > 3 ? 255 : 100 * Math.floor(x / 8) + cellOf(u, v)];
  });
  const read: Record<Wrap, (i: number) => number> = {
    'clamp-to-edge': (i) => Math.min(1, Math.max(0, i)),
    repeat: (i) => (i + 2) % 2,
    'mirror-repeat': (i) => (i < 0 ? -1 - i : i > 1 ? 3 - i : i),
    'clamp-to-border': (i) => Math.min(1, Math.max(0, i)),
  };

  it.each(['clamp-to-edge', 'repeat', 'mirror-repeat', 'clamp-to-border'] as const)(
    'are made anew from their own cell: %s',
    (mode) => {
      const one = treatment({ content: 'data', wrap: { x: mode, y: mode }, grid: { cell: [4, 4], gutter: 2 } });
      const level = straight(buildChain(sheet, one).images[1]);
      expect(level.extent).toEqual({ width: 8, height: 4 });
      for (let y = 0; y < 4; y++) {
        for (let x = 0; x < 8; x++) {
          const [u, v] = [read[mode]((x % 4) - 1), read[mode](y - 1)];
          // The mean of a block of four: 5.5 more than its first texel, to the even code.
          const exact = 100 * Math.floor(x / 4) + cellOf(2 * u, 2 * v) + 5.5;
          expect([x, y, texelAt(level, x, y)[0]]).toEqual([x, y, exact % 2 === 0.5 ? exact - 0.5 : exact + 0.5]);
        }
      }
    },
  );

  it('of a target grow with it', () => {
    const one = treatment({
      content: 'data',
      levels: 'none',
      kernel: both('nearest'),
      grid: { cell: [4, 4], gutter: 2 },
      targets: [{ name: '2x', scale: 2 }],
    });
    const target = straight(buildChain(sheet, one).images.find((image) => image.target === '2x'));
    expect(target.extent).toEqual({ width: 32, height: 16 });
    for (let x = 0; x < 16; x++) {
      const u = Math.min(3, Math.max(0, Math.floor((x - 4) / 2)));
      expect(texelAt(target, x, 0)).toEqual([cellOf(u, 0)]);
      expect(texelAt(target, 16 + x, 15)).toEqual([100 + cellOf(u, 3)]);
    }
  });
});

describe('notes', () => {
  const sheet = noiseRaster(1, { width: 24, height: 12 }, 4, 8, 'noise');
  const notesOf = (keys: Partial<Treatment>): readonly string[] => buildChain(sheet, { ...box, ...keys }).notes;

  it('say where and why the chain stops', () => {
    expect(notesOf({ grid: { cell: [12, 12], gutter: 0 } })).toEqual([
      'The chain stops at level 2: cells of 12x12 are no whole texels below it.',
    ]);
    expect(notesOf({ grid: { cell: [8, 8], gutter: 2 } })).toEqual([
      'The chain stops at level 1: cells of 8x8 and gutters of 2 are no whole texels below it.',
    ]);
    expect(notesOf({ grid: { cell: [4, 4], gutter: 0 } })).toEqual([
      'The chain stops at level 2, where a cell is one texel wide or high.',
    ]);
  });

  it('say nothing of it where the settings end the chain before', () => {
    expect(notesOf({ grid: { cell: [12, 12], gutter: 0 }, levels: { first: 0, last: 1 } })).toEqual([]);
    expect(notesOf({ grid: { cell: [12, 12], gutter: 0 }, levels: 'none' })).toEqual([]);
  });
});

describe('indexed sheets', () => {
  const palette = Uint8Array.of(0, 0, 0, 0, 255, 0, 0, 255, 0, 255, 0, 255, 0, 0, 255, 255);
  const sheet: IndexedRaster = {
    kind: 'indexed',
    extent: { width: 12, height: 6 },
    indexBits: 2,
    palette,
    alphaCount: 1,
    indices: Uint8Array.from({ length: 72 }, (_, i) => (i * 7 + (i >> 2)) % 4),
  };

  it.each(['nearest', 'majority'])('stay indexed under %s, with gutters', (name) => {
    const one = treatment({
      kernel: { minify: both(name).minify, magnify: both('epx').magnify },
      derive: 'base',
      levels: { first: 0, last: null },
      grid: { cell: [4, 4], gutter: 1 },
      targets: [{ name: '2x', scale: 2 }],
    });
    const { images } = buildChain(sheet, { ...one, grid: { cell: [4, 4], gutter: 1 } });
    for (const { raster } of images) {
      expect(raster.kind).toBe('indexed');
      expect(raster.kind === 'indexed' && raster.palette).toEqual(palette);
    }
    expect(images[0].raster).toEqual(sheet);
    const target = images.find((image) => image.target === '2x')!.raster as IndexedRaster;
    expect(target.extent).toEqual({ width: 24, height: 12 });
    // The gutter's corner is the cell's first texel.
    expect(target.indices[0]).toBe(sheet.indices[12 + 1]);
  });

  it('become colors where cells are weighed', () => {
    const [base, level] = buildChain(sheet, { ...box, grid: { cell: [6, 6], gutter: 0 } }).images;
    expect([base.raster.kind, level.raster.kind]).toEqual(['straight', 'straight']);
  });
});

describe('measures', () => {
  const half = painted({ width: 16, height: 8 }, 4, 8, (x, y) => [
    9,
    9,
    9,
    x < 8 ? (x < 4 ? 255 : 0) : (x + y) % 2 === 0 ? 90 : 40,
  ]);
  const repeat = { x: 'repeat', y: 'repeat' } as const;

  it('of coverage are means of the cells, each kept by itself', () => {
    const one = treatment({
      kernel: both('box'),
      wrap: repeat,
      grid: { cell: [8, 8], gutter: 0 },
      alpha: { use: 'mask', keepCoverage: true },
    });
    const { images } = buildChain(half, one);
    const alone = [0, 8].map((left) => {
      const cell = painted({ width: 8, height: 8 }, 4, 8, (x, y) => texelAt(half, left + x, y));
      return buildChain(cell, { ...one, grid: null }).images;
    });
    images.forEach((image, level) => {
      expect(image.coverage).toBe((alone[0][level].coverage! + alone[1][level].coverage!) / 2);
      if (level === 0) return;
      const [a, b] = alone.map((each) => each[level].coverageScale!);
      expect(image.coverageScale).toEqual({
        scale: (a.scale + b.scale) / 2,
        residual: (a.residual + b.residual) / 2,
        tie: a.tie || b.tie,
      });
    });
    expect(images[0].coverage).toBe(1 / 4);
  });

  it('of light and clipping are sums', () => {
    const one = treatment({ kernel: both('lanczos3'), grid: { cell: [8, 8], gutter: 0 } });
    const whole = buildChain(half, one).images[1];
    const alone = [0, 8].map((left) => {
      const cell = painted({ width: 8, height: 8 }, 4, 8, (x, y) => texelAt(half, left + x, y));
      return buildChain(cell, { ...one, grid: null }).images[1];
    });
    expect(whole.clipped.above[3]).toBe(alone[0].clipped.above[3] + alone[1].clipped.above[3]);
    expect(whole.light!.weight).toBe(alone[0].light!.weight + alone[1].light!.weight);
  });
});

it('premultiplies cells and their gutters', () => {
  const sheet = withAlpha(noiseRaster(3, { width: 16, height: 8 }, 4, 8, 'noise'), 3, 2, 3);
  const one = treatment({
    kernel: both('box'),
    outputs: ['ktx2'],
    grid: { cell: [4, 4], gutter: 2 },
    alpha: { store: 'premultiplied' },
  });
  const whole = buildChain(sheet, { ...one, grid: null, levels: { first: 0, last: 0 } }).images[0].raster;
  const { images } = buildChain(sheet, one);
  expect(images.map(({ raster }) => raster.kind)).toEqual(['premultiplied', 'premultiplied']);
  expect(images[0].raster).toEqual(whole);
});
