import { refuse } from '../../../core/problem.ts';
import { resolvePath } from '../../../core/treatment/paths/path.ts';
import { slashed } from '../files/node-disk.ts';
import { runGit, tryGit } from './run.ts';

/** A repository with a working tree. Paths are absolute, "/"-separated. */
export interface Repository {
  /** The top of the working tree. */
  readonly folder: string;
  /** The folder in which Git LFS keeps its files, which all working trees share. */
  readonly store: string;
  readonly shallow: boolean;
  /** The id of the tree without files, by the repository's hash. */
  readonly emptyTree: string;
  /** Options that turn off the filters that the repository names: they are programs, and a comparison may call them. */
  readonly withoutFilters: readonly string[];
}

/** Finds the repository that a folder lies in. Throws Refusal. */
export async function openRepository(folder: string): Promise<Repository> {
  const asked = ['--show-toplevel', '--git-common-dir', '--is-shallow-repository'];
  const { code, stdout, stderr } = await tryGit(folder, ['rev-parse', '--path-format=absolute', ...asked]);
  if (code !== 0) {
    if (/not a git repository/i.test(stderr)) return refuse('git-no-repository', { folder });
    return refuse('git-failed', { reason: stderr || `\`git rev-parse\` ended with exit code ${code}` });
  }
  const [top, common, shallow] = stdout.toString().split('\n');
  // An older Git repeats what it does not know.
  if (top.startsWith('--')) return refuse('git-failed', { reason: 'it is older than 2.31' });
  const emptyTree = (await runGit(top, ['hash-object', '-t', 'tree', '--stdin'])).toString().trim();
  return {
    folder: slashed(top),
    store: await lfsStore(top, slashed(common)),
    shallow: shallow === 'true',
    emptyTree,
    withoutFilters: await filterOptions(top),
  };
}

/** The id of the commit that a name means; null where there is none. Throws Refusal for a name that would be read as an option. */
export async function findCommit(repository: Repository, name: string): Promise<string | null> {
  checkName(name);
  const { code, stdout } = await tryGit(repository.folder, [
    'rev-parse',
    '--verify',
    '--quiet',
    '--end-of-options',
    `${name}^{commit}`,
  ]);
  return code === 0 ? stdout.toString().trim() : null;
}

/** The same where it must be there. */
export async function needCommit(repository: Repository, name: string): Promise<string> {
  const found = await findCommit(repository, name);
  if (found !== null) return found;
  if (repository.shallow) return refuse('git-shallow', { what: `commit ${name}` });
  return refuse('git-ref', { ref: name });
}

/** The commit that both have in common. */
export async function mergeBase(repository: Repository, from: string, to: string): Promise<string> {
  const [one, other] = [await needCommit(repository, from), await needCommit(repository, to)];
  const { code, stdout, stderr } = await tryGit(repository.folder, ['merge-base', one, other]);
  if (code === 0) return stdout.toString().trim();
  if (code !== 1) return refuse('git-failed', { reason: stderr || `\`git merge-base\` ended with exit code ${code}` });
  if (repository.shallow) return refuse('git-shallow', { what: `common base of ${from} and ${to}` });
  return refuse('git-no-base', { from, to });
}

export function checkName(name: string): void {
  if (name.startsWith('-')) refuse('git-ref-dash', { ref: name });
}

/** The folder that the setting `lfs.storage` names, from the repository's own folder where it is relative.  [GitLFS, "git-lfs-config"] */
async function lfsStore(folder: string, commonFolder: string): Promise<string> {
  const { code, stdout, stderr } = await tryGit(folder, ['config', '--null', '--get', 'lfs.storage']);
  // 1 is none found.
  if (code > 1) return refuse('git-failed', { reason: stderr || `\`git config\` ended with exit code ${code}` });
  const named = stdout.toString().replace(/\0$/, '');
  return resolvePath(commonFolder, slashed(named) || 'lfs');
}

async function filterOptions(folder: string): Promise<string[]> {
  const { code, stdout, stderr } = await tryGit(folder, [
    'config',
    '--null',
    '--name-only',
    '--get-regexp',
    '^filter\\.',
  ]);
  // 1 is none found.
  if (code > 1) return refuse('git-failed', { reason: stderr || `\`git config\` ended with exit code ${code}` });
  const drivers = new Set(
    stdout
      .toString()
      .split('\0')
      .flatMap((key) => /^filter\.(.+)\.[^.]+$/s.exec(key)?.[1] ?? []),
  );
  return [...drivers].flatMap((driver) => [
    ...['-c', `filter.${driver}.clean=`],
    ...['-c', `filter.${driver}.smudge=`],
    ...['-c', `filter.${driver}.process=`],
    ...['-c', `filter.${driver}.required=false`],
  ]);
}
