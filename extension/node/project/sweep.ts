import { MANIFEST_ENDING } from '../../../core/treatment/find/names.ts';
import { baseName, joinPath } from '../../../core/treatment/paths/path.ts';
import { type Disk, DiskError } from '../files/disk.ts';
import { startOf } from '../files/path.ts';
import { manifestOfNext, temporaryOwner } from '../files/temporary.ts';

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

/** What builds left in one folder, by name. */
export interface FolderTraces {
  readonly manifests: readonly string[];
  /** Manifests of which a `.next` lies there. */
  readonly interrupted: readonly string[];
  readonly temporaries: readonly string[];
  /** Folders to look into, too. */
  readonly folders: readonly string[];
}

/** Looks through folders, and with `below` through those in them too. Folder links are not followed. `look` tells of one. */
export async function findTraces(
  disk: Disk,
  folders: Iterable<string>,
  reach: 'folder' | 'below',
  look = (folder: string) => tracesIn(disk, folder),
): Promise<Traces> {
  const found = { manifests: new Set<string>(), interrupted: new Set<string>(), temporaries: new Set<string>() };
  const open = [...folders];
  for (let folder = open.pop(); folder !== undefined; folder = open.pop()) {
    const start = startOf(folder);
    const traces = await look(folder);
    for (const name of traces.manifests) found.manifests.add(start + name);
    for (const name of traces.interrupted) found.interrupted.add(start + name);
    for (const name of traces.temporaries) found.temporaries.add(start + name);
    if (reach === 'below') for (const name of traces.folders) open.push(start + name);
  }
  return found;
}

/** Lists one folder. */
export async function tracesIn(disk: Disk, folder: string): Promise<FolderTraces> {
  const found = {
    manifests: [] as string[],
    interrupted: [] as string[],
    temporaries: [] as string[],
    folders: [] as string[],
  };
  for (const { name, kind } of (await disk.list(folder)) ?? []) {
    if (kind === 'folder' && !skipped.has(name)) found.folders.push(name);
    if (kind !== 'file') continue;
    const next = name.startsWith('.') ? manifestOfNext(joinPath(folder, name)) : null;
    if (next !== null) found.interrupted.push(baseName(next));
    else if (name.endsWith(MANIFEST_ENDING)) found.manifests.push(name);
    else if (temporaryOwner(name) !== null) found.temporaries.push(name);
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
