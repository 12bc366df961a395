import type { Repository } from './repository.ts';
import { runGit } from './run.ts';

/** Ids of a commit's parents as the commit itself names them: a shallow clone hides those that it lacks from everything else. */
export async function parentsOf({ folder }: Repository, commit: string): Promise<string[]> {
  const text = (await runGit(folder, ['cat-file', 'commit', commit])).toString('latin1');
  const header = text.slice(0, text.indexOf('\n\n'));
  return [...header.matchAll(/^parent ([0-9a-f]{40,64})$/gm)].map(([, id]) => id);
}
