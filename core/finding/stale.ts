import type { Moved } from '../manifest/compare.ts';
import { finding, type Problem } from '../problem.ts';

/** What moved since a texture was built, in one sentence; `null` where nothing did. `outputs` are names of changed ones. */
export function stale(moved: readonly Moved[], outputs: readonly string[] = []): Problem | null {
  if (moved.length === 0) return null;
  const parts = moved.map((each) => (each === 'output' ? `output${listed(outputs)}` : each));
  const last = parts[parts.length - 1];
  const what = parts.length === 1 ? last : `${parts.slice(0, -1).join(', ')} and ${last}`;
  return finding('stale', { what });
}

function listed(names: readonly string[]): string {
  if (names.length === 0) return '';
  const more = names.length > 2 ? `, ${names.length - 2} more` : '';
  return ` (${names.slice(0, 2).join(', ')}${more})`;
}
