import type { Problem } from '../../../core/problem.ts';
import { say } from '../../../core/problem.ts';
import type { ReportEntry } from '../../../core/review/report.ts';
import type { GlancedEntry } from './glance.ts';
import type { ReviewEntry } from './list.ts';
import type { ReviewedEntry } from './run.ts';

/** An entry with all that is known of it, ready to be reported. */
export interface Judged extends ReportEntry {
  readonly entry: ReviewEntry;
  /** With the path of the texture where they have none: from the top of the repository, or absolute. */
  readonly problems: readonly Problem[];
  /** Whether a limit is passed, or it could not be looked at. */
  readonly failed: boolean;
}

export function judgedGlance({ entry, glance }: GlancedEntry): Judged {
  const { verdict, impact } = glance;
  const problems = entry.problems.map((each) => placed(each, entry));
  return {
    ...named(entry),
    verdict,
    impact,
    review: null,
    remarks: problems.map(say),
    entry,
    problems,
    failed: problems.length > 0,
  };
}

export function judgedReview({ entry, review, problems: over, failed }: ReviewedEntry): Judged {
  const own = review === null ? [] : review.problems.map(({ side, problem }) => gravity(side, problem));
  const problems = [...entry.problems, ...own, ...over].map((each) => placed(each, entry));
  const what = over.map(say).join(' ');
  return {
    ...named(entry),
    manifest: review?.verdict.kind === 'same' ? 'fresh' : entry.manifest,
    verdict: review?.verdict ?? { kind: 'unreadable', values: { what } },
    impact: review?.impact ?? { score: 200, harms: [{ name: 'unreadable', severity: 1, image: null }] },
    review,
    remarks: [...entry.problems, ...(review === null ? [] : over)].map(say),
    entry,
    problems,
    failed: failed || [...entry.problems, ...own].some(({ severity }) => severity === 'error'),
  };
}

/** A former version that is damaged is what somebody put right; one that is not here means that nothing was compared. */
function gravity(side: 'before' | 'after', problem: Problem): Problem {
  if (side === 'after' || NOT_HERE.test(problem.code)) return problem;
  return { ...problem, severity: 'warning' };
}

const NOT_HERE = /^(git-object-|lfs-|side-too-large|too-much-memory|not-downloaded)/;

function named({
  path,
  oldPath,
  status,
  manifest,
}: ReviewEntry): Pick<Judged, 'path' | 'oldPath' | 'status' | 'manifest'> {
  return { path, oldPath, status, manifest };
}

function placed(problem: Problem, { path }: ReviewEntry): Problem {
  return problem.path === undefined ? { ...problem, path } : problem;
}
