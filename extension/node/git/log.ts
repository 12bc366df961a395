import { openRepository } from './repository.ts';
import { runGit, tryGit } from './run.ts';

/** Commits before HEAD, the last one first; of one file, by its absolute path, where one is given. None where nothing was committed yet.
 *  Throws Refusal. */
export async function listCommits(folder: string, path: string | null, count: number) {
  const { folder: top } = await openRepository(folder);
  const { code } = await tryGit(top, ['rev-parse', '--verify', '--quiet', 'HEAD']);
  if (code !== 0) return [];
  const args = ['log', '-z', '--no-show-signature', '--no-color', '--no-decorate', `--max-count=${count}`, FORMAT];
  const lines = (
    await runGit(top, [...args, 'HEAD', '--', ...(path === null ? [] : [`:(top,literal)${below(top, path)}`])])
  )
    .toString()
    .split('\0');
  return lines.flatMap((line) => {
    const [id, time, author, ...subject] = line.split('\t');
    return time === undefined ? [] : [{ id, time: Number(time), author, subject: subject.join(' ') }];
  });
}

/** Branches, here and of remotes, the one that moved last first. Throws Refusal. */
export async function listBranches(folder: string) {
  const { folder: top } = await openRepository(folder);
  const args = [
    'for-each-ref',
    '--sort=-committerdate',
    `--count=${MOST_BRANCHES}`,
    REF_FORMAT,
    'refs/heads',
    'refs/remotes',
  ];
  const lines = (await runGit(top, args)).toString().split('\n');
  return lines.flatMap((line) => {
    const [head, time, link, name] = line.split('\t');
    // A remote's HEAD is another name of one of its branches.
    if (name === undefined || link !== '') return [];
    return [{ name, current: head === '*' ? ('yes' as const) : ('no' as const), time: Number(time) }];
  });
}

const FORMAT = '--format=%H%x09%ct%x09%an%x09%s';
const REF_FORMAT = '--format=%(HEAD)%09%(committerdate:unix)%09%(symref)%09%(refname:short)';

/** What a pick list can hold. */
const MOST_BRANCHES = 500;

function below(top: string, path: string): string {
  return path.startsWith(`${top}/`) ? path.slice(top.length + 1) : path;
}
