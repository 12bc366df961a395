import type { ColorChunk } from '../codec/source.ts';
import type { Extent } from '../raster/raster.ts';
import type { SizeReview } from './sizes.ts';
import { seenShare } from './visible.ts';

/** Something about a change that is seldom meant and easily missed. */
export type HarmName =
  | 'unreadable'
  | 'alpha-lost'
  | 'coverage-lost'
  | 'texels-lost'
  | 'depth-lost'
  | 'tag-added'
  | 'normals-flattened';

export interface Harm {
  readonly name: HarmName;
  /** How much of it, 0..1: what is lost as a share of what there was; 1 where there is nothing to measure. */
  readonly severity: number;
  /** The size at which it is worst; null where it concerns the file. */
  readonly image: SizeReview['image'] | null;
}

/** How much a change matters, to sort by. */
export interface Impact {
  /** 0 where nothing is seen; below 100 without a harm, and from 100 on with one. */
  readonly score: number;
  readonly harms: readonly Harm[];
}

/** What the facts of both sides' headers, and the sizes where they were compared, say of a change. */
export interface Facts {
  readonly extent: Extent;
  readonly depth: number;
  /** Whether some texel is not wholly opaque; by the header alone, whether there is an alpha channel. */
  readonly transparent: boolean;
  readonly colorChunks: readonly Pick<ColorChunk, 'name' | 'value'>[];
}

/** The impact of a change: 100 for each harm and up to 100 more by its severity, and on top of that what is seen: 99 times the
 *  share of texels that are seen to differ, in the mean over all sizes. So any harm comes before any repaint, however large, and
 *  of two repaints the one that is seen at more sizes. */
export function impactOf(harms: readonly Harm[], sizes: readonly SizeReview[]): Impact {
  const seen = sizes.flatMap((size) => (size.difference === null ? [] : [seenShare(size)]));
  const mean = seen.length === 0 ? 0 : seen.reduce((sum, each) => sum + each, 0) / seen.length;
  const harm = harms.reduce((sum, { severity }) => sum + 100 + 100 * severity, 0);
  return { score: round(harm + 99 * mean), harms };
}

/** Harms that headers tell. */
export function harmsOfFacts(before: Facts, after: Facts): Harm[] {
  const harms: Harm[] = [];
  const add = (name: HarmName, severity: number): void => {
    harms.push({ name, severity, image: null });
  };
  if (before.transparent && !after.transparent) add('alpha-lost', 1);
  const left = (after.extent.width * after.extent.height) / (before.extent.width * before.extent.height);
  if (left < MOST_TEXELS_LEFT) add('texels-lost', 1 - left);
  if (after.depth < before.depth) add('depth-lost', 1 - after.depth / before.depth);
  if (addsTag(before.colorChunks, after.colorChunks)) add('tag-added', 1);
  return harms;
}

/** Harms that the sizes tell: coverage and normals, each at its worst. Sizes below 64 texels are not judged, as by `thinning`:
 *  a handful of texels cannot hold a share. */
export function harmsOfSizes(sizes: readonly SizeReview[]): Harm[] {
  const judged = sizes.filter(({ extent }) => extent.width * extent.height >= LEAST_TEXELS);
  const coverage = worstLoss('coverage-lost', judged, LEAST_COVERAGE_LOSS, ({ coverage: share }) => share);
  const normals = worstLoss('normals-flattened', judged, LEAST_LENGTH_LOSS, ({ normalLength }) => normalLength);
  return [coverage, normals].flatMap((each) => each ?? []);
}

export const LEAST_TEXELS = 64;

// Where harm begins. What is lost to rounding and to another cut of the same picture stays below; there is no published number,
// these are common practice.
export const LEAST_COVERAGE_LOSS = 0.05;
const LEAST_LENGTH_LOSS = 0.02;
/** Half the width or height, or about seven tenths of both: a level of sharpness. */
const MOST_TEXELS_LEFT = 0.5 + 1 / 64;

function worstLoss(
  name: HarmName,
  sizes: readonly SizeReview[],
  least: number,
  of: (figures: NonNullable<SizeReview['before']>) => number | null,
): Harm | null {
  let worst: Harm | null = null;
  for (const { image, before, after } of sizes) {
    const [was, is] = [before && of(before), after && of(after)];
    if (was === null || is === null || was === 0) continue;
    const severity = 1 - is / was;
    if (severity >= least && severity > (worst?.severity ?? 0)) worst = { name, severity, image };
  }
  return worst;
}

/** A tag that says otherwise than sRGB makes viewers and engines show two pictures. */
function addsTag(before: Facts['colorChunks'], after: Facts['colorChunks']): boolean {
  const said = (chunks: Facts['colorChunks']): string[] =>
    chunks.filter((chunk) => !saysSrgb(chunk)).map(({ name, value }) => `${name} ${value}`);
  const known = new Set(said(before));
  return said(after).some((each) => !known.has(each));
}

/** What the standard gives for sRGB, within its rounding. [PNG3, 11.3.2.5 "sRGB"] */
function saysSrgb({ name, value }: Facts['colorChunks'][number]): boolean {
  switch (name) {
    case 'sRGB':
      return true;
    case 'gAMA':
      return Math.abs(Number(value) - 45455) <= 10;
    case 'cHRM':
      return SRGB.every((expected, index) => Math.abs(Number(value.split(' ')[index]) - expected) <= 10);
    case 'cICP':
      return value === '1 13 0 1';
    case 'iCCP':
      return false;
  }
}

const SRGB = [31270, 32900, 64000, 33000, 30000, 60000, 15000, 6000];

function round(score: number): number {
  return Math.round(score * 10) / 10;
}
