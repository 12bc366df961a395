import { buildChain } from '../chain/chain.ts';
import type { Ports } from '../port.ts';
import type { Picture } from '../proof/want.ts';
import { newCodes } from '../raster/raster.ts';
import { comparePictures } from './difference.ts';
import { type Subject, seenImage, seenSource } from './subject.ts';

/** How far the smaller of two pictures is from the larger one, filtered to its extent by area in linear light. */
export interface Scale {
  /** Of the second against the first, along the longer side. */
  readonly factor: number;
  /** Mean distance, as `Difference` has it. */
  readonly mean: number;
  /** The same against one texel everywhere, the mean of all: what any other picture of these colors would be apart. */
  readonly spread: number;
}

/** Whether one picture is the other at another size: null where their sides are not in one ratio, up to a rounded texel. */
export function findScale(before: Subject, after: Subject, { engine }: Pick<Ports, 'engine'>): Scale | null {
  const [one, other] = [before.header.extent, after.header.extent];
  const byWidth = one.width >= one.height;
  const factor = byWidth ? other.width / one.width : other.height / one.height;
  const crossing = byWidth ? [one.height * factor, other.height] : [one.width * factor, other.width];
  if (Math.abs(crossing[0] - crossing[1]) > 1) return null;
  const [larger, smaller] = factor < 1 ? [before, after] : [after, before];
  const { extent } = smaller.header;
  const even = { name: 'even', params: {} };
  const { treatment } = larger.side;
  const chain = buildChain(
    larger.raster,
    {
      ...treatment,
      alpha: { ...treatment.alpha, keepCoverage: false, store: 'straight' },
      kernel: { minify: even, magnify: even },
      levels: 'none',
      grid: null,
      depth: 'same',
      fill: 'none',
      height: { minmax: false },
      targets: [{ name: 'smaller', extent: [extent.width, extent.height] }],
    },
    engine === undefined ? {} : { engine },
  );
  const made = chain.images.find((image) => image.target === 'smaller');
  if (made === undefined) throw new TypeError('Expected the target that was asked for');
  // Alpha is compared as it is: a test would turn small differences of filters into whole ones.
  const found = { ...seenImage(chain, made), passing: null };
  const given = { ...seenSource(smaller), passing: null };
  const flat = { picture: flatten(given.picture), passing: null };
  return { factor, mean: comparePictures(found, given).mean, spread: comparePictures(flat, given).mean };
}

/** The picture with the mean of its codes in every texel. */
function flatten(picture: Picture): Picture {
  const { codes, channels, extent, depth } = picture;
  const texels = extent.width * extent.height;
  const sums = new Float64Array(channels);
  for (let at = 0; at < codes.length; at++) sums[at % channels] += codes[at];
  const flat = newCodes(depth, codes.length);
  for (let at = 0; at < flat.length; at++) flat[at] = Math.round(sums[at % channels] / texels);
  return { ...picture, codes: flat };
}
