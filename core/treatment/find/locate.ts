import type { FileTree } from '../../port.ts';
import type { Problem } from '../../problem.ts';
import { globFault, globMatcher, isGlob } from '../paths/glob.ts';
import { baseName, joinPath, parentPath, pathBelow, resolvePath } from '../paths/path.ts';

/** Where a PATH leads: the folder to begin in (its real path), whether to go below it, and which files are meant. */
export interface Start {
  readonly folder: string;
  readonly kind: 'file' | 'folder' | 'glob';
  readonly reach: 'folder' | 'below';
  /** Takes an absolute path. */
  accepts(file: string): boolean;
}

/** Finds what a PATH means: what exists under that very name, else a glob. Null where it leads nowhere. */
export async function locate(tree: FileTree, folder: string, path: string): Promise<Start | Problem | null> {
  const whole = resolvePath(folder, path);
  const kind = await tree.kind(whole);
  if (kind === 'folder')
    return { folder: await tree.realPath(whole), kind: 'folder', reach: 'below', accepts: () => true };
  if (kind === 'file') return locateFile(tree, whole);
  return isGlob(path) ? locateGlob(tree, folder, path) : null;
}

async function locateFile(tree: FileTree, whole: string): Promise<Start | null> {
  const parent = parentPath(whole);
  if (parent === null) return null;
  const folder = await tree.realPath(parent);
  const entries = (await tree.list(folder)) ?? [];
  // A file system may find a file under another case or composition than it lists it under.
  const asTyped = baseName(whole);
  const name = [exact, folded]
    .map((alike) => entries.find((each) => alike(each.name) === alike(asTyped)))
    .find((each) => each !== undefined)?.name;
  if (name === undefined) return null;
  const file = joinPath(folder, name);
  return { folder, kind: 'file', reach: 'folder', accepts: (each) => each === file };
}

async function locateGlob(tree: FileTree, folder: string, glob: string): Promise<Start | Problem | null> {
  const names = glob.split('/');
  const first = names.findIndex(isGlob);
  const pattern = names.slice(first).join('/');
  const fault = globFault(pattern);
  if (fault !== null) return { ...fault, severity: 'error' };
  const fixed = names.slice(0, first).join('/');
  const base = resolvePath(folder, first > 0 && fixed === '' ? '/' : fixed);
  if ((await tree.kind(base)) !== 'folder') return null;
  const real = await tree.realPath(base);
  const matches = globMatcher([pattern]);
  return {
    folder: real,
    kind: 'glob',
    reach: names.length - first === 1 && !pattern.includes('**') ? 'folder' : 'below',
    accepts: (file) => matches((pathBelow(real, file) ?? '').normalize('NFC')),
  };
}

const exact = (name: string) => name;
const folded = (name: string) => name.normalize('NFC').toLowerCase();
