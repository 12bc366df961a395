import { imageExtension } from '../../codec/open.ts';
import type { FileEntry, FileTree } from '../../port.ts';
import type { Problem } from '../../problem.ts';
import { globMatcher } from '../paths/glob.ts';
import { joinPath, pathBelow } from '../paths/path.ts';
import { listedOutputs } from './listed.ts';
import type { Start } from './locate.ts';
import { SETTINGS_NAME } from './root.ts';
import type { LoadedRoot } from './root-settings.ts';

/** What a walk needs to know, and whom it tells. */
export interface Walk {
  readonly tree: FileTree;
  /** An output folder given in place of the settings' one; absolute. */
  readonly out: string | null;
  /** The root of a folder; asked where the walk begins and where a folder has a settings file or a `.git` entry. */
  rootOf(folder: string): Promise<LoadedRoot>;
  found(root: LoadedRoot, source: FoundSource): void;
  /** A root whose settings have problems was met. */
  broken(root: LoadedRoot): void;
  report(problem: Problem): void;
}

export interface FoundSource {
  /** Root-relative, NFC. */
  readonly path: string;
  /** Absolute, as the file system spells it. */
  readonly file: string;
}

/** Finds the sources that a start means, folders in the order of their names. */
export async function walkSources(walk: Walk, start: Start): Promise<void> {
  const root = await walk.rootOf(start.folder);
  const inside = pathBelow(root.folder, start.folder) ?? '';
  const passes = inside.split('/').every((name) => !isSkipped(name));
  if (passes && !isOutput(walk, root, start.folder)) await walkFolder(walk, start, start.folder, root);
}

async function walkFolder(walk: Walk, start: Start, folder: string, outer: LoadedRoot): Promise<void> {
  const entries = await walk.tree.list(folder);
  if (entries === null) {
    walk.report({ code: 'folder-unreadable', severity: 'error', values: {}, path: folder });
    return;
  }
  const ordered = [...entries].sort((a, b) => (a.name < b.name ? -1 : 1));
  const turns = ordered.some(({ name }) => name === SETTINGS_NAME || name === '.git');
  const root = turns && folder !== outer.folder ? await walk.rootOf(folder) : outer;
  if (root.problems.length > 0) walk.broken(root);
  else await visitFiles(walk, start, folder, root, ordered);
  if (start.reach === 'folder') return;
  for (const { name, kind } of ordered) {
    const below = joinPath(folder, name);
    if (kind === 'folder' && !isSkipped(name) && !isOutput(walk, root, below))
      await walkFolder(walk, start, below, root);
  }
}

async function visitFiles(
  walk: Walk,
  start: Start,
  folder: string,
  root: LoadedRoot,
  entries: readonly FileEntry[],
): Promise<void> {
  const images = entries.filter((each) => isImage(each) && start.accepts(joinPath(folder, each.name)));
  if (images.length === 0) return;
  const listed = await listedOutputs(walk.tree, folder, entries);
  const excludes = excluderOf(root);
  for (const { name, kind } of images) {
    const file = joinPath(folder, name);
    const path = pathBelow(root.folder, file)!.normalize('NFC');
    if (listed.has(name.normalize('NFC')) || excludes(path)) continue;
    if (kind === 'file-link' && !(await leadsInside(walk.tree, root, file))) continue;
    walk.found(root, { path, file });
  }
}

function isImage({ name, kind }: FileEntry): boolean {
  return (kind === 'file' || kind === 'file-link') && !isSkipped(name) && imageExtension(name) !== null;
}

function isSkipped(name: string): boolean {
  return name.startsWith('.') || name === 'node_modules';
}

/** An output folder or below one. The root itself may be its own output folder: then manifests alone tell outputs. */
function isOutput(walk: Walk, root: LoadedRoot, folder: string): boolean {
  const outs = [root.outFolder, ...(walk.out === null ? [] : [walk.out])];
  return outs.some((out) => out !== root.folder && pathBelow(out, folder.normalize('NFC')) !== null);
}

async function leadsInside(tree: FileTree, root: LoadedRoot, link: string): Promise<boolean> {
  return pathBelow(await tree.realPath(root.folder), await tree.realPath(link)) !== null;
}

const excluders = new WeakMap<LoadedRoot, (path: string) => boolean>();

function excluderOf(root: LoadedRoot): (path: string) => boolean {
  const known = excluders.get(root) ?? globMatcher(root.settings?.exclude ?? []);
  excluders.set(root, known);
  return known;
}
