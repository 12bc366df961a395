import type { ReviewJob } from '../workers/review-job.ts';
import type { ReviewEntry } from './list.ts';

/** What a worker is asked, to review a texture. */
export function reviewJob({ path, oldPath, before, after }: ReviewEntry, memoryBytes: number): ReviewJob {
  return {
    task: 'review',
    image: { path },
    before: before && { ...before, path: oldPath },
    after: after && { ...after, path },
    memoryBytes,
  };
}
