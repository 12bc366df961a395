import type { Extent } from '../raster/raster.ts';
import { detailBytes } from '../resample/detail.ts';
import type { Engine } from '../resample/engine.ts';
import { majorityBytes } from '../resample/majority.ts';
import { plainEngine } from '../resample/plain.ts';
import { type ChainPlan, type PlannedLevel, type PlannedTarget, passOf, pictureExtent } from './plan.ts';
import { scaleCountsBytes } from './scale-counts.ts';

/** Bytes that building a chain holds at its worst, its source's own raster left out: the base where it is kept, all images,
 *  rows in flight, planes, and what the costliest step holds for itself. */
export function chainBytes(plan: ChainPlan, engine: Engine = plainEngine): number {
  const images = imagesOf(plan);
  const { pass } = passOf(plan);
  const rows = engine.passBytes(pass) * (plan.lengthPass ? 2 : 1);
  return baseBytes(plan) + sum(images, (image) => workBytes(plan, image)) + rows + stepBytes(plan, images);
}

/** The same for a sheet of `count` cells that are filtered alone: every cell's images are kept until all are put together,
 *  and the sheet itself is held all the while. */
export function sheetBytes(whole: ChainPlan, cell: ChainPlan, count: number, engine: Engine = plainEngine): number {
  const { extent } = whole.head;
  const source = areaOf(extent) * sourceTexel(whole);
  // Level 0 is kept, recoded and copied before cells are put into it.
  const kept = areaOf(cell.head.extent) * storedTexel(cell) + sum(imagesOf(cell), (image) => imageBytes(cell, image));
  const shares = Math.ceil(areaOf(extent) / areaOf(cell.head.extent));
  const assembled = shares * sum(imagesOf(cell), (image) => imageBytes(cell, image));
  return source + count * kept + chainBytes(cell, engine) + assembled + 3 * areaOf(extent) * storedTexel(whole);
}

type Planned = PlannedLevel | PlannedTarget;

function imagesOf(plan: ChainPlan): readonly Planned[] {
  return [...plan.levels.slice(1), ...plan.targets];
}

/** Level 0 as it came in; as it is stored, where that differs; and expanded, where it is measured and indexed. */
function baseBytes(plan: ChainPlan): number {
  if (!plan.keepsBase) return 0;
  const { head, treatment } = plan;
  const unit = treatment.normal.base === 'renormalise' && plan.layout.normals.length > 0;
  const expanded = plan.indexed ? head.channels : 0;
  return areaOf(head.extent) * (sourceTexel(plan) + (unit ? 2 : 1) * storedTexel(plan) + expanded);
}

/** An image in work: its codes, the planes of alpha and lengths, and sums of its rows. */
function workBytes(plan: ChainPlan, image: Planned): number {
  const lengths = plan.layout.normals.length > 0 ? 4 : 0;
  const measured = plan.lengthPass ? storedTexel(plan) + lengths : 0;
  const planes = (plan.keepsCoverage ? 2 : 0) + lengths + measured;
  const bounds = plan.treatment.height.minmax ? 2 * storedTexel(plan) : 0;
  const { height } = pictureExtent(image);
  return imageBytes(plan, image) + areaOf(pictureExtent(image)) * (planes + bounds) + ROW_SUMS * height;
}

/** Two sums of doubles a row. */
const ROW_SUMS = 16;

/** Codes of an image, and of the cell that it stands in, which may add an alpha. */
function imageBytes(plan: ChainPlan, image: Planned): number {
  const picture = areaOf(pictureExtent(image)) * storedTexel(plan);
  if (!('place' in image) || areaOf(image.place.whole) === areaOf(image.place.picture)) return picture;
  const widened = plan.indexed ? 4 : storedTexel(plan) + plan.depth / 8;
  return 2 * picture + areaOf(image.place.whole) * widened;
}

/** What one step holds for itself, at most. */
function stepBytes(plan: ChainPlan, images: readonly Planned[]): number {
  const { head, levels, treatment } = plan;
  const largest = Math.max(0, ...images.map((image) => areaOf(pictureExtent(image))));
  const found = images.map((image) => {
    const { method } = image;
    const area = areaOf(pictureExtent(image));
    const finer = 'level' in image && treatment.derive === 'previous' ? levels[image.level - 1].extent : head.extent;
    if (method?.kind === 'scaler') return area * (4 + sourceTexel(plan));
    if (method?.kind === 'slopes') return SLOPE_ROWS * 4 * (head.channels + 1) * pictureExtent(image).width;
    if (method?.kind === 'codes') return area * sourceTexel(plan);
    if (method?.kind !== 'footprint') return 0;
    if (method.kernel === 'detail')
      return detailBytes(pictureExtent(image), head.channels) + areaOf(finer) * head.channels;
    // A ballot among the entries of a palette is small.
    const ballot = plan.indexed ? area * 4 : majorityBytes(finer, pictureExtent(image));
    return ballot + areaOf(finer) * head.channels + area * sourceTexel(plan);
  });
  const coverage = plan.keepsCoverage ? 2 * largest + scaleCountsBytes(largest) : 0;
  const bounds = treatment.height.minmax ? areaOf(head.extent) * storedTexel(plan) : 0;
  return Math.max(0, ...found) + coverage + bounds;
}

/** Rows that magnifying by slopes keeps, decoded and magnified. */
const SLOPE_ROWS = 16;

function sourceTexel({ head, indexed }: ChainPlan): number {
  return indexed ? 1 : head.channels * (head.depth / 8);
}

function storedTexel({ head, indexed, depth }: ChainPlan): number {
  return indexed ? 1 : head.channels * (depth / 8);
}

function areaOf({ width, height }: Extent): number {
  return width * height;
}

function sum(images: readonly Planned[], of: (image: Planned) => number): number {
  return images.reduce((total, image) => total + of(image), 0);
}
