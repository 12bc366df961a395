import type { Manifest } from '../../../core/manifest/manifest.ts';
import { movedTo, type Orphan, sourcesByHash } from '../../../core/manifest/orphan.ts';
import type { Problem } from '../../../core/problem.ts';
import { findRoot } from '../../../core/treatment/find/root.ts';
import type { Query } from '../../../core/treatment/find/select.ts';
import { pathBelow, resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import { filesOf, orRefuse, removeUnedited } from '../files/laydown.ts';
import { parentOf } from '../files/path.ts';
import { nextOf } from '../files/temporary.ts';
import type { Project, ProjectRoot } from './project.ts';
import { type PresentSource, readManifestFile } from './state.ts';
import type { Traces } from './sweep.ts';

/** A manifest of a root that no texture of it is built to any more. Paths are absolute. */
export interface FoundOrphan extends Orphan {
  /** Whether the source is gone, or there but no longer built to this place. */
  readonly reason: 'gone' | 'unselected';
  /** Files with every SHA-256 recorded for them. */
  readonly files: ReadonlyMap<string, readonly string[]>;
}

/** Finds orphans whose source lay in what was asked for. `present` holds the sources that are built now. */
export async function findOrphans(
  disk: Disk,
  root: ProjectRoot,
  traces: Traces,
  present: readonly PresentSource[],
): Promise<FoundOrphan[]> {
  const expected = new Set(root.textures.map((texture) => texture.manifestPath));
  const byHash = sourcesByHash(present.filter((source) => source.use === 'image'));
  const rootOf = new Map<string, Promise<string | null>>();
  const orphans: FoundOrphan[] = [];
  for (const path of [...new Set([...traces.manifests, ...traces.interrupted])].sort()) {
    if (expected.has(path)) continue;
    const manifests = [await readManifestFile(disk, path), await readManifestFile(disk, nextOf(path))];
    const known = manifests.flatMap(({ manifest }) => manifest ?? []);
    const source = known.length === 0 ? null : sourceOf(known[0], path, root.selection.folder);
    if (source === null || !(await isOurs(source))) continue;
    const there = (await disk.kind(source)) === 'file';
    const moved = there ? undefined : movedTo(known[0], byHash);
    orphans.push({
      manifest: path,
      source,
      reason: there ? 'unselected' : 'gone',
      files: recordedFiles(known, path),
      ...(moved === undefined ? {} : { movedTo: moved }),
    });
  }
  return orphans;

  /** Whether a source would be this root's, and was asked for. A root inside it has manifests of its own. */
  async function isOurs(source: string): Promise<boolean> {
    if (pathBelow(root.selection.folder, source) === null) return false;
    if (!root.scopes.some((scope) => pathBelow(scope, source) !== null)) return false;
    if (root.selection.file !== null && parentOf(root.selection.file) !== root.selection.folder) return true;
    const folder = parentOf(source);
    const found = rootOf.get(folder) ?? findRoot(disk, folder).then((each) => each?.folder ?? null);
    rootOf.set(folder, found);
    return ((await found) ?? root.selection.folder) === root.selection.folder;
  }
}

/** Whether what is built now is known for sure. Behind a broken settings file or a folder that cannot be listed there may be
 *  textures whose manifests are no orphans. */
export function orphansCanBeTold(project: Project): boolean {
  return project.problems.every((each) => each.severity === 'warning' || each.code === 'nothing-selected');
}

/** The problems without `nothing-selected` for folders in which orphans were found: there was something to do. */
export async function withoutAnswered(
  disk: Disk,
  query: Query,
  problems: readonly Problem[],
  orphans: readonly FoundOrphan[],
): Promise<Problem[]> {
  const kept: Problem[] = [];
  for (const problem of problems) {
    const selector = problem.code === 'nothing-selected' ? problem.values.selector : null;
    const folder = selector === null ? null : await disk.realPath(resolvePath(query.folder, String(selector)));
    if (folder === null || !orphans.some(({ source }) => pathBelow(folder, source) !== null)) kept.push(problem);
  }
  return kept;
}

/** What is to be said of an orphan. */
export function orphanProblem(orphan: FoundOrphan, name: (path: string) => string): Problem {
  const source = name(orphan.source);
  const place = { severity: 'error', path: orphan.manifest } as const;
  if (orphan.reason === 'unselected') return { code: 'orphan-excluded', values: { source }, ...place };
  if (orphan.movedTo === undefined) return { code: 'orphan', values: { source }, ...place };
  return { code: 'orphan-moved', values: { source, to: name(orphan.movedTo) }, ...place };
}

/** Removes an orphan's outputs as far as they are as built, its manifest, and folders that are empty then. `kept` are files
 *  that another texture writes. Answers warnings. Throws Refusal. */
export async function prune(
  disk: Disk,
  root: ProjectRoot,
  orphan: FoundOrphan,
  kept: ReadonlySet<string>,
): Promise<Problem[]> {
  const files = new Map([...orphan.files].filter(([path]) => !kept.has(path)));
  const warnings = await removeUnedited(disk, files, root.within);
  for (const path of [orphan.manifest, nextOf(orphan.manifest)]) {
    if ((await disk.kind(path)) !== null) await orRefuse(path, 0, () => disk.remove(path));
  }
  for (const start of new Set([...files.keys(), orphan.manifest].map(parentOf))) {
    for (let folder = start; isStrictlyBelow(root.outFolder, folder); folder = parentOf(folder)) {
      await disk.removeEmptyFolder(folder);
    }
  }
  return warnings;
}

function sourceOf(manifest: Manifest, path: string, root: string): string | null {
  const image = manifest.sources.find((source) => source.use === 'image');
  if (image === undefined) return null;
  return resolvePath(manifest.base === 'root' ? root : parentOf(path), image.path);
}

function recordedFiles(manifests: readonly Manifest[], path: string): Map<string, string[]> {
  const files = new Map<string, string[]>();
  for (const [file, sha256] of manifests.flatMap((manifest) => filesOf(manifest, path))) {
    files.set(file, [...(files.get(file) ?? []), sha256]);
  }
  return files;
}

function isStrictlyBelow(folder: string, path: string): boolean {
  return (pathBelow(folder, path) ?? '') !== '';
}
