import { percent } from '../../../core/figures.ts';
import { LEAST_COVERAGE_LOSS, LEAST_TEXELS } from '../../../core/review/impact.ts';
import { JUST_SEEN } from '../../../core/review/lab.ts';
import type { Review } from '../../../core/review/review.ts';
import type { SizeReview } from '../../../core/review/sizes.ts';
import type { Curve } from '../axis/curve.ts';
import { lodOfExtent, type Placed } from '../state/scale.ts';
import { t } from '../words/t.ts';
import type { ReviewSight } from './state.ts';

/** A size of the review on the axis. */
export interface SizeStop extends Placed {
  readonly kind: 'level' | 'target';
  readonly size: SizeReview;
}

/** Every size from large to small. */
export function stopsOf(review: Review): readonly SizeStop[] {
  const [first] = review.sizes;
  if (first === undefined) return [];
  const base = 'level' in first.image ? baseOf(first.extent, first.image.level) : first.extent;
  return review.sizes
    .map((size): SizeStop => {
      const { image, extent } = size;
      return 'level' in image
        ? { kind: 'level', lod: image.level, extent, label: String(image.level), size }
        : { kind: 'target', lod: lodOfExtent(base, extent), extent, label: image.target, size };
    })
    .sort((one, other) => one.lod - other.lod);
}

/** The size at which a change hurts: where its worst harm is, else where the largest difference is, the finest of equals. */
export function worstStop(review: Review, stops: readonly SizeStop[]): SizeStop | null {
  const [harm] = [...review.impact.harms].filter(({ image }) => image !== null).sort((a, b) => b.severity - a.severity);
  const there = stops.find(({ size }) => harm?.image != null && sameImage(size.image, harm.image));
  if (there !== undefined) return there;
  let worst: SizeStop | null = null;
  for (const stop of stops) if (worstOf(stop) > (worst === null ? -1 : worstOf(worst))) worst = stop;
  return worst;
}

export function sightOf({ size: { image } }: SizeStop): ReviewSight {
  return 'level' in image ? { kind: 'level', level: image.level } : { kind: 'target', name: image.target };
}

export function isAt({ size: { image } }: SizeStop, sight: ReviewSight): boolean {
  return sight.kind === 'level'
    ? 'level' in image && image.level === sight.level
    : 'target' in image && image.target === sight.name;
}

/** How much of a change survives at each size, and what it does there. A root makes what is just seen stand off the ground. */
export function curvesOf(stops: readonly SizeStop[]): readonly Curve[] {
  const points = (of: (size: SizeReview) => number | null): Curve['points'] =>
    stops.flatMap(({ lod, size }) => {
      const value = of(size);
      return value === null ? [] : [{ lod, value }];
    });
  const curves: Curve[] = [
    {
      name: t('difference'),
      points: points(({ difference }) => (difference === null ? null : Math.sqrt(difference.worst))),
      low: 0,
      high: Math.sqrt(0.1),
      floor: null,
      ceiling: Math.sqrt(JUST_SEEN),
      format: (root) => distance(root * root),
    },
    {
      name: t('seen'),
      points: points(({ difference }) => difference?.seen ?? null),
      low: 0,
      high: 0.01,
      floor: null,
      ceiling: null,
      format: percent,
    },
  ];
  const coverage = points(({ before, after, extent }) => {
    const [was, is] = [before?.coverage ?? null, after?.coverage ?? null];
    return was === null || is === null || was === 0 || extent.width * extent.height < LEAST_TEXELS ? null : is / was;
  });
  if (coverage.length > 0) {
    curves.push({
      name: t('coverage left'),
      points: coverage,
      low: 0.9,
      high: 1,
      floor: 1 - LEAST_COVERAGE_LOSS,
      ceiling: null,
      format: percent,
    });
  }
  return curves.filter((curve) => curve.points.length > 0);
}

/** A distance as tables print it. */
export function distance(value: number): string {
  return value.toFixed(3).replace(/^0\./, '.');
}

function worstOf({ size }: SizeStop): number {
  return size.difference?.worst ?? 0;
}

function sameImage(one: SizeReview['image'], other: SizeReview['image']): boolean {
  return JSON.stringify(one) === JSON.stringify(other);
}

/** Level 0 of a chain whose first shipped level is a later one. */
function baseOf({ width, height }: SizeReview['extent'], level: number): SizeReview['extent'] {
  return { width: width * 2 ** level, height: height * 2 ** level };
}
