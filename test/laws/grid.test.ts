import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { kernels, LINEAR, oneOf, seeds, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { painted, texelAt } from '../fixtures/picture.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { engineLevels } from './builders.ts';
import { holds } from './holds.ts';

const sheets = fc.tuple(
  seeds,
  fc.record({ width: oneOf([4, 8, 12]), height: oneOf([4, 8, 16]) }),
  fc.record({ width: oneOf([1, 2, 3]), height: oneOf([1, 2]) }),
);

it('filters each cell as if it were a whole image', () => {
  holds(
    fc.tuple(sheets, kernels([...LINEAR, 'nearest', 'majority']), wraps),
    50,
    ([[seed, cell, count], kernel, wrap]) => {
      const extent = { width: cell.width * count.width, height: cell.height * count.height };
      const sheet = withAlpha(noiseRaster(seed, extent, 4, 8, 'noise'), seed, 3, 4);
      const one = treatment({
        kernel: { minify: kernel, magnify: kernel },
        wrap,
        derive: kernel.name === 'majority' ? 'base' : 'previous',
      });
      const levels = engineLevels(buildChain(sheet, { ...one, grid: { cell: [cell.width, cell.height], gutter: 0 } }));
      expect(levels.length).toBeGreaterThan(1);
      for (let v = 0; v < count.height; v++) {
        for (let u = 0; u < count.width; u++) {
          const alone = engineLevels(buildChain(cut(sheet, u * cell.width, v * cell.height, cell), one));
          levels.forEach((level, i) => {
            const own = { width: cell.width >> i, height: cell.height >> i };
            expect(cut(level, u * own.width, v * own.height, own).codes).toEqual(alone[i].codes);
          });
        }
      }
    },
  );
});

it('changes no other cell when one cell changes', () => {
  holds(fc.tuple(seeds, kernels(LINEAR), wraps, oneOf([0, 2])), 40, ([seed, kernel, wrap, gutter]) => {
    const pitch = 8 + 2 * gutter;
    const extent = { width: pitch * 3, height: pitch };
    const sheet = noiseRaster(seed, extent, 4, 8, 'noise');
    const changed = painted(extent, 4, 8, (x, y) =>
      x >= pitch && x < 2 * pitch ? [255, 0, 255, 255] : texelAt(sheet, x, y),
    );
    const one = treatment({ kernel: { minify: kernel, magnify: kernel }, wrap, grid: { cell: [8, 8], gutter } });
    const levels = engineLevels(buildChain(sheet, one));
    engineLevels(buildChain(changed, one)).forEach((level, i) => {
      const part = { width: pitch >> i, height: pitch >> i };
      for (const column of [0, 2]) {
        expect(cut(level, column * part.width, 0, part).codes).toEqual(
          cut(levels[i], column * part.width, 0, part).codes,
        );
      }
    });
  });
});

it.each([
  // Cells of 12 halve to 6 and 3 and no further; of 8 x 4 to 2 x 1.
  [12, 12, 0, 3],
  [8, 4, 0, 3],
  [8, 8, 2, 2],
  [7, 7, 0, 1],
  [16, 16, 0, 5],
])('a sheet of cells of %i x %i with a gutter of %i has %i levels and says why', (width, height, gutter, count) => {
  const extent = { width: (width + 2 * gutter) * 2, height: height + 2 * gutter };
  const chain = buildChain(
    noiseRaster(1, extent, 4, 8, 'noise'),
    treatment({ kernel: both('box'), grid: { cell: [width, height], gutter } }),
  );
  expect(engineLevels(chain).length).toBe(count);
  expect(chain.notes.some((note) => note.includes(`level ${count - 1}`))).toBe(true);
});

it('refuses a sheet that cells do not fill', async () => {
  const sheet = noiseRaster(1, { width: 30, height: 16 }, 4, 8, 'noise');
  const problem = await problemOf(() => buildChain(sheet, treatment({ grid: { cell: [8, 8], gutter: 0 } })));
  expect(problem?.code).toBe('grid-remainder');
});

function cut(
  raster: ReturnType<typeof noiseRaster>,
  left: number,
  top: number,
  extent: { readonly width: number; readonly height: number },
): ReturnType<typeof noiseRaster> {
  return painted(extent, raster.channels, raster.depth, (x, y) => texelAt(raster, left + x, top + y));
}
