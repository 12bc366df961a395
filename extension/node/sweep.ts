import { type Disk, DiskError } from './disk.ts';
import { join } from './path.ts';
import { manifestOfNext, temporaryOwner } from './temporary.ts';

/** What builds left below a folder. Paths are absolute, in code-unit order. */
export interface Traces {
  readonly manifests: readonly string[];
  /** Manifests that a build was ended while replacing. */
  readonly interrupted: readonly string[];
  /** Temporary files, whoever made them. */
  readonly temporaries: readonly string[];
}

/** Never looked into: version control, packages. */
const skipped = new Set(['.git', 'node_modules']);

/** Looks through an output folder. Folder links are not followed. */
export async function findTraces(disk: Disk, folder: string): Promise<Traces> {
  const manifests: string[] = [];
  const interrupted: string[] = [];
  const temporaries: string[] = [];
  const open = [folder];
  for (let next = open.pop(); next !== undefined; next = open.pop()) {
    for (const { name, kind } of (await disk.list(next)) ?? []) {
      if (kind === 'folder') {
        if (!skipped.has(name)) open.push(join(next, name));
      } else if (kind === 'file') {
        const path = join(next, name);
        const manifest = manifestOfNext(path);
        if (manifest !== null) interrupted.push(manifest);
        else if (temporaryOwner(name) !== null) temporaries.push(path);
        else if (name.endsWith('.mips.json')) manifests.push(path);
      }
    }
  }
  return { manifests: manifests.sort(), interrupted: interrupted.sort(), temporaries: temporaries.sort() };
}

/** Removes temporary files, but those of a process that still runs and is not this one. */
export async function sweep(disk: Disk, temporaries: readonly string[], isAlive = isRunning): Promise<void> {
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
