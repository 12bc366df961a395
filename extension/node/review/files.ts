import { Refusal } from '../../../core/problem.ts';
import { baseName, resolvePath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';
import { parentOf } from '../files/path.ts';
import type { FileRef } from '../git/changes.ts';
import { openRepository } from '../git/repository.ts';
import type { ReviewList } from './list.ts';
import { openSettings } from './settings.ts';

/** Two files as before and after, each by the settings that lie over it. No repository is needed; Git LFS pointers are followed where
 *  the second lies in one. */
export async function listFiles(disk: Disk, folder: string, paths: readonly string[]): Promise<ReviewList> {
  const [one, other] = paths.map((path) => resolvePath(folder, path));
  const [was, is] = [await settingsOf(disk, one), await settingsOf(disk, other)];
  const version = async (path: string, treatment: typeof was.treatment) => {
    const file: FileRef = { kind: 'file', path, store: await storeOf(path) };
    return { file, treatment };
  };
  return {
    folder,
    before: paths[0],
    after: paths[1],
    entries: [
      {
        path: baseName(other),
        oldPath: baseName(one),
        status: 'changed',
        before: await version(one, was.treatment ?? is.treatment),
        after: await version(other, is.treatment ?? was.treatment),
        limits: is.limits,
        manifest: 'none',
        problems: [...was.problems, ...is.problems],
      },
    ],
    outputs: 0,
    excluded: 0,
    problems: [],
  };
}

/** Treatments are asked for whatever the globs exclude: these very files were named. */
async function settingsOf(disk: Disk, path: string) {
  const settings = openSettings({ tree: disk, files: new Map() }, parentOf(path));
  return settings(baseName(path));
}

/** Where the repository of a file keeps what its pointers stand for; a place where nothing is, without one. */
async function storeOf(path: string): Promise<string> {
  const folder = parentOf(path);
  try {
    return (await openRepository(folder)).store;
  } catch (error) {
    if (error instanceof Refusal) return resolvePath(folder, '.git/lfs');
    throw error;
  }
}
