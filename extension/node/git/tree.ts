import type { FileTree } from '../../../core/port.ts';
import { Refusal } from '../../../core/problem.ts';
import { joinPath, pathBelow } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import type { FileRef, Part } from './changes.ts';
import { runGit } from './run.ts';
import type { Versions } from './versions.ts';

/** The files of one end of a part, as a file tree whose top is where the working tree lies. */
export interface EndTree {
  readonly tree: FileTree;
  /** Files that version control knows at this end, and new ones of a working tree: from the top, as Git spells them. */
  readonly files: ReadonlyMap<string, FileRef>;
}

/** Opens an end: a commit's tree and the index as Git lists them, a working tree as it lies on the disk. */
export async function openTree(part: Part, side: 'before' | 'after', disk: Disk, versions: Versions): Promise<EndTree> {
  const { repository, ends } = part;
  const end = ends[side];
  const files = await listFiles(part, side);
  if (end.kind === 'files') return { tree: disk, files };
  const top = repository.folder;
  const refOf = (path: string): FileRef | undefined => files.get(pathBelow(top, path) ?? '');
  const read = async (path: string): Promise<Uint8Array | null> => {
    const ref = refOf(path);
    if (ref === undefined) return null;
    try {
      return await versions.stored(ref, TEXT_BYTES);
    } catch (error) {
      if (error instanceof Refusal) return null;
      throw error;
    }
  };
  return {
    files,
    tree: {
      list: async () => null,
      read,
      readHead: async (path, count) => (await read(path))?.subarray(0, count) ?? null,
      // A repository's own folder ends the search for settings, as it does on a disk.
      kind: async (path) =>
        path === joinPath(top, '.git') ? 'folder' : refOf(path)?.kind === 'object' ? 'file' : null,
      realPath: async (path) => path,
    },
  };
}

/** Settings and manifests; a larger file is none. */
const TEXT_BYTES = 64 * 1024 * 1024;

async function listFiles({ repository, ends }: Part, side: 'before' | 'after'): Promise<Map<string, FileRef>> {
  const end = ends[side];
  const { folder, store } = repository;
  const object = (mode: string, id: string): FileRef => {
    if (mode === '120000') return { kind: 'link' };
    return mode === '160000' ? { kind: 'submodule' } : { kind: 'object', repository: folder, store, id };
  };
  const files = new Map<string, FileRef>();
  const lines = async (args: readonly string[]) => (await runGit(folder, args)).toString().split('\0').filter(Boolean);
  switch (end.kind) {
    case 'tree':
      for (const line of await lines(['ls-tree', '-r', '-z', '--full-tree', end.id])) {
        const [mode, , id] = line.slice(0, line.indexOf('\t')).split(' ');
        files.set(line.slice(line.indexOf('\t') + 1), object(mode, id));
      }
      return files;
    case 'index':
      for (const line of await lines(['ls-files', '--stage', '-z', '--full-name'])) {
        const [mode, id] = line.slice(0, line.indexOf('\t')).split(' ');
        files.set(line.slice(line.indexOf('\t') + 1), object(mode, id));
      }
      return files;
    case 'files':
      for (const path of await lines(['ls-files', '--cached', '--others', '--exclude-standard', '-z', '--full-name'])) {
        files.set(path, { kind: 'file', path: joinPath(folder, path), store });
      }
      return files;
  }
}
