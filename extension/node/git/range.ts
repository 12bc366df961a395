import { refuse } from '../../../core/problem.ts';
import { parentsOf } from './parents.ts';
import { checkName, findCommit, mergeBase, needCommit, type Repository } from './repository.ts';
import { tryGit } from './run.ts';

/** What is compared with what. */
export type Range =
  /** The last commit, or nothing where there is none yet, against the files as they are now; new files too. */
  | { readonly kind: 'working' }
  /** The last commit against what is staged. */
  | { readonly kind: 'index' }
  /** A commit against its first parent, or against nothing. */
  | { readonly kind: 'commit'; readonly commit: string }
  /** What `tip` has and the commit that it shares with `base` has not. */
  | { readonly kind: 'branch'; readonly base: string; readonly tip: string }
  /** Any two, as they are. */
  | { readonly kind: 'refs'; readonly from: string; readonly to: string };

/** One end of a range. */
export type End =
  /** A commit's tree, or the empty tree; `label` is how people call it. */
  | { readonly kind: 'tree'; readonly id: string; readonly label: string }
  | { readonly kind: 'index'; readonly label: string }
  | { readonly kind: 'files'; readonly label: string };

export interface Ends {
  readonly before: Extract<End, { kind: 'tree' }>;
  readonly after: End;
}

/** A range as a command line spells it: nothing for the working tree, `COMMIT`, `FROM..TO`, `BASE...TIP`; an end that is left out
 *  is HEAD. Throws Refusal for a name that begins with a dash. */
export function readRange(text: string | undefined): Range {
  if (text === undefined) return { kind: 'working' };
  const [, from, dots, to] = /^(.*?)(\.{2,3})(.*)$/s.exec(text) ?? [];
  if (dots === undefined) {
    checkName(text);
    return { kind: 'commit', commit: text };
  }
  const [first, second] = [from || 'HEAD', to || 'HEAD'];
  checkName(first);
  checkName(second);
  if (dots === '...') return { kind: 'branch', base: first, tip: second };
  return { kind: 'refs', from: first, to: second };
}

/** Finds the two ends of a range. Throws Refusal: an unknown commit, no common base, history that a shallow clone lacks. */
export async function resolveRange(repository: Repository, range: Range): Promise<Ends> {
  switch (range.kind) {
    case 'working':
      return { before: await head(repository), after: { kind: 'files', label: 'working tree' } };
    case 'index':
      return { before: await head(repository), after: { kind: 'index', label: 'index' } };
    case 'commit': {
      const commit = await needCommit(repository, range.commit);
      return { before: await parentOf(repository, commit), after: tree(commit, range.commit) };
    }
    case 'branch': {
      const base = await mergeBase(repository, range.base, range.tip);
      const label = `base of ${range.base} and ${range.tip}`;
      return { before: tree(base, label), after: tree(await needCommit(repository, range.tip), range.tip) };
    }
    case 'refs': {
      const before = tree(await needCommit(repository, range.from), range.from);
      return { before, after: tree(await needCommit(repository, range.to), range.to) };
    }
  }
}

function tree(id: string, name: string): Extract<End, { kind: 'tree' }> {
  const short = id.slice(0, 10);
  return { kind: 'tree', id, label: name === id || id.startsWith(name) ? short : `${name} (${short})` };
}

/** The last commit; nothing where there is none yet. A HEAD whose commit cannot be read is damage, not an empty repository. */
async function head(repository: Repository): Promise<Extract<End, { kind: 'tree' }>> {
  const found = await findCommit(repository, 'HEAD');
  if (found !== null) return tree(found, 'HEAD');
  const { code, stdout } = await tryGit(repository.folder, ['rev-parse', '--verify', '--quiet', 'HEAD']);
  if (code !== 0) return nothing(repository);
  return refuse('git-failed', { reason: `commit ${stdout.toString().trim()} of HEAD cannot be read` });
}

async function parentOf(repository: Repository, commit: string): Promise<Extract<End, { kind: 'tree' }>> {
  const parents = await parentsOf(repository, commit);
  if (parents.length === 0) return nothing(repository);
  const [first] = parents;
  if ((await findCommit(repository, first)) !== null) return tree(first, first);
  return refuse('git-shallow', { what: `parent of ${commit.slice(0, 10)}` });
}

function nothing({ emptyTree }: Repository): Extract<End, { kind: 'tree' }> {
  return { kind: 'tree', id: emptyTree, label: 'nothing' };
}
