import { expect, test } from 'vitest';
import { buildChain, headOf } from '../../core/chain/chain.ts';
import { evennessOf } from '../../core/proof/evenness.ts';
import { offPaletteOf, paletteOf } from '../../core/proof/palette.ts';
import { pictureOf } from '../../core/proof/picture.ts';
import { treatmentFor } from '../../core/proof/variant.ts';
import type { PrintImage } from '../../core/proof/want.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { painted } from '../fixtures/picture.ts';
import { both, kernel, treatment } from '../fixtures/treatment.ts';

/** Two colors in halves, under them a row that is clear over two hidden colors. */
const art = painted({ width: 8, height: 8 }, 4, 8, (x, y) =>
  y === 7 ? [x, 0, 0, 0] : x < 4 ? [200, 40, 0, 255] : [0, 40, 200, 255],
);

function offOf(source: StraightRaster | IndexedRaster, settings: ReturnType<typeof treatment>, image: PrintImage) {
  const chain = buildChain(source, treatmentFor(settings, image));
  const found = chain.images.find(({ level, target }) =>
    'level' in image ? level === image.level : 'target' in image && target === image.target.name,
  )!;
  return offPaletteOf(pictureOf(chain.plan, found.raster), paletteOf(source));
}

const half = { target: { name: 'half again', scale: 1.5 } };

test('moved codes bring no color that the palette lacks; weights do, where they mix', () => {
  expect(offOf(art, treatment({ kernel: both('nearest') }), half)).toMatchObject({ palette: 3, share: 0, colors: 0 });
  // By area, 3 columns for 2: the middle column of 12 lies on the edge between texels 3 and 4, whole on neither side of it.
  const mixed = offOf(art, treatment({ kernel: { minify: kernel('box'), magnify: kernel('triangle') } }), half)!;
  expect(mixed.colors).toBeGreaterThan(0);
  const opaque = painted({ width: 8, height: 4 }, 3, 8, (x) => (x < 4 ? [200, 40, 0] : [0, 40, 200]));
  const found = offOf(opaque, treatment({ kernel: both('triangle') }), { target: { name: 'twice', scale: 2 } })!;
  // The triangle reaches one texel to each side: of 16 columns the two that lie within half a texel of the edge are mixed.
  expect([...found.marks.keys()].filter((at) => found.marks[at] === 1).map((at) => at % 16)).toEqual(
    Array.from({ length: 8 }, () => [7, 8]).flat(),
  );
  expect(found).toMatchObject({ palette: 2, share: 2 / 16, colors: 2 });
});

test('a palette is a file’s own, or the few colors of its texels; gray stands beside gray', () => {
  const indexed: IndexedRaster = {
    kind: 'indexed',
    extent: { width: 2, height: 1 },
    indexBits: 8,
    indices: Uint8Array.of(0, 0),
    palette: Uint8Array.of(1, 2, 3, 255, 4, 5, 6, 255),
    alphaCount: 0,
  };
  expect(paletteOf(indexed)?.size).toBe(2);
  expect(paletteOf(art)?.size).toBe(3);
  expect(paletteOf(noiseRaster(1, { width: 32, height: 32 }, 3, 8, 'noise'))).toBeNull();
  expect(paletteOf(painted({ width: 8, height: 8 }, 3, 16, () => [0, 0, 0]))).toBeNull();
  // 16 texels have room for 4 colors.
  const many = (count: number) => painted({ width: 16, height: 1 }, 1, 8, (x) => [Math.min(x, count - 1)]);
  expect([4, 5].map((count) => paletteOf(many(count))?.size ?? null)).toEqual([4, null]);
  const cell = { target: { name: 'cell', cell: [32, 8] as const } };
  const gray = offOf(many(2), treatment({ kernel: both('nearest'), alpha: { use: 'opacity' } }), cell);
  expect(gray).toMatchObject({ palette: 2, share: 0 });
});

test('premultiplied codes and numbers that are no color are not compared', () => {
  expect(offOf(art, treatment({ alpha: { store: 'premultiplied' } }), { level: 1 })).toBeNull();
  expect(offOf(art, treatment({ content: 'data' }), { level: 1 })).toBeNull();
});

const head = headOf(painted({ width: 8, height: 8 }, 3, 8, () => [0, 0, 0]));
const even = (scale: number, name = 'nearest', cell?: readonly [number, number]) => {
  const target = cell === undefined ? { name: 'one', scale } : { name: 'one', cell };
  const settings = treatment({ kernel: both(name), derive: 'base' });
  return evennessOf(head, treatmentFor(settings, { target }), { target });
};

test.each([
  // floor((j + 1/2) / 1.5): 0 1 1 2 3 3 4 5 5 ...: every other column stands twice.
  [1.5, { least: 1, most: 2, left: 0, uneven: [1, 2, 4, 5, 7, 8, 10, 11] }],
  [2, { least: 2, most: 2, left: 0, uneven: [] }],
  // floor((j + 1/2) 4/3): 0 2 3 4 6 7: behind texels 1 and 5, which are left out.
  [0.75, { least: 0, most: 1, left: 2, uneven: [1, 4] }],
  [0.5, { least: 0, most: 1, left: 4, uneven: [] }],
] as const)('at %fx nearest gives columns as even as this', (scale, expected) => {
  expect(even(scale)).toMatchObject({ x: expected, y: expected });
});

test('a cell’s columns are counted from the cell’s edge; kernels that weigh have none', () => {
  expect(even(1, 'nearest', [16, 12])).toMatchObject({
    x: { uneven: [3, 4, 6, 7, 9, 10, 12, 13] },
    y: { uneven: [1, 2, 4, 5, 7, 8, 10, 11] },
  });
  expect(even(1.5, 'mitchell')).toBeNull();
  // Magnified, box is nearest.
  expect(even(1.5, 'box')?.x.most).toBe(2);
});

/** Columns that nearest takes, by the rule itself: floor((j + 1/2) n / m).  [Vulkan, Texel Filtering] */
const taken = (from: number, to: number) => Array.from({ length: to }, (_, j) => Math.floor(((j + 0.5) * from) / to));
const isEven = (from: number, to: number) => {
  const columns = taken(from, to);
  return new Set(columns.map((column, j) => column - (columns[j - 1] ?? column - from / to))).size === 1;
};

test.each([
  [8, 8, 0.75, { smaller: 2, larger: 1 }],
  [12, 18, 0.4, { smaller: 3, larger: 2 }],
  [24, 16, 0.3, { smaller: 4, larger: 2 }],
  [31, 17, 0.5, { smaller: null, larger: 1 }],
] as const)(
  '%i by %i texels at %fx say the nearest scales at which no column is cut out of step',
  (width, height, scale, parts) => {
    const source = headOf(painted({ width, height }, 3, 8, () => [0, 0, 0]));
    const at = (target: { readonly name: string; readonly scale: number }) => {
      const settings = treatment({ kernel: both('nearest'), derive: 'base' });
      return evennessOf(source, treatmentFor(settings, { target }), { target })!;
    };
    expect(at({ name: 'one', scale }).parts).toEqual(parts);
    for (const part of [parts.smaller, parts.larger]) {
      if (part === null) continue;
      expect([isEven(width, width / part), isEven(height, height / part)]).toEqual([true, true]);
      const { x, y } = at({ name: 'part', scale: 1 / part });
      expect([x.uneven, y.uneven]).toEqual([[], []]);
    }
    // Nothing between them is: of whole texels on both sides, in proportion.
    for (let to = width; to >= 1; to--) {
      const [small, large] = [width / (parts.smaller ?? width + 1), width / parts.larger];
      const down = (to * height) / width;
      if (to <= small || to >= large || !Number.isInteger(down)) continue;
      expect([to, isEven(width, to) && isEven(height, down)]).toEqual([to, false]);
    }
  },
);

test('nothing is said of even scales where nothing is left out', () => {
  expect(even(1.5)?.parts).toBeNull();
  expect(even(2)?.parts).toBeNull();
});
