import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { both, treatment } from '../fixtures/treatment.ts';

// Levels finer than the first that ships are gone through without being stored; those that ship must not know of it.

const opaque = noiseRaster(1, { width: 37, height: 22 }, 3, 8, 'noise');
const masked = withAlpha(noiseRaster(2, { width: 37, height: 22 }, 4, 8, 'noise'), 2, 3, 3);
/** Clear but for its last columns, so that most of what is made has to be filled. */
const clear = { ...masked, codes: masked.codes.map((code, at) => (at % 4 === 3 && (at >> 2) % 37 < 30 ? 0 : code)) };
const target = { name: 'between', extent: [12, 7] } as const;

it.each([
  ['color', opaque, treatment({ kernel: both('lanczos3') })],
  ['color, each level from level 0', opaque, treatment({ derive: 'base' })],
  ['a mask with coverage kept', masked, treatment({ alpha: { use: 'mask', keepCoverage: true } })],
  ['filled color', clear, treatment({ fill: 'all' })],
  ['filled color with a target', clear, treatment({ fill: 'hidden', targets: [target] })],
  ['moved codes', masked, treatment({ kernel: both('nearest') })],
  ['normals', opaque, treatment({ content: 'normal' })],
  ['heights with bounds', opaque, treatment({ content: 'height', height: { minmax: true } })],
])('levels of %s are the same, whichever ships first', (_, raster, settings) => {
  const whole = buildChain(raster, settings).images;
  for (const first of [1, 2, 4, 5]) {
    const { images } = buildChain(raster, { ...settings, levels: { first, last: null } });
    expect(images).toEqual(whole.filter(({ level }) => level === undefined || level >= first));
  }
});
