import { describe, expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { lone, painted, texelAt } from '../fixtures/picture.ts';
import { cloud, normalMap, portrait } from '../fixtures/pictures.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { engineLevels, engineTarget, straight } from '../laws/builders.ts';
import { referenceChain } from '../reference/chain.ts';
import { sampledCoverage } from '../reference/coverage.ts';

// The laws once more, on images that people drew.

describe.each(['0003', '0008', '0013', '0020', '0025'])('normal map %s', (name) => {
  it('stays unit at every level and flattens as it goes', async () => {
    const map = await normalMap(name);
    const repeat = { x: 'repeat', y: 'repeat' } as const;
    const { images } = buildChain(map, treatment({ content: 'normal', wrap: repeat }));
    expect(images.length).toBe(10);
    for (const { raster } of images.slice(1)) {
      const { codes } = straight(raster);
      for (let at = 0; at < codes.length; at += 3) {
        const length = Math.hypot(...[0, 1, 2].map((c) => (codes[at + c] / 255) * 2 - 1));
        if (Math.abs(length - 1) > (Math.sqrt(3) / 255) * 1.01) expect.fail(`length ${length} at ${at}`);
      }
    }
    // Means of means get no longer; 512 halves evenly, so box weights nest.
    const lengths = images.slice(1).map((image) => image.normalLength ?? 2);
    lengths.forEach((length, i) => {
      expect(length).toBeLessThanOrEqual((lengths[i - 1] ?? 1) + 1e-6);
    });
    expect(lengths[lengths.length - 1]).toBeLessThan(1);
  });

  it('equals the reference but near boundaries', async () => {
    const map = part(await normalMap(name), 96, 80);
    const one = treatment({ content: 'normal', kernel: both('kaiser') });
    const reference = referenceChain(map, one);
    engineLevels(buildChain(map, one)).forEach((level, i) => {
      level.codes.forEach((code, at) => {
        const exact = reference[i].fractions[at];
        if (Math.abs(code - exact) > 0.5 + 1e-3) expect.fail(`level ${i}: ${code} for ${exact}`);
      });
    });
  });
});

describe('a cloud with soft alpha', () => {
  it('has no black under alpha 0 and no fringe: colors stay within those that can be seen', async () => {
    const image = await cloud();
    const seen = [255, 0];
    for (let at = 0; at < image.codes.length; at += 4) {
      if (image.codes[at + 3] === 0) continue;
      seen[0] = Math.min(seen[0], image.codes[at]);
      seen[1] = Math.max(seen[1], image.codes[at]);
    }
    for (const { codes } of engineLevels(buildChain(image, treatment({ kernel: both('box') }))).slice(1)) {
      for (let at = 0; at < codes.length; at += 4) {
        if (codes[at] < seen[0] || codes[at] > seen[1]) expect.fail(`red ${codes[at]} outside ${seen}`);
      }
    }
  });

  it('keeps its coverage as a sampler sees it, down to 8 x 8', async () => {
    const image = await cloud();
    const wrap = { x: 'clamp-to-edge', y: 'clamp-to-edge' } as const;
    const one = treatment({ wrap, alpha: { use: 'mask', cutoff: 0.25, keepCoverage: true } });
    const { images } = buildChain(image, one);
    const wanted = images[0].coverage ?? 0;
    expect(wanted).toBeGreaterThan(0.05);
    for (const { raster, extent, coverage } of images.slice(1)) {
      if (extent.width > 256 || extent.width < 8) continue;
      const seen = sampledCoverage({ ...lone(straight(raster), 3), wrap }, Math.ceil(0.25 * 255));
      expect(seen).toBe(coverage);
      // Soft alpha has a code for every sample: a step of the scale moves a handful of the 16 a texel.
      expect(Math.abs(seen - wanted)).toBeLessThanOrEqual(16 / (extent.width * extent.height * 16) + 1e-3);
    }
  });
});

describe.each(['Felix', 'Aneka', 'Milo', 'Zoe'])('pixel art %s', (seed) => {
  it('keeps its palette under every kernel that moves codes', async () => {
    const sprite = await portrait(seed);
    expect(sprite.extent).toEqual({ width: 16, height: 16 });
    const palette = colors(sprite);
    expect(palette.size).toBeLessThan(40);
    for (const name of ['nearest', 'majority']) {
      for (const level of engineLevels(buildChain(sprite, treatment({ kernel: both(name), derive: 'base' })))) {
        for (const color of colors(level)) expect(palette.has(color), color).toBe(true);
      }
    }
    for (const [name, scale] of [
      ['epx', 2],
      ['epx', 3],
      ['nearest', 4],
    ] as const) {
      const kernel = { minify: both('box').minify, magnify: both(name).magnify };
      const one = treatment({ kernel, levels: 'none', targets: [{ name: 'big', scale }] });
      for (const color of colors(straight(engineTarget(sprite, one, 'big').raster)))
        expect(palette.has(color), color).toBe(true);
    }
  });

  it('keeps the width of its pixels at a whole scale', async () => {
    const sprite = await portrait(seed);
    const one = treatment({ kernel: both('even'), levels: 'none', targets: [{ name: '2x', scale: 2 }] });
    const twice = straight(engineTarget(sprite, one, '2x').raster);
    for (let y = 0; y < 32; y++) {
      for (let x = 0; x < 32; x++) {
        const own = texelAt(sprite, x >> 1, y >> 1);
        if (own[3] !== 0) expect(texelAt(twice, x, y)).toEqual(own);
      }
    }
  });
});

function part(raster: StraightRaster, width: number, height: number): StraightRaster {
  return painted({ width, height }, raster.channels, raster.depth, (x, y) => texelAt(raster, x, y));
}

function colors(raster: StraightRaster): Set<string> {
  const found = new Set<string>();
  for (let at = 0; at < raster.codes.length; at += raster.channels) {
    found.add(raster.codes.subarray(at, at + raster.channels).join());
  }
  return found;
}
