import { type Codes, type Depth, type Extent, maxCode, type StraightRaster } from '../../core/raster/raster.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { coverageOf, passingCode, searchScale } from './coverage.ts';
import { decodeRaster } from './decode.ts';
import type { Doubles } from './doubles.ts';
import { type Encoded, encodeDoubles } from './encode.ts';
import { chainExtents } from './extent.ts';
import { fillLevels } from './fill.ts';
import { type Meaning, meaningOf } from './meaning.ts';
import { resampleDoubles } from './resample.ts';

export interface ReferenceLevel {
  readonly extent: Extent;
  readonly channels: number;
  readonly depth: Depth;
  /** What the next level comes from: unclamped, premultiplied where weighted. */
  readonly carried: Doubles;
  /** Codes with their fractions before rounding; NaN where color comes from the fill. */
  readonly fractions: Float64Array;
  /** Straight values before clamping. */
  readonly straight: Float64Array;
  readonly codes: Codes;
  /** Of a mask: the share of samples that pass, and the scale of alpha. */
  readonly coverage: number | null;
  readonly alphaScale: number;
  readonly bracket: readonly [number, number];
  /** Of normals: their mean length over each texel, 0..1. */
  readonly lengths: Float64Array | null;
}

/** The whole chain of an image in double precision, for kernels that weigh (weights, area, slopes, and nearest). */
export function referenceChain(raster: StraightRaster, treatment: Treatment): ReferenceLevel[] {
  const meaning = meaningOf(raster.channels, treatment);
  const base = decodeRaster(raster, meaning);
  const depth = treatment.depth === 'same' ? raster.depth : treatment.depth;
  const carried = [base];
  for (const extent of chainExtents(raster.extent).slice(1)) {
    const from = treatment.derive === 'base' ? base : carried[carried.length - 1];
    carried.push(resampleDoubles(from, extent, treatment.kernel, treatment.wrap));
  }
  const wanted = coverageWanted(raster, treatment, meaning);
  const lengths = normalLengths(base, carried, treatment, meaning);
  const levels = carried.map((image, level) =>
    level === 0 && depth === raster.depth && treatment.normal.base === 'keep'
      ? baseLevel(raster, base, treatment, meaning)
      : storedLevel(image, raster.channels, treatment, meaning, depth, level === 0 ? null : wanted, lengths[level]),
  );
  if (meaning.alpha !== null && treatment.fill !== 'none') fillLevels(levels, treatment.fill === 'all' ? 0 : 1);
  return levels;
}

/** Level 0 is the source, code by code. */
function baseLevel(raster: StraightRaster, carried: Doubles, treatment: Treatment, meaning: Meaning): ReferenceLevel {
  const fractions = Float64Array.from(raster.codes);
  return {
    extent: raster.extent,
    channels: raster.channels,
    depth: raster.depth,
    carried,
    fractions,
    straight: fractions.map((code) => code / maxCode(raster.depth)),
    codes: raster.codes.slice(),
    coverage: coverageWanted(raster, treatment, meaning),
    alphaScale: 1,
    bracket: [0, 0],
    lengths: null,
  };
}

function storedLevel(
  image: Doubles,
  channels: number,
  treatment: Treatment,
  meaning: Meaning,
  depth: Depth,
  wanted: number | null,
  lengths: Float64Array | null,
): ReferenceLevel {
  const encode = (scale: number): Encoded => encodeDoubles(image, channels, meaning, depth, scale, lengths);
  const measure = (scale: number): number =>
    coverage(encode(scale).codes, image, channels, treatment, maxCode(depth), meaning.alpha);
  const search = wanted === null || !treatment.alpha.keepCoverage ? null : searchScale(measure, wanted);
  const alphaScale = search?.scale ?? 1;
  return {
    extent: { width: image.width, height: image.height },
    channels,
    depth,
    carried: image,
    ...encode(alphaScale),
    coverage: wanted === null ? null : measure(alphaScale),
    alphaScale,
    bracket: search?.bracket ?? [0, 0],
    lengths,
  };
}

/** Mean length of the normals over each texel of each level, always by box weights: those of the chain itself where it has
 *  them, else straight from the base. Null where there are no normals. */
function normalLengths(
  base: Doubles,
  carried: readonly Doubles[],
  treatment: Treatment,
  meaning: Meaning,
): (Float64Array | null)[] {
  const { normal } = meaning;
  if (normal === null) return carried.map(() => null);
  const box = { name: 'box', params: {} };
  const own = treatment.kernel.minify.name === 'box' || treatment.kernel.minify.name === 'even';
  return carried.map((image) => {
    const here = own ? image : resampleDoubles(base, image, { minify: box, magnify: box }, treatment.wrap);
    return Float64Array.from({ length: image.width * image.height }, (_, texel) => {
      const at = texel * here.channels;
      const length = Math.hypot(here.values[at + normal.x], here.values[at + normal.y], here.values[at + normal.z]);
      const weighted = meaning.alpha !== null && meaning.weighted.includes(normal.x);
      return Math.min(1, weighted ? length / here.values[at + (meaning.alpha ?? 0)] : length);
    });
  });
}

function coverageWanted(raster: StraightRaster, treatment: Treatment, meaning: Meaning): number | null {
  if (treatment.alpha.use !== 'mask' || meaning.alpha === null) return null;
  return coverage(raster.codes, raster.extent, raster.channels, treatment, maxCode(raster.depth), meaning.alpha);
}

function coverage(
  codes: Codes,
  extent: Extent,
  channels: number,
  treatment: Treatment,
  max: number,
  alpha: number | null,
): number {
  const plane = Array.from(
    { length: extent.width * extent.height },
    (_, texel) => codes[texel * channels + (alpha ?? channels - 1)],
  );
  return coverageOf({ extent, codes: plane, wrap: treatment.wrap }, passingCode(treatment.alpha, max));
}
