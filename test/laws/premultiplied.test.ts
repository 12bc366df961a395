import fc from 'fast-check';
import { expect, it } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { maxCode, type PremultipliedRaster } from '../../core/raster/raster.ts';
import { depths, kernels, LINEAR, oneOf, POSITIVE, seeds, smallExtents, wraps } from '../fixtures/arbitrary.ts';
import { noiseRaster, withAlpha } from '../fixtures/noise.ts';
import { both, treatment } from '../fixtures/treatment.ts';
import { referenceChain } from '../reference/chain.ts';
import { encodeFraction } from '../reference/transfer.ts';
import { holds } from './holds.ts';

// Color multiplied by alpha in linear light and then encoded.

const cases = fc.record({
  seed: seeds,
  extent: smallExtents,
  channels: oneOf([2, 4] as const),
  depth: depths,
  wrap: wraps,
  transfer: oneOf(['srgb', 'linear'] as const),
});

it('stores encode(color times alpha) at every level, level 0 too', () => {
  holds(fc.tuple(cases, kernels(POSITIVE)), 50, ([{ seed, extent, channels, depth, wrap, transfer }, kernel]) => {
    const image = withAlpha(noiseRaster(seed, extent, channels, depth, 'noise'), seed, 3, 3);
    const one = treatment({
      transfer,
      kernel: { minify: kernel, magnify: kernel },
      wrap,
      alpha: { store: 'premultiplied' },
    });
    const reference = referenceChain(image, one);
    const max = maxCode(depth);
    for (const { raster, level } of buildChain(image, one).images) {
      const { codes } = premultiplied(raster);
      const { carried } = reference[level ?? 0];
      for (let at = 0; at < codes.length; at++) {
        const alpha = at % channels === channels - 1;
        const exact = encodeFraction(carried.values[at], alpha ? 'linear' : transfer, max);
        expect(Math.abs(codes[at] - exact)).toBeLessThanOrEqual(0.5 + (depth === 8 ? 1e-3 : 0.05));
      }
    }
  });
});

it('stores no color above its alpha', () => {
  holds(fc.tuple(cases, kernels(LINEAR)), 50, ([{ seed, extent, channels, depth, wrap }, kernel]) => {
    const image = withAlpha(noiseRaster(seed, extent, channels, depth, 'extremes'), seed, 3, 3);
    const one = treatment({
      transfer: 'linear',
      kernel: { minify: kernel, magnify: kernel },
      wrap,
      alpha: { store: 'premultiplied' },
    });
    for (const { raster } of buildChain(image, one).images) {
      const { codes } = premultiplied(raster);
      for (let at = 0; at < codes.length; at++) {
        expect(codes[at]).toBeLessThanOrEqual(codes[at - (at % channels) + channels - 1]);
      }
    }
  });
});

it('holds linear light times alpha where a container has no transfer function', () => {
  holds(cases, 30, ({ seed, extent, channels, wrap, transfer }) => {
    const image = withAlpha(noiseRaster(seed, extent, channels, 16, 'noise'), seed, 3, 3);
    for (const store of ['straight', 'premultiplied'] as const) {
      const one = treatment({ transfer, kernel: both('box'), wrap, fill: 'none', alpha: { store } });
      const reference = referenceChain(image, one);
      for (const { raster, level } of buildChain(image, one, { light: 'linear' }).images) {
        if (level === 0 && store === 'straight') continue;
        const { codes } = raster.kind === 'indexed' ? { codes: raster.indices } : raster;
        const { carried, straight } = reference[level ?? 0];
        const light = store === 'straight' ? straight : carried.values;
        for (let at = 0; at < codes.length; at++) {
          const exact = Number.isNaN(light[at]) ? 0 : light[at] * 65535;
          // Linear 16-bit codes are as fine as float32 sums near 1: a few of its steps of 2^-24 are 1/50 of a code.
          expect(Math.abs(codes[at] - exact)).toBeLessThanOrEqual(0.5 + 0.05);
        }
      }
    }
  });
});

function premultiplied(raster: { readonly kind: string }): PremultipliedRaster {
  if (raster.kind !== 'premultiplied')
    throw new TypeError(`Expected a premultiplied raster but received ${raster.kind}`);
  return raster as PremultipliedRaster;
}
