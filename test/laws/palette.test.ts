import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import type { IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { channelCounts, depths, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, numbers, withAlpha } from '../fixtures/noise.ts';
import { mirrored, painted, picture, texelAt } from '../fixtures/picture.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { pointTap } from '../reference/axis.ts';
import { scale2x } from '../reference/epx.ts';
import { majorityTexel } from '../reference/majority.ts';
import { engineLevels, engineTarget, straight } from './builders.ts';
import { holds } from './holds.ts';

// Laws of the kernels that move codes: nearest, majority and the pixel-art scaler.

const art = fc
  .tuple(seeds, smallExtents, channelCounts, depths)
  .map(([seed, extent, channels, depth]) => withHidden(noiseRaster(seed, extent, channels, depth, 'few'), seed));

describe('no kernel that moves codes makes a color', () => {
  it.each(['nearest', 'majority'])('%s, every level', (name) => {
    holds(fc.tuple(art, wraps), 60, ([raster, wrap]) => {
      const palette = colors(raster);
      for (const level of engineLevels(buildChain(raster, moving(name, wrap)))) {
        for (const color of colors(level)) expect(palette.has(color), color).toBe(true);
      }
    });
  });

  it.each([
    ['epx', 2],
    ['epx', 3],
    ['epx', 4],
    ['epx', 6],
    ['nearest', 2.5],
  ] as const)('%s, %f times', (name, scale) => {
    holds(fc.tuple(art, wraps), 30, ([raster, wrap]) => {
      const palette = colors(raster);
      const one = { ...moving(name, wrap), levels: 'none', targets: [{ name: 'big', scale }] } as const;
      const target = straight(
        engineTarget(raster, { ...one, kernel: { ...one.kernel, minify: both('box').minify } }, 'big').raster,
      );
      expect(target.extent.width).toBe(Math.floor(raster.extent.width * scale + 0.5));
      for (const color of colors(target)) expect(palette.has(color), color).toBe(true);
    });
  });
});

it('hides what was hidden: color under alpha 0 moves with its texel', () => {
  const image = painted({ width: 4, height: 4 }, 4, 8, (x, y) => [
    x * 10 + 1,
    y * 10 + 2,
    3,
    (x + y) % 2 === 0 ? 0 : 255,
  ]);
  const [, level] = engineLevels(buildChain(image, moving('nearest')));
  // Texel (0, 0) of a 2 to 1 level takes source texel (1, 1): floor(u).
  expect(texelAt(level, 0, 0)).toEqual([11, 12, 3, 0]);
});

it("nearest takes the texel under the target's center, from the base", () => {
  holds(fc.tuple(art, wraps), 60, ([raster, wrap]) => {
    for (const level of engineLevels(buildChain(raster, moving('nearest', wrap)))) {
      for (let y = 0; y < level.extent.height; y++) {
        for (let x = 0; x < level.extent.width; x++) {
          const u = pointTap(raster.extent.width, level.extent.width, x)[0].index;
          const v = pointTap(raster.extent.height, level.extent.height, y)[0].index;
          expect(texelAt(level, x, y)).toEqual(texelAt(raster, u, v));
        }
      }
    }
  });
});

it('majority takes what the reference takes', () => {
  holds(fc.tuple(art, wraps), 60, ([raster, wrap]) => {
    for (const level of engineLevels(buildChain(raster, moving('majority', wrap)))) {
      for (let y = 0; y < level.extent.height; y++) {
        for (let x = 0; x < level.extent.width; x++) {
          const texel = majorityTexel(raster, level.extent, x, y);
          expect(texelAt(level, x, y)).toEqual(
            texelAt(raster, texel % raster.extent.width, Math.floor(texel / raster.extent.width)),
          );
        }
      }
    }
  });
});

describe('epx', () => {
  it('is Scale2x', () => {
    holds(art, 60, (raster) => {
      const target = double(raster);
      const chosen = scale2x(raster.extent, (a, b) => sameColor(raster, a, b));
      chosen.forEach((texel, at) => {
        const [x, y] = [at % target.extent.width, Math.floor(at / target.extent.width)];
        // Clear texels are one color, whichever of them is taken.
        const expected = texelAt(raster, texel % raster.extent.width, Math.floor(texel / raster.extent.width));
        const found = texelAt(target, x, y);
        if (raster.channels % 2 === 0 && expected[raster.channels - 1] === 0)
          expect(found[raster.channels - 1]).toBe(0);
        else expect(found).toEqual(expected);
      });
    });
  });

  it('leaves a texel alone where three neighbors are equal', () => {
    // Without this rule of EPX 340 of the 3125 crosses of five colors would come out otherwise; here is one of them.
    const cross = picture({ width: 3, height: 3 }, 1, 8, [9, 1, 9, 1, 5, 1, 9, 2, 9]);
    const target = double(cross);
    expect([2, 3].flatMap((y) => [2, 3].map((x) => texelAt(target, x, y)[0]))).toEqual([5, 5, 5, 5]);
  });

  it('fills the corners of a diagonal', () => {
    const line = painted({ width: 4, height: 4 }, 1, 8, (x, y) => [x === y ? 200 : 10]);
    const target = double(line);
    // Texel (1, 2) lies under the diagonal and touches it above and right: its corner there is filled.
    expect(texelAt(target, 3, 4)[0]).toBe(200);
    expect(texelAt(target, 2, 5)[0]).toBe(10);
  });

  it('commutes with mirroring', () => {
    holds(art, 40, (raster) => {
      const opaque = withoutHidden(raster);
      expect(double(mirrored(opaque)).codes).toEqual(mirrored(double(opaque)).codes);
    });
  });
});

describe('an indexed source', () => {
  it.each(['nearest', 'majority'])('stays indexed with its palette in order: %s', (name) => {
    holds(fc.tuple(seeds, smallExtents), 40, ([seed, extent]) => {
      const source = indexed(seed, extent);
      for (const { raster } of buildChain(source, moving(name)).images) {
        if (raster.kind !== 'indexed') throw new TypeError(`Expected an indexed raster but received ${raster.kind}`);
        expect(raster.palette).toEqual(source.palette);
        expect(raster.alphaCount).toBe(source.alphaCount);
        expect(raster.indexBits).toBe(source.indexBits);
        const used = new Set(source.indices);
        for (const index of raster.indices) expect(used.has(index)).toBe(true);
      }
    });
  });

  it('keeps its indices where colors of the palette are equal', () => {
    // Entries 1 and 3 look alike; only their place tells them apart.
    const palette = Uint8Array.of(0, 0, 0, 255, 9, 9, 9, 255, 50, 50, 50, 255, 9, 9, 9, 255);
    const indices = Uint8Array.of(3, 3, 1, 1, 3, 3, 1, 1, 2, 2, 0, 0, 2, 2, 0, 0);
    const source: IndexedRaster = {
      kind: 'indexed',
      extent: { width: 4, height: 4 },
      indexBits: 2,
      indices,
      palette,
      alphaCount: 0,
    };
    const level = buildChain(source, moving('majority')).images[1].raster;
    expect(level.kind === 'indexed' && Array.from(level.indices)).toEqual([3, 1, 2, 0]);
  });
});

function moving(name: string, wrap: Treatment['wrap'] = { x: 'clamp-to-edge', y: 'clamp-to-edge' }): Treatment {
  return treatment({ kernel: both(name), derive: 'base', wrap });
}

function double(raster: StraightRaster): StraightRaster {
  const one = { ...moving('epx'), levels: 'none', targets: [{ name: '2x', scale: 2 }] } as const;
  return straight(engineTarget(raster, { ...one, kernel: { ...one.kernel, minify: both('box').minify } }, '2x').raster);
}

function withHidden(raster: StraightRaster, seed: number): StraightRaster {
  return raster.channels % 2 === 0 ? withAlpha(raster, seed, 3, 7) : raster;
}

function withoutHidden(raster: StraightRaster): StraightRaster {
  return painted(raster.extent, raster.channels, raster.depth, (x, y) =>
    texelAt(raster, x, y).map((code) => Math.max(code, 1)),
  );
}

function colors(raster: StraightRaster): Set<string> {
  const found = new Set<string>();
  for (let at = 0; at < raster.codes.length; at += raster.channels) {
    found.add(raster.codes.subarray(at, at + raster.channels).join());
  }
  return found;
}

function sameColor(raster: StraightRaster, a: number, b: number): boolean {
  const { codes, channels } = raster;
  const clear = (texel: number): boolean => channels % 2 === 0 && codes[texel * channels + channels - 1] === 0;
  if (clear(a) || clear(b)) return clear(a) && clear(b);
  return Array.from({ length: channels }, (_, c) => codes[a * channels + c] === codes[b * channels + c]).every(Boolean);
}

function indexed(seed: number, extent: StraightRaster['extent']): IndexedRaster {
  const next = numbers(seed);
  const palette = Uint8Array.from({ length: 12 * 4 }, () => next() % 256);
  for (let entry = 0; entry < 12; entry++) palette[entry * 4 + 3] = entry < 3 ? next() % 256 : 255;
  const indices = Uint8Array.from({ length: extent.width * extent.height }, () => next() % 12);
  return { kind: 'indexed', extent, indexBits: 4, indices, palette, alphaCount: 3 };
}
