import { parentPath } from '../../../core/treatment/paths/path.ts';

// Absolute paths with "/" between the parts (`/a/b`, `C:/a/b`), as text: nothing here looks at a disk.

/** The folder of a path; the top is its own. */
export function parentOf(path: string): string {
  return parentPath(path) ?? path;
}

/** What the paths of a folder's entries begin with. */
export function startOf(folder: string): string {
  return folder.endsWith('/') ? folder : `${folder}/`;
}

/** The way from `folder` to `path`, or `null` where they have no start in common (two drives). `.` for the folder itself. */
export function relative(folder: string, path: string): string | null {
  const from = partsOf(folder);
  const to = partsOf(path);
  if (from[0] !== to[0]) return null;
  let shared = 1;
  while (shared < from.length && shared < to.length && from[shared] === to[shared]) shared++;
  const way = [...Array.from({ length: from.length - shared }, () => '..'), ...to.slice(shared)];
  return way.length === 0 ? '.' : way.join('/');
}

function partsOf(path: string): string[] {
  const parts = path.split('/').filter((part, index) => index === 0 || part !== '');
  // Drive letters are the same in either case.
  return [parts[0].toLowerCase(), ...parts.slice(1)];
}
