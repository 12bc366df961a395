import { exitCode, type Problem } from '../../../core/problem.ts';
import { overReviewLimits } from '../../../core/review/limits.ts';
import type { Review } from '../../../core/review/review.ts';
import type { RunJobs } from '../workers/pool.ts';
import { reviewJob } from './job.ts';
import type { ReviewEntry } from './list.ts';

/** A texture that was compared. */
export interface ReviewedEntry {
  readonly entry: ReviewEntry;
  /** Null where the comparison itself could not be done; `problems` says why. */
  readonly review: Review | null;
  /** Limits that the change passes, and what went wrong. */
  readonly problems: readonly Problem[];
  /** Whether any limit is passed. */
  readonly failed: boolean;
}

/** Compares entries at all sizes in the workers of a pool; `done` hears of each as it ends, in any order, and not of those that were
 *  cancelled. */
export async function reviewEntries(
  entries: readonly ReviewEntry[],
  { run, memoryBytes }: { readonly run: RunJobs; readonly memoryBytes: number },
  done: (index: number, reviewed: ReviewedEntry) => void,
): Promise<void> {
  const jobs = entries.map((entry) => reviewJob(entry, memoryBytes));
  await run(jobs, (index, outcome) => {
    const entry = entries[index];
    if (outcome.kind === 'reviewed') {
      const { review } = outcome;
      const problems = entry.limits === null ? [] : overReviewLimits(review, entry.limits);
      done(index, { entry, review, problems, failed: exitCode(problems) > 0 });
    }
    if (outcome.kind === 'failed') {
      const { path: _, ...problem } = outcome.problem;
      done(index, { entry, review: null, problems: [problem], failed: true });
    }
  });
}
