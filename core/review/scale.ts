import { buildChain } from '../chain/chain.ts';
import type { Ports } from '../port.ts';
import { comparePictures } from './difference.ts';
import { type Subject, seenImage, seenSource } from './subject.ts';

/** How far the smaller of two pictures is from the larger one, filtered to its extent by area in linear light. */
export interface Scale {
  /** Of the second against the first, along the longer side. */
  readonly factor: number;
  /** Mean distance, as `Difference` has it. */
  readonly mean: number;
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
  return { factor, mean: comparePictures(found, { ...seenSource(smaller), passing: null }).mean };
}
