import type { Problem } from '../../../core/problem.ts';
import type { Impact } from '../../../core/review/impact.ts';
import { sortByImpact } from '../../../core/review/report.ts';
import type { Review } from '../../../core/review/review.ts';
import type { Verdict } from '../../../core/review/verdict.ts';
import type { ReviewItem } from '../platform.ts';

/** One changed texture with what is known of it. */
export interface ReviewRow {
  readonly item: ReviewItem;
  /** Place in the session's list. */
  readonly index: number;
  /** Null until its header was read. */
  readonly verdict: Verdict | null;
  readonly impact: Impact;
  readonly review: Review | null;
  readonly problems: readonly Problem[];
  /** Whether all that could be learned is known. */
  readonly settled: boolean;
  /** Equal for the same two contents; null until they were read. */
  readonly content: string | null;
}

export function openRow(item: ReviewItem, index: number): ReviewRow {
  const nothing = { verdict: null, review: null, content: null } as const;
  return { item, index, ...nothing, impact: { score: 0, harms: [] }, problems: item.problems, settled: false };
}

/** The most harmful first, as every report has them. */
export function sortRows(rows: readonly ReviewRow[]): readonly ReviewRow[] {
  return sortByImpact(rows.map((row) => ({ path: row.item.path, impact: row.impact, row }))).map(({ row }) => row);
}
