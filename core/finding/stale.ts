import type { Moved } from '../manifest/compare.ts';
import { finding, type Problem } from '../problem.ts';

/** What moved since a texture was built, in one sentence; `null` where nothing did. */
export function stale(moved: readonly Moved[]): Problem | null {
  if (moved.length === 0) return null;
  const last = moved[moved.length - 1];
  const what = moved.length === 1 ? last : `${moved.slice(0, -1).join(', ')} and ${last}`;
  return finding('stale', { what });
}
