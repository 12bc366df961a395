import { joinPath } from '../../core/treatment/paths/path.ts';
import { type Disk, DiskError } from './disk.ts';
import { manifestOfNext, temporaryOwner } from './temporary.ts';

/** What builds left in some folders. Paths are absolute. */
export interface Traces {
  readonly manifests: ReadonlySet<string>;
  /** Manifests that a build was ended while replacing. */
  readonly interrupted: ReadonlySet<string>;
  /** Temporary files, whoever made them. */
  readonly temporaries: ReadonlySet<string>;
}

/** Never looked into: version control, packages. */
const skipped = new Set(['.git', 'node_modules']);

/** Looks through folders, and with `below` through those in them too. Folder links are not followed. */
export async function findTraces(disk: Disk, folders: Iterable<string>, reach: 'folder' | 'below'): Promise<Traces> {
  const found = { manifests: new Set<string>(), interrupted: new Set<string>(), temporaries: new Set<string>() };
  const open = [...folders];
  for (let folder = open.pop(); folder !== undefined; folder = open.pop()) {
    for (const { name, kind } of (await disk.list(folder)) ?? []) {
      if (kind === 'folder' && reach === 'below' && !skipped.has(name)) open.push(joinPath(folder, name));
      if (kind !== 'file') continue;
      const path = joinPath(folder, name);
      const manifest = manifestOfNext(path);
      if (manifest !== null) found.interrupted.add(manifest);
      else if (temporaryOwner(name) !== null) found.temporaries.add(path);
      else if (name.endsWith('.mips.json')) found.manifests.add(path);
    }
  }
  return found;
}

/** Removes temporary files, but those of a process that still runs and is not this one. */
export async function sweep(disk: Disk, temporaries: Iterable<string>, isAlive = isRunning): Promise<void> {
  for (const path of temporaries) {
    const owner = temporaryOwner(path.slice(path.lastIndexOf('/') + 1));
    if (owner === null || (owner !== process.pid && isAlive(owner))) continue;
    try {
      await disk.remove(path);
    } catch (error) {
      // What cannot be removed now is found again next time.
      if (!(error instanceof DiskError)) throw error;
    }
  }
}

function isRunning(processId: number): boolean {
  try {
    process.kill(processId, 0);
    return true;
  } catch (error) {
    // A process of another user answers EPERM, and runs.
    return (error as { code?: string }).code === 'EPERM';
  }
}
