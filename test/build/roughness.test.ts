import { describe, expect, it } from 'vitest';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { build, container, judged, pngOf } from '../fixtures/built.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { flat, painted, texelAt } from '../fixtures/picture.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { both, treatment } from '../fixtures/treatment.ts';

// r' = (mean r^4 + 2 (1 - L) / L)^(1/4), L the mean length of the normals by box weights.

const code = (component: number): number => Math.round(((component + 1) / 2) * 65535);
/** Normals that lean by 30 degrees to either side, texel by texel: their mean has length cos 30. */
const leaning = painted({ width: 4, height: 2 }, 3, 16, (x) => [
  code(x % 2 === 0 ? 0.5 : -0.5),
  code(0),
  code(Math.sqrt(3) / 2),
]);
const upright = flat({ width: 4, height: 2 }, 16, [code(0), code(0), 65535]);
const SPREAD = (2 * (1 - Math.sqrt(3) / 2)) / (Math.sqrt(3) / 2);

const byMap = treatment({ content: 'normal', normal: { roughness: { path: 'art/moss_rough.png', channel: 'r' } } });
const byConstant = treatment({ content: 'normal', normal: { roughness: { constant: 0.25 } } });

describe('a map', () => {
  const map = painted({ width: 4, height: 2 }, 1, 16, (x) => [[10000, 30000, 60000, 65535][x]]);
  const share = (codes: readonly number[]): number =>
    codes.reduce((sum, each) => sum + (each / 65535) ** 4, 0) / codes.length;

  it.each(['box', 'even'])('takes up the spread of the normals under %s', async (name) => {
    const { files, manifest } = await build(
      pngOf(leaning),
      { ...byMap, kernel: both(name) },
      { roughness: pngOf(map) },
    );
    const [left, right] = [
      [10000, 30000],
      [60000, 65535],
    ].map((codes) => (share(codes) + SPREAD) ** 0.25 * 65535);
    const level = judged(files.get('art/moss.roughness.1.png'));
    expect(level.extent).toEqual({ width: 2, height: 1 });
    expect(Math.abs(level.codes[0] - left)).toBeLessThan(2);
    // Clamped: the right pair was nearly 1 before.
    expect(right).toBeGreaterThan(65535);
    expect(level.codes[1]).toBe(65535);
    expect(manifest.sources.map(({ use, path }) => [use, path])).toEqual([
      ['image', '../src/moss.png'],
      ['roughness', '../src/moss_rough.png'],
    ]);
    const { levels, vkFormat } = container(files.get('art/moss.roughness.ktx2'), 16);
    expect(vkFormat).toBe(70);
    expect(levels[0].codes).toEqual(map.codes);
    expect(levels[1].codes).toEqual(level.codes);
  });

  it('alone is averaged as r^4', async () => {
    const { files } = await build(pngOf(upright), byMap, { roughness: pngOf(map) });
    const level = judged(files.get('art/moss.roughness.2.png'));
    expect(level.extent).toEqual({ width: 1, height: 1 });
    expect(Math.abs(level.codes[0] - share([10000, 30000, 60000, 65535]) ** 0.25 * 65535)).toBeLessThan(1);
  });

  it('is weighed by the kernel, the spread by box', async () => {
    // One normal in eight leans. Under a wide kernel every texel of level 1 feels it; its length is felt under it alone.
    const bump = painted({ width: 8, height: 1 }, 3, 16, (x) =>
      x === 2 ? [code(Math.sqrt(3) / 2), code(0), code(0.5)] : [code(0), code(0), 65535],
    );
    const gray = flat({ width: 8, height: 1 }, 16, [20000]);
    const one = { ...byMap, kernel: both('b-spline') };
    const { files } = await build(pngOf(bump), one, { roughness: pngOf(gray) });
    const level = judged(files.get('art/moss.roughness.1.png'));
    const length = Math.hypot(Math.sqrt(3) / 4, 0.75);
    const rough = ((20000 / 65535) ** 4 + (2 * (1 - length)) / length) ** 0.25 * 65535;
    [20000, rough, 20000, 20000].forEach((expected, x) => {
      // Where L is 1 up to float32 rounding, 2^-24 or so, the root of r^4 + 2^-23 is 2^-23 / (4 r^3) more: half a code here.
      expect(Math.abs(level.codes[x] - expected)).toBeLessThan(1.5);
    });
  });

  it('may be a channel of a packed file, and its level 0 is then written', async () => {
    const packed = painted({ width: 4, height: 2 }, 3, 8, (x, y) => [1, 10 * x + y, 2]);
    const one = treatment({ ...byMap, normal: { roughness: { path: 'art/orm.png', channel: 'g' } } });
    const { files } = await build(pngOf(upright), one, { roughness: pngOf(packed) });
    const base = judged(files.get('art/moss.roughness.0.png'));
    expect(base.channels).toBe(1);
    for (let x = 0; x < 4; x++) expect(texelAt(base, x, 1)).toEqual([10 * x + 1]);
  });

  it('of its own has no level 0 beside it, unless its depth changes', async () => {
    const same = await build(pngOf(upright), byMap, { roughness: pngOf(map) });
    expect(same.files.has('art/moss.roughness.0.png')).toBe(false);
    const shallow = await build(pngOf(upright), { ...byMap, depth: 8 }, { roughness: pngOf(map) });
    const base = judged(shallow.files.get('art/moss.roughness.0.png'));
    expect(Array.from(base.codes.subarray(0, 4))).toEqual(
      [10000, 30000, 60000, 65535].map((each) => Math.round(each / 257)),
    );
  });

  it('may be indexed, or interlaced', async () => {
    const palette = Uint8Array.of(40, 80, 0, 255, 200, 90, 0, 255);
    const indices = Uint8Array.from({ length: 8 }, (_, i) => i % 2);
    const indexed = {
      kind: 'indexed',
      extent: { width: 4, height: 2 },
      indexBits: 1,
      indices,
      palette,
      alphaCount: 0,
    } as const;
    const plain = painted({ width: 4, height: 2 }, 1, 8, (x) => [x % 2 === 0 ? 80 : 90]);
    const green = treatment({ ...byMap, normal: { roughness: { path: 'r.png', channel: 'g' } } });
    const expected = await build(pngOf(upright), byMap, { roughness: pngOf(plain) });
    const found = await build(pngOf(upright), green, { roughness: pngOf(indexed, [], 1) });
    expect(found.files.get('art/moss.roughness.1.png')).toEqual(expected.files.get('art/moss.roughness.1.png'));
  });

  it('reaches the targets', async () => {
    const one = { ...byMap, levels: 'none' as const, targets: [{ name: '0.5x', scale: 0.5 }] };
    const { files } = await build(pngOf(leaning), one, { roughness: pngOf(flat({ width: 4, height: 2 }, 16, [0])) });
    const target = judged(files.get('art/moss.roughness.0.5x.png'));
    for (const rough of target.codes) expect(Math.abs(rough - SPREAD ** 0.25 * 65535)).toBeLessThan(2);
  });

  it('keeps lengths of box weights in targets that grow', async () => {
    // Each texel of 2x lies in one texel of the source: no spread, whatever the kernel mixes.
    const one = {
      ...byMap,
      kernel: { minify: both('box').minify, magnify: both('triangle').magnify },
      levels: 'none' as const,
      targets: [{ name: '2x', scale: 2 }],
    };
    const { files } = await build(pngOf(leaning), one, {
      roughness: pngOf(flat({ width: 4, height: 2 }, 16, [20000])),
    });
    for (const rough of judged(files.get('art/moss.roughness.2x.png')).codes)
      expect(Math.abs(rough - 20000)).toBeLessThan(1.5);
  });
});

describe('a constant', () => {
  it('takes up the spread too, and its level 0 is written since no source holds it', async () => {
    const { files, manifest } = await build(pngOf(leaning), byConstant);
    expect(manifest.sources.length).toBe(1);
    expect(new Set(judged(files.get('art/moss.roughness.0.png')).codes)).toEqual(new Set([64]));
    const rough = ((64 / 255) ** 4 + SPREAD) ** 0.25 * 255;
    expect(Array.from(judged(files.get('art/moss.roughness.1.png')).codes)).toEqual([
      Math.round(rough),
      Math.round(rough),
    ]);
  });

  it('stays where normals agree', async () => {
    const { files } = await build(pngOf(upright), byConstant);
    for (const level of [1, 2])
      expect(new Set(judged(files.get(`art/moss.roughness.${level}.png`)).codes)).toEqual(new Set([64]));
  });

  it('is written in no PNG where no level is', async () => {
    const { files } = await build(pngOf(upright), { ...byConstant, levels: 'none' });
    expect([...files.keys()]).toEqual(['art/moss.ktx2', 'art/moss.roughness.ktx2']);
  });
});

describe('a refusal', () => {
  const refused = (
    map: StraightRaster | Uint8Array,
    channel: 'r' | 'g' | 'b' | 'a' = 'r',
    keys = {},
  ): ReturnType<typeof problemOf> => {
    const one = treatment({ ...byMap, normal: { roughness: { path: 'art/moss_rough.png', channel } }, ...keys });
    return problemOf(() => build(pngOf(upright), one, { roughness: map instanceof Uint8Array ? map : pngOf(map) }));
  };

  it('names both extents', async () => {
    const problem = await refused(noiseRaster(1, { width: 2, height: 4 }, 1, 8, 'noise'));
    expect(problem).toMatchObject({ code: 'roughness-extent', values: { found: '2x4', expected: '4x2' } });
    expect(problem?.path).toBe('art/moss_rough.png');
  });

  it.each([
    [1, 'g', 'r'],
    [2, 'g', 'r, a'],
    [3, 'a', 'r, g, b'],
  ] as const)('names the channels that a file of %i has where %s is asked for', async (channels, letter, letters) => {
    const problem = await refused(noiseRaster(1, { width: 4, height: 2 }, channels, 8, 'noise'), letter);
    expect(problem).toMatchObject({ code: 'channel-missing', values: { letter, channels, letters } });
    expect(problem?.path).toBe('art/moss_rough.png');
  });

  it('of a damaged map names the map', async () => {
    const bytes = pngOf(noiseRaster(1, { width: 4, height: 2 }, 1, 8, 'noise'));
    bytes[bytes.length - 20] ^= 255;
    const problem = await refused(bytes);
    expect(problem).toMatchObject({ code: 'png-chunk-crc', path: 'art/moss_rough.png' });
  });

  it('is given where a sheet has a map beside it', async () => {
    const problem = await refused(upright, 'r', { grid: { cell: [2, 2], gutter: 0 } });
    expect(problem?.code).toBe('roughness-grid');
  });

  it('is no refusal but a mistake of the caller where the map is not handed over', async () => {
    await expect(build(pngOf(upright), byMap)).rejects.toThrow(RangeError);
  });
});
