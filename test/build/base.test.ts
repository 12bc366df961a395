import { expect, it } from 'vitest';
import { planBuild } from '../../core/build/plan.ts';
import { openSource } from '../../core/build/source.ts';
import type { ChannelCount, Depth, IndexedRaster, StraightRaster } from '../../core/raster/raster.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { build, pngOf } from '../fixtures/built.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { both, treatment } from '../fixtures/treatment.ts';

// A level 0 whose codes are the source's is not held where only PNG levels are written. What the manifest says of it may not hang
// on that.

const extent = { width: 37, height: 22 };

function picture(channels: ChannelCount, depth: Depth = 8): StraightRaster {
  const raster = noiseRaster(channels, extent, channels, depth, 'noise');
  return channels % 2 === 0 ? withAlpha(raster, 3, 3, 4) : raster;
}

const indexed: IndexedRaster = {
  kind: 'indexed',
  extent,
  indexBits: 4,
  palette: Uint8Array.from({ length: 64 }, (_, at) => (at * 37) % 256),
  alphaCount: 5,
  indices: Uint8Array.from({ length: 37 * 22 }, (_, at) => (at * at) % 16),
};

type Settings = Parameters<typeof treatment>[0];

const dropped: readonly (readonly [string, StraightRaster | IndexedRaster, Settings])[] = [
  ['RGBA', picture(4), {}],
  ['RGBA, nothing filled', picture(4), { fill: 'none' }],
  ['RGB', picture(3), {}],
  ['gray and alpha', picture(2), {}],
  ['gray', picture(1), {}],
  ['16-bit RGBA', picture(4, 16), {}],
  ['an indexed source', indexed, {}],
  ['data', picture(4), { content: 'data', alpha: { use: 'data' } }],
  ['normals', picture(3), { content: 'normal', kernel: both('box') }],
  ['some levels', picture(4), { levels: { first: 0, last: 2 } }],
];

const kept: readonly (readonly [string, StraightRaster | IndexedRaster, Settings])[] = [
  ['a mask', picture(4), { alpha: { use: 'mask', keepCoverage: false } }],
  ['color beside alpha that weighs nothing', picture(4), { alpha: { weight: false } }],
  ['another depth', picture(4), { depth: 16 }],
  ['another depth that no file holds', picture(4), { depth: 16, levels: 'none', targets: [{ name: '2x', scale: 2 }] }],
  [
    'data of another depth that no file holds',
    picture(1),
    { content: 'data', depth: 16, levels: 'none', targets: [{ name: '2x', scale: 2 }], kernel: both('kaiser') },
  ],
  ['everything filled', picture(4), { fill: 'all' }],
  ['a file of level 0', picture(4), { png: { base: true } }],
  ['codes that are moved', picture(4), { kernel: both('nearest') }],
];

it.each([...dropped, ...kept])(
  'of %s the manifest says the same with a container and without',
  async (_, raster, one) => {
    const file = pngOf(raster);
    const alone = await build(file, treatment({ ...one, outputs: ['png'] }));
    const together = await build(file, treatment({ ...one, outputs: ['png', 'ktx2'] }));
    expect(alone.manifest.levels).toEqual(together.manifest.levels);
    expect(alone.manifest.targets).toEqual(together.manifest.targets);
  },
);

it.each(dropped)('of %s level 0 is not held for PNG alone', (_, raster, one) => {
  expect(keepsBase(raster, treatment({ ...one, outputs: ['png'] }))).toBe(false);
  expect(keepsBase(raster, treatment({ ...one, outputs: ['png', 'ktx2'] }))).toBe(true);
});

it.each(kept)('of %s level 0 is held', (_, raster, one) => {
  expect(keepsBase(raster, treatment({ ...one, outputs: ['png'] }))).toBe(true);
});

function keepsBase(raster: StraightRaster | IndexedRaster, one: Treatment): boolean {
  const { facts } = openSource('a.png', { bytes: pngOf(raster), reference: '' }, nodePorts);
  return planBuild('a.png', facts, one, plainEngine).chain.keepsBase;
}
