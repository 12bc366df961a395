import { refuse } from '../problem.ts';
import { type Extent, expandIndexed, type IndexedRaster, newCodes, type StraightRaster } from '../raster/raster.ts';
import type { Engine } from '../resample/engine.ts';
import type { Roughness, Treatment } from '../treatment/treatment.ts';
import { buildChain, type Chain } from './chain.ts';
import { lettersOf } from './layout.ts';

type Letter = Extract<Roughness, { path: string }>['channel'];

/** The roughness chain of a normal map: each image takes up what its normals have lost. `raster` is level 0, of one channel,
 *  `normals` the chain of the map under the same treatment. */
export function roughnessChain(
  raster: StraightRaster,
  treatment: Treatment,
  normals: Chain,
  engine: Engine | undefined,
): Chain {
  const lengths = new Map<string | number, Float32Array>();
  for (const [image, plane] of normals.lengths) lengths.set('level' in image ? image.level : image.target.name, plane);
  return buildChain(raster, roughnessTreatment(treatment), {
    ...(engine && { engine }),
    lengthsOf: (image) => lengths.get('level' in image ? image.level : image.target.name) ?? null,
  });
}

/** A surface of one perceptual roughness, 0..1. */
export function constantRoughness(constant: number, extent: Extent): StraightRaster {
  const codes = new Uint8Array(extent.width * extent.height).fill(Math.floor(constant * 255 + 0.5));
  return { kind: 'straight', extent, channels: 1, depth: 8, codes };
}

/** One channel of a map beside normals of the extent `expected`. Throws Refusal where the map does not fit. */
export function roughnessOfMap(map: StraightRaster | IndexedRaster, letter: Letter, expected: Extent): StraightRaster {
  const whole = map.kind === 'indexed' ? expandIndexed(map) : map;
  const { extent, channels, depth } = whole;
  const channel = roughnessIndex({ extent, channels }, letter, expected);
  const codes = newCodes(depth, extent.width * extent.height);
  for (let texel = 0; texel < codes.length; texel++) codes[texel] = whole.codes[texel * channels + channel];
  return { kind: 'straight', extent, channels: 1, depth, codes };
}

/** Index of the channel that holds roughness in a map. Throws Refusal where extents differ or the map has no such channel. */
export function roughnessIndex(
  map: Pick<StraightRaster, 'extent' | 'channels'>,
  letter: Letter,
  expected: Extent,
): number {
  const { extent, channels } = map;
  if (extent.width !== expected.width || extent.height !== expected.height) {
    const say = (each: Extent): string => `${each.width}x${each.height}`;
    refuse('roughness-extent', { found: say(extent), expected: say(expected) });
  }
  const letters = lettersOf(channels);
  const channel = letters.indexOf(letter);
  if (channel < 0) refuse('channel-missing', { letter, channels, letters: letters.join(', ') });
  return channel;
}

/** The normal map's treatment for a single channel of roughness. */
function roughnessTreatment(treatment: Treatment): Treatment {
  return {
    ...treatment,
    content: 'data',
    channels: { r: 'roughness' },
    transfer: 'linear',
    alpha: { ...treatment.alpha, use: 'data', keepCoverage: false, store: 'straight' },
    fill: 'none',
    normal: { ...treatment.normal, base: 'keep', roughness: null },
  };
}
