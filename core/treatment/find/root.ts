import type { FileTree } from '../../port.ts';
import { joinPath, parentPath } from '../paths/path.ts';

export const SETTINGS_NAME = 'sizeproof.json';

/** Where a folder's settings come from. */
export interface FoundRoot {
  /** Absolute; the folder of the settings file. */
  readonly folder: string;
  /** Absolute path of the settings file. */
  readonly file: string;
  /** Absolute path of the next settings file above it, which has no effect here; null for none. */
  readonly hidden: string | null;
}

/** The nearest settings file in `start` (an absolute folder) or above. The walk ends at the first folder with a `.git` entry,
 *  that folder included, else at the top. Null where there is none. */
export async function findRoot(tree: FileTree, start: string): Promise<FoundRoot | null> {
  let root: Omit<FoundRoot, 'hidden'> | null = null;
  for (let folder: string | null = start; folder !== null; folder = parentPath(folder)) {
    const file = joinPath(folder, SETTINGS_NAME);
    if ((await tree.kind(file)) === 'file') {
      if (root !== null) return { ...root, hidden: file };
      root = { folder, file };
    }
    if ((await tree.kind(joinPath(folder, '.git'))) !== null) break;
  }
  return root === null ? null : { ...root, hidden: null };
}
