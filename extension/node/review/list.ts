import { imageExtension } from '../../../core/codec/open.ts';
import { sameSettings } from '../../../core/manifest/settings.ts';
import type { Cancel } from '../../../core/port.ts';
import { Cancelled } from '../../../core/port.ts';
import type { Problem } from '../../../core/problem.ts';
import { SETTINGS_NAME } from '../../../core/treatment/find/root.ts';
import { baseName, pathBelow } from '../../../core/treatment/paths/path.ts';
import type { ReviewLimits } from '../../../core/treatment/treatment.ts';
import type { Disk } from '../files/disk.ts';
import { type Change, type ChangeList, type FileRef, listChanges, type Part } from '../git/changes.ts';
import type { Range } from '../git/range.ts';
import { openTree } from '../git/tree.ts';
import type { Versions } from '../git/versions.ts';
import type { ReviewVersion } from '../workers/review-job.ts';
import { openSettings, type SettingsOf } from './settings.ts';

/** A texture that a range changes: its file, or what the settings make of it. */
export interface ReviewEntry {
  /** From the top of the repository, "/"-separated. */
  readonly path: string;
  /** What it was called before; the same unless it was renamed. */
  readonly oldPath: string;
  /** `treated` is the same file under other settings. */
  readonly status: Change['status'] | 'treated';
  readonly before: ReviewVersion | null;
  readonly after: ReviewVersion | null;
  /** Of the settings after, or before where the file was removed. */
  readonly limits: ReviewLimits | null;
  /** `stale` is a manifest that was left alone while the source changed. */
  readonly manifest: 'none' | 'fresh' | 'stale';
  /** What is wrong with the settings that apply. Paths are absolute. */
  readonly problems: readonly Problem[];
}

export interface ReviewList {
  /** Absolute. */
  readonly folder: string;
  /** How people call the two ends. */
  readonly before: string;
  readonly after: string;
  readonly entries: readonly ReviewEntry[];
  /** Changed images that are no textures: written by a build, or excluded. */
  readonly outputs: number;
  readonly excluded: number;
  /** Of parts that could not be looked into. Paths are absolute. */
  readonly problems: readonly Problem[];
}

/** Lists the textures that a range changes, in the order of their paths. No picture is read. Throws Refusal where Git cannot tell,
 *  Cancelled. */
export async function listReview(
  folder: string,
  range: Range,
  { disk, versions }: { readonly disk: Disk; readonly versions: Versions },
  cancel: Cancel,
): Promise<ReviewList> {
  const changes = await listChanges(folder, range);
  const entries: ReviewEntry[] = [];
  const counts = { outputs: 0, excluded: 0 };
  for (const part of changes.parts) {
    if (cancel.cancelled) throw new Cancelled();
    await reviewPart(part, changes, { disk, versions }, cancel, entries, counts);
  }
  return {
    folder: changes.repository.folder,
    before: changes.ends.before.label,
    after: changes.ends.after.label,
    entries: entries.sort((a, b) => (a.path < b.path ? -1 : 1)),
    ...counts,
    problems: changes.problems,
  };
}

async function reviewPart(
  part: Part,
  { changes }: ChangeList,
  tools: { readonly disk: Disk; readonly versions: Versions },
  cancel: Cancel,
  entries: ReviewEntry[],
  counts: { outputs: number; excluded: number },
): Promise<void> {
  const own = changes.filter((change) => change.part === part);
  const images = own.filter((change) => isImage(change.path) || isImage(change.oldPath));
  const settingsMoved = own.some(({ path, oldPath }) => isSettings(path) || isSettings(oldPath));
  if (images.length === 0 && !settingsMoved) return;
  const { prefix } = part;
  const top = part.repository.folder;
  const [treeBefore, treeAfter] = [
    await openTree(part, 'before', tools.disk, tools.versions),
    await openTree(part, 'after', tools.disk, tools.versions),
  ];
  const [before, after] = [openSettings(treeBefore, top), openSettings(treeAfter, top)];
  const changed = new Set(own.map(({ path }) => path));
  const outputs = listedBy(own);

  for (const change of images) {
    if (cancel.cancelled) throw new Cancelled();
    const [path, oldPath] = [change.path.slice(prefix.length), change.oldPath.slice(prefix.length)];
    const [was, is] = [change.before && (await before(oldPath)), change.after && (await after(path))];
    const role = (is ?? was)?.role ?? 'texture';
    if (role === 'output' || outputs.has(change.path)) counts.outputs++;
    else if (role === 'excluded') counts.excluded++;
    else {
      const conflict: Problem[] = change.status === 'unmerged' ? [CONFLICT] : [];
      const problems = [...conflict, ...problemsOf(was, is)];
      entries.push({
        ...change,
        ...versionsOf(change.before, change.after, was, is),
        limits: (is ?? was)?.limits ?? null,
        manifest: manifestOf(is),
        problems,
      });
    }
  }
  if (!settingsMoved) return;
  for (const [path, file] of treeAfter.files) {
    if (cancel.cancelled) throw new Cancelled();
    if (!isImage(path) || changed.has(`${prefix}${path}`) || file.kind === 'link' || file.kind === 'submodule')
      continue;
    const [was, is] = [await before(path), await after(path)];
    if (is.role !== 'texture' || was.role === 'output') continue;
    if (was.treatment !== null && is.treatment !== null && sameSettings(was.treatment, is.treatment)) continue;
    entries.push({
      path: `${prefix}${path}`,
      oldPath: `${prefix}${path}`,
      status: 'treated',
      ...versionsOf(file, file, was, is),
      limits: is.limits,
      manifest: manifestOf(is),
      problems: problemsOf(was, is),
    });
  }

  /** A manifest that is there and that nothing touched was made from the former source or settings. */
  function manifestOf(is: SettingsOf | null): ReviewEntry['manifest'] {
    const path = is?.manifest == null ? null : pathBelow(top, is.manifest);
    if (path === null || !treeAfter.files.has(path)) return 'none';
    return changed.has(`${prefix}${path}`) ? 'fresh' : 'stale';
  }
}

const CONFLICT: Problem = { code: 'git-unmerged', severity: 'error', values: {} };

function versionsOf(
  before: FileRef | null,
  after: FileRef | null,
  was: SettingsOf | null,
  is: SettingsOf | null,
): Pick<ReviewEntry, 'before' | 'after'> {
  const [one, other] = [was?.treatment ?? null, is?.treatment ?? null];
  return {
    before: before && { file: before, treatment: one ?? other },
    after: after && { file: after, treatment: other ?? one },
  };
}

function problemsOf(was: SettingsOf | null, is: SettingsOf | null): readonly Problem[] {
  const all = [...(was?.problems ?? []), ...(is?.problems ?? [])];
  const seen = new Set<string>();
  return all.filter((each) => {
    const key = JSON.stringify(each);
    return !seen.has(key) && seen.add(key) !== null;
  });
}

/** Images beside a manifest of their own name that changed with it: levels and targets that were written among their sources. */
function listedBy(changes: readonly Change[]): ReadonlySet<string> {
  const stems = changes.flatMap(({ path }) => (path.endsWith('.mips.json') ? path.slice(0, -'.mips.json'.length) : []));
  const outputs = new Set<string>();
  for (const { path } of changes) {
    const stem = stems.find((each) => path.startsWith(`${each}.`));
    // The source is the stem with one ending; what is written has a level or a target before it.
    if (stem !== undefined && /^\.[^/]+\.[^./]+$/.test(path.slice(stem.length))) outputs.add(path);
  }
  return outputs;
}

function isImage(path: string): boolean {
  return imageExtension(path) !== null;
}

function isSettings(path: string): boolean {
  return baseName(path) === SETTINGS_NAME;
}
