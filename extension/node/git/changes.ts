import { lstatSync } from 'node:fs';
import { type Problem, Refusal, refuse } from '../../../core/problem.ts';
import { joinPath } from '../../../core/treatment/paths/path.ts';
import { type Ends, type Range, resolveRange } from './range.ts';
import { findCommit, openRepository, type Repository } from './repository.ts';
import { runGit, tryGit } from './run.ts';

/** Where one version of a file is. */
export type FileRef =
  /** An object of a repository, by its id. `store` is the folder in which Git LFS keeps its files. */
  | { readonly kind: 'object'; readonly repository: string; readonly store: string; readonly id: string }
  /** A file as it is now, by its absolute path. */
  | { readonly kind: 'file'; readonly path: string; readonly store: string }
  /** A link, a folder that is a repository of its own, or the sides of a merge that is not settled: there is no one picture in it. */
  | { readonly kind: 'link' | 'submodule' | 'unmerged' };

/** A file that one side has and the other has not, or has otherwise. */
export interface Change {
  readonly status: 'added' | 'removed' | 'changed' | 'renamed' | 'retyped' | 'unmerged';
  /** From the top of the outer repository, "/"-separated, as Git spells it. */
  readonly path: string;
  /** What it was called before; the same unless it was renamed. */
  readonly oldPath: string;
  readonly before: FileRef | null;
  readonly after: FileRef | null;
  readonly part: Part;
}

/** The repository, or a submodule in it, and what of it is compared. */
export interface Part {
  readonly repository: Repository;
  readonly ends: Ends;
  /** Path of the submodule with a slash behind it; empty for the repository itself. */
  readonly prefix: string;
}

export interface ChangeList {
  readonly repository: Repository;
  readonly ends: Ends;
  readonly changes: readonly Change[];
  readonly parts: readonly Part[];
  /** Of parts that could not be looked into: a submodule that is not there. Paths are absolute. */
  readonly problems: readonly Problem[];
}

/** Lists what changed over Git's plumbing, in the order of paths; submodules are entered where they are there. Throws Refusal: what
 *  cannot be told is never "nothing changed". */
export async function listChanges(folder: string, range: Range): Promise<ChangeList> {
  const repository = await openRepository(folder);
  const ends = await resolveRange(repository, range);
  const { changes, parts, problems } = await compareEnds({ repository, ends, prefix: '' });
  return { repository, ends, changes: changes.sort((a, b) => (a.path < b.path ? -1 : 1)), parts, problems };
}

interface Found {
  readonly changes: Change[];
  readonly parts: Part[];
  readonly problems: Problem[];
}

async function compareEnds(part: Part): Promise<Found> {
  const { repository, ends, prefix } = part;
  const raw = await diffRaw(repository, ends);
  const found: Found = { changes: [], parts: [part], problems: [] };
  const unmerged = ends.after.kind === 'tree' ? new Map<string, string | null>() : await listUnmerged(repository);
  for (const [path, id] of unmerged) found.changes.push(unmergedChange(part, path, id));
  for (const entry of readRaw(raw)) {
    if (unmerged.has(entry.path)) continue;
    if (entry.oldMode === SUBMODULE || entry.newMode === SUBMODULE)
      await enterSubmodule(repository, entry, prefix, found);
    if (entry.oldMode !== SUBMODULE || entry.newMode !== SUBMODULE) found.changes.push(changeOf(part, entry));
  }
  if (ends.after.kind === 'files') {
    for (const path of await untracked(repository)) {
      const after = newFile(repository, path);
      const named = `${prefix}${path}`;
      found.changes.push({ status: 'added', path: named, oldPath: named, before: null, after, part });
    }
    await enterWorkingSubmodules(repository, prefix, found);
  }
  return found;
}

/** Renames of files that were edited as well are found by reading them, which an object that is damaged or not there ends; then only
 *  renames of whole files are looked for, by their ids. */
async function diffRaw(repository: Repository, ends: Ends): Promise<Buffer> {
  const args = (renames: string): string[] => [
    ...[...repository.withoutFilters, 'diff', renames],
    ...[...DIFF_OPTIONS, ...endOptions(ends), '--'],
  ];
  const { code, stdout } = await tryGit(repository.folder, args('-M'));
  return code === 0 ? stdout : runGit(repository.folder, args('-M100%'));
}

/** Ids in full; no program of the user's or the repository's; submodules by their commits alone, since a look at their
 *  files would run their own settings. */
const DIFF_OPTIONS = [
  ...['--raw', '-z', '--no-abbrev', '--no-ext-diff', '--no-textconv', '--no-color'],
  ...['--ignore-submodules=dirty', '--no-relative', '-l400'],
];

const SUBMODULE = '160000';
const LINK = '120000';

function endOptions({ before, after }: Ends): string[] {
  switch (after.kind) {
    case 'files':
      return [before.id];
    case 'index':
      return ['--cached', before.id];
    case 'tree':
      return [before.id, after.id];
  }
}

interface RawEntry {
  readonly oldMode: string;
  readonly newMode: string;
  readonly oldId: string;
  readonly newId: string;
  readonly status: string;
  readonly oldPath: string;
  readonly path: string;
}

/** `:oldmode newmode oldid newid status` NUL path NUL, and a second path for renames. */
export function readRaw(raw: Buffer): RawEntry[] {
  const fields = raw.toString().split('\0');
  const entries: RawEntry[] = [];
  for (let at = 0; at < fields.length - 1; ) {
    const found = /^:(\d{6}) (\d{6}) ([0-9a-f]+) ([0-9a-f]+) ([A-Z])\d*$/.exec(fields[at]);
    if (found === null)
      return refuse('git-failed', {
        reason: `an unknown line of \`git diff\`, ${JSON.stringify(fields[at].slice(0, 80))}`,
      });
    const [, oldMode, newMode, oldId, newId, status] = found;
    const oldPath = fields[at + 1];
    const isPair = status === 'R';
    const path = isPair ? fields[at + 2] : oldPath;
    entries.push({ oldMode, newMode, oldId, newId, status, oldPath, path });
    at += isPair ? 3 : 2;
  }
  return entries;
}

const STATUSES: Readonly<Record<string, Change['status']>> = {
  A: 'added',
  D: 'removed',
  M: 'changed',
  R: 'renamed',
  T: 'retyped',
};

function changeOf(part: Part, entry: RawEntry): Change {
  const { repository, ends, prefix } = part;
  const { oldMode, newMode, oldId, newId, oldPath, path } = entry;
  return {
    status: STATUSES[entry.status] ?? refuse('git-failed', { reason: `an unknown status ${entry.status} of ${path}` }),
    path: `${prefix}${path}`,
    oldPath: `${prefix}${oldPath}`,
    before: refOf(repository, oldMode, oldId, oldPath),
    after: refOf(repository, newMode, newId, path, ends.after.kind === 'files'),
    part,
  };
}

function refOf(repository: Repository, mode: string, id: string, path: string, onDisk = false): FileRef | null {
  const { store } = repository;
  if (/^0+$/.test(mode)) return null;
  if (mode === LINK) return { kind: 'link' };
  if (mode === SUBMODULE) return { kind: 'submodule' };
  // Git gives no id to a file that it has not hashed.
  if (onDisk && /^0+$/.test(id)) return { kind: 'file', path: joinPath(repository.folder, path), store };
  return { kind: 'object', repository: repository.folder, store, id };
}

/** A file as it lies there. A link is none, wherever it leads. */
function newFile(repository: Repository, path: string): FileRef {
  const whole = joinPath(repository.folder, path);
  const stats = lstatSync(whole, { throwIfNoEntry: false });
  return stats?.isSymbolicLink() ? { kind: 'link' } : { kind: 'file', path: whole, store: repository.store };
}

/** Paths with a merge conflict, and the id of the own side's file, null where that side removed it. A comparison with a working tree
 *  leaves out those of them whose file is as it was. */
async function listUnmerged({ folder }: Repository): Promise<Map<string, string | null>> {
  const lines = (await runGit(folder, ['ls-files', '--unmerged', '-z', '--full-name'])).toString().split('\0');
  const ours = new Map<string, string | null>();
  for (const line of lines) {
    const [, id, stage, path] = /^\d+ ([0-9a-f]+) ([123])\t(.*)$/s.exec(line) ?? [];
    if (path !== undefined) ours.set(path, stage === '2' ? id : (ours.get(path) ?? null));
  }
  return ours;
}

function unmergedChange(part: Part, path: string, id: string | null): Change {
  const { repository, ends, prefix } = part;
  const { folder, store } = repository;
  const named = `${prefix}${path}`;
  return {
    status: 'unmerged',
    path: named,
    oldPath: named,
    before: id === null ? null : { kind: 'object', repository: folder, store, id },
    after: ends.after.kind === 'files' ? newFile(repository, path) : { kind: 'unmerged' },
    part,
  };
}

async function untracked({ folder, withoutFilters }: Repository): Promise<string[]> {
  const args = [...withoutFilters, 'ls-files', '--others', '--exclude-standard', '-z'];
  const paths = (await runGit(folder, args)).toString().split('\0');
  // A repository that is no submodule yet ends in a slash.
  return paths.filter((path) => path !== '' && !path.endsWith('/'));
}

/** What a submodule's move from one commit to another changed in it. */
async function enterSubmodule(outer: Repository, entry: RawEntry, prefix: string, found: Found): Promise<void> {
  const [from, to] = [
    entry.oldMode === SUBMODULE ? entry.oldId : null,
    entry.newMode === SUBMODULE && !/^0+$/.test(entry.newId) ? entry.newId : null,
  ];
  const path = joinPath(outer.folder, entry.path);
  await inSubmodule(
    path,
    found,
    async (inner) => {
      const before = from ?? inner.emptyTree;
      // A working tree says where it is by its own HEAD.
      const isWorking = entry.newMode === SUBMODULE && to === null;
      const after = to ?? (isWorking ? await findCommit(inner, 'HEAD') : inner.emptyTree);
      const known = await Promise.all(
        [from, to].map(async (id) => id === null || (await findCommit(inner, id)) !== null),
      );
      if (after === null || known.includes(false)) {
        const values = { from: from?.slice(0, 10) ?? 'nothing', to: to?.slice(0, 10) ?? 'nothing' };
        found.problems.push({ code: 'submodule-missing', severity: 'error', values, path });
        return;
      }
      const ends: Ends = {
        before: { kind: 'tree', id: before, label: before.slice(0, 10) },
        after: { kind: 'tree', id: after, label: after.slice(0, 10) },
      };
      merge(found, await compareEnds({ repository: inner, ends, prefix: `${prefix}${entry.path}/` }));
    },
    entry,
    from,
  );
}

/** Files of submodules that are not as their own HEAD has them. */
async function enterWorkingSubmodules(outer: Repository, prefix: string, found: Found): Promise<void> {
  const staged = (await runGit(outer.folder, ['ls-files', '--stage', '-z'])).toString().split('\0');
  const paths = staged.flatMap((line) => (line.startsWith(SUBMODULE) ? line.slice(line.indexOf('\t') + 1) : []));
  for (const path of new Set(paths)) {
    await inSubmodule(joinPath(outer.folder, path), found, async (inner) => {
      const before = (await findCommit(inner, 'HEAD')) ?? inner.emptyTree;
      const ends: Ends = {
        before: { kind: 'tree', id: before, label: 'HEAD' },
        after: { kind: 'files', label: 'working tree' },
      };
      merge(found, await compareEnds({ repository: inner, ends, prefix: `${prefix}${path}/` }));
    });
  }
}

/** Works in a submodule where it is there as a repository of its own; one that was never fetched is a problem only if it moved. */
async function inSubmodule(
  path: string,
  found: Found,
  work: (inner: Repository) => Promise<void>,
  moved?: RawEntry,
  from: string | null = null,
): Promise<void> {
  const inner = await openSubmodule(path);
  if (inner !== null) return work(inner);
  if (moved === undefined) return;
  const to = moved.newMode === SUBMODULE ? moved.newId.slice(0, 10) : 'nothing';
  const values = { from: from?.slice(0, 10) ?? 'nothing', to };
  found.problems.push({ code: 'submodule-missing', severity: 'error', values, path });
}

/** Null where the folder is gone or belongs to the outer repository. */
async function openSubmodule(path: string): Promise<Repository | null> {
  try {
    const inner = await openRepository(path);
    return inner.folder === path ? inner : null;
  } catch (error) {
    if (error instanceof Refusal || (error as NodeJS.ErrnoException).code === 'ENOENT') return null;
    throw error;
  }
}

/** A file that both the move and the files of a submodule changed is there once, from first to last. */
function merge(found: Found, more: Found): void {
  found.problems.push(...more.problems);
  found.parts.push(...more.parts);
  for (const change of more.changes) {
    const known = found.changes.findIndex((each) => each.path === change.oldPath);
    if (known < 0) found.changes.push(change);
    else
      found.changes[known] = { ...change, oldPath: found.changes[known].oldPath, before: found.changes[known].before };
  }
}
