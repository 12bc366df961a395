import { byteText } from '../figures.ts';
import { finding, type Problem } from '../problem.ts';
import type { ReviewLimits } from '../treatment/treatment.ts';
import { sayHarm } from './harms.ts';
import { LEAST_TEXELS } from './impact.ts';
import type { Review } from './review.ts';
import type { SizeFigures, SizeReview } from './sizes.ts';
import { percent } from './verdict.ts';
import { sayImage } from './visible.ts';

/** Holds a review against the limits of its texture; what passes one fails `review`. Without a side there is nothing to compare. */
export function overReviewLimits(review: Review, limits: ReviewLimits): Problem[] {
  const { before, after, sizes, impact } = review;
  const problems: Problem[] = [];
  if (limits.harm === 'fail' && impact.harms.length > 0) {
    problems.push(finding('review-harm', { harm: impact.harms.map(sayHarm).join('; ') }));
  }
  const coverage = worst(
    sizes,
    ({ coverage: share }) => share,
    (was, is) => 1 - is / was,
  );
  if (limits.coverageLoss !== null && coverage !== null && coverage.value > limits.coverageLoss) {
    const { value, image } = coverage;
    problems.push(
      finding('review-coverage', { image: sayImage(image), loss: percent(value), limit: percent(limits.coverageLoss) }),
    );
  }
  const light = worst(
    sizes,
    ({ luminance }) => luminance,
    (was, is) => Math.abs(is / was - 1),
  );
  if (limits.lightChange !== null && light !== null && light.value > limits.lightChange) {
    const { value, image } = light;
    problems.push(
      finding('review-light', { image: sayImage(image), change: percent(value), limit: percent(limits.lightChange) }),
    );
  }
  if (before === null || after === null) return problems;
  const texels = 1 - areaOf(after) / areaOf(before);
  if (limits.texelLoss !== null && texels > limits.texelLoss) {
    problems.push(finding('review-texels', { loss: percent(texels), limit: percent(limits.texelLoss) }));
  }
  const file = after.fileBytes / before.fileBytes - 1;
  if (limits.fileGrowth !== null && file > limits.fileGrowth) {
    problems.push(
      finding('review-file', {
        before: byteText(before.fileBytes),
        after: byteText(after.fileBytes),
        limit: percent(limits.fileGrowth),
      }),
    );
  }
  const memory = after.memoryBytes - before.memoryBytes;
  if (limits.memoryGrowth !== null && memory > limits.memoryGrowth) {
    problems.push(finding('review-memory', { bytes: memory, limit: limits.memoryGrowth }));
  }
  return problems;
}

function worst(
  sizes: readonly SizeReview[],
  of: (figures: SizeFigures) => number | null,
  change: (was: number, is: number) => number,
): { readonly value: number; readonly image: SizeReview['image'] } | null {
  let found: { readonly value: number; readonly image: SizeReview['image'] } | null = null;
  for (const { image, extent, before, after } of sizes) {
    if (before === null || after === null || extent.width * extent.height < LEAST_TEXELS) continue;
    const [was, is] = [of(before), of(after)];
    if (was === null || is === null || was === 0) continue;
    const value = change(was, is);
    if (value > (found?.value ?? 0)) found = { value, image };
  }
  return found;
}

function areaOf({ extent }: NonNullable<Review['before']>): number {
  return extent.width * extent.height;
}
