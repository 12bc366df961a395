import { createHash } from 'node:crypto';
import { wholeFile } from '../../../core/build/whole.ts';
import { type BuiltFile, JOINED_BYTES } from '../../../core/job.ts';
import { manifestFiles } from '../../../core/manifest/compare.ts';
import type { Manifest } from '../../../core/manifest/manifest.ts';
import { readManifest } from '../../../core/manifest/read.ts';
import { writeManifest } from '../../../core/manifest/write.ts';
import { type Problem, Refusal, refuse, warning } from '../../../core/problem.ts';
import { pathBelow, resolvePath } from '../../../core/treatment/paths/path.ts';
import { type Disk, DiskError, type FileStat } from './disk.ts';
import { parentOf } from './path.ts';
import { nextOf, temporaryFor } from './temporary.ts';

// How the outputs of one texture take the place of the former ones. Every file is at every instant wholly old or wholly new, and
// a mixture is never without its mark:
//
//   files    written beside their places                    the old build stands, whole
//   flush    of all of them and the new manifest at once
//   .next    the new manifest, laid down                    from here on `check` says `interrupted`
//   renames  of every file, then files no longer listed are removed
//   manifest .next takes its place                          the new build stands, whole

/** Where the outputs of one texture go. */
export interface Place {
  readonly manifestPath: string;
  /** The folder that no output may leave, links resolved: the root, or what `--out` names. */
  readonly within: string;
}

export interface Laydown {
  /** Takes one finished file. Nothing is replaced yet. A small one that is what lies there already is left alone; one that is too
   *  large to be joined is written piece by piece. Throws Refusal. */
  write(path: string, file: Omit<BuiltFile, 'path'>): Promise<void>;
  /** Replaces the former outputs. Answers warnings about files that were kept, and the stat of every file that is there now.
   *  Throws Refusal, after which `abort` still tidies. */
  commit(manifest: Manifest): Promise<{ readonly warnings: Problem[]; readonly files: readonly LaidFile[] }>;
  /** Removes what was written for nothing. What was replaced already stays, and stays marked. */
  abort(): Promise<void>;
}

/** A file that was laid down, or was there already. */
export interface LaidFile {
  readonly path: string;
  readonly sha256: string;
  readonly stat: FileStat;
}

/** How long a rename is tried again while another program holds the file. */
const BUSY_SECONDS = 2;
const BUSY_TRIES = 20;

export type Pause = (ms: number) => Promise<void>;

export const pause: Pause = (ms) => new Promise((done) => setTimeout(done, ms));

/** A file that was written and waits for its place. */
interface Staged {
  readonly temporary: string;
  readonly path: string;
  readonly bytes: number;
}

export function openLaydown(disk: Disk, place: Place, wait: Pause = pause): Laydown {
  const next = nextOf(place.manifestPath);
  const staged: Staged[] = [];
  const madeFolders: string[] = [];
  const checkedFolders = new Set<string>();
  const stats = new Map<string, FileStat>();
  let marked: 'no' | 'by us' | 'for good' = 'no';

  return { write, commit, abort };

  async function write(path: string, file: Omit<BuiltFile, 'path'>): Promise<void> {
    await checkPlace(path);
    const temporary = temporaryFor(path);
    if (file.byteCount > JOINED_BYTES) {
      const { byteCount, pieces } = file;
      await orRefuse(path, byteCount, () => inFolder(temporary, () => disk.writePieces(temporary, pieces)));
    } else {
      const bytes = await wholeFile({ path, ...file });
      if (await holds(path, bytes)) return;
      await orRefuse(path, bytes.length, () => writeNew(temporary, bytes));
    }
    staged.push({ temporary, path, bytes: file.byteCount });
  }

  async function commit(manifest: Manifest) {
    const { manifestPath } = place;
    await checkPlace(manifestPath);
    const text = new TextEncoder().encode(writeManifest(manifest));
    const former = await readFormer(manifestPath);
    const interrupted = await readFormer(next);
    const kept = new Set(listed(manifest).keys());
    const dropped = listed(former, interrupted);
    for (const path of kept) dropped.delete(path);
    const forgotten = new Map([...dropped].filter(([path]) => !listed(former).has(path)));
    // What only a build that was ended lists would be forgotten with its manifest.
    const warnings = await removeUnedited(disk, forgotten, place.within);
    const wasMarked = (await disk.kind(next)) !== null;
    const temporary = temporaryFor(manifestPath);
    await orRefuse(manifestPath, text.length, () => writeNew(temporary, text));
    staged.unshift({ temporary, path: manifestPath, bytes: text.length });
    await flush();
    await replace(temporary, next, manifestPath);
    staged.shift();
    marked = wasMarked ? 'for good' : 'by us';
    await disk.flushFolder(parentOf(manifestPath));
    const folders = new Set<string>();
    while (staged.length > 0) {
      const file = staged[0];
      await replace(file.temporary, file.path, file.path);
      marked = 'for good';
      staged.shift();
      folders.add(parentOf(file.path));
    }
    for (const path of forgotten.keys()) dropped.delete(path);
    warnings.push(...(await removeUnedited(disk, dropped, place.within)));
    await Promise.all([...folders].map((folder) => disk.flushFolder(folder)));
    await replace(next, manifestPath, manifestPath);
    await disk.flushFolder(parentOf(manifestPath));
    marked = 'no';
    madeFolders.length = 0;
    const all = [...filesOf(manifest, manifestPath), [manifestPath, sha256Of(text)] as const];
    const files = all.flatMap(([path, sha256]) => {
      const stat = stats.get(path);
      return stat === undefined ? [] : [{ path, sha256, stat }];
    });
    return { warnings, files };
  }

  /** Everything that was staged, before anything of it takes its place. */
  async function flush(): Promise<void> {
    const all = [...staged];
    try {
      const flushed = await disk.flush(all.map(({ temporary }) => temporary));
      for (const [at, stat] of flushed.entries()) stats.set(all[at].path, stat);
    } catch (error) {
      const file = all.find(({ temporary }) => error instanceof DiskError && temporary === error.path) ?? all[0];
      await orRefuse(file.path, file.bytes, () => Promise.reject(error));
    }
  }

  async function abort(): Promise<void> {
    for (const { temporary } of staged.splice(0)) await quietly(() => disk.remove(temporary));
    if (marked === 'by us') await quietly(() => disk.remove(next));
    for (const folder of madeFolders.splice(0).reverse()) await disk.removeEmptyFolder(folder);
  }

  /** Refuses a path that links lead out of the folder it belongs in. */
  async function checkPlace(path: string): Promise<void> {
    const folder = parentOf(path);
    if (checkedFolders.has(folder)) return;
    const resolved = await disk.realPath(folder);
    const within = await disk.realPath(place.within);
    if (pathBelow(within, resolved) === null) refuse('leaves-folder', { resolved, folder: within }, { path });
    checkedFolders.add(folder);
  }

  async function holds(path: string, bytes: Uint8Array): Promise<boolean> {
    const stat = await disk.stat(path);
    if (stat?.size !== bytes.length) return false;
    const present = await disk.read(path);
    if (present === null || Buffer.compare(present, bytes) !== 0) return false;
    stats.set(path, stat);
    return true;
  }

  function writeNew(path: string, bytes: Uint8Array): Promise<void> {
    return inFolder(path, () => disk.write(path, bytes));
  }

  async function inFolder<T>(path: string, act: () => Promise<T>): Promise<T> {
    for (let tries = 0; ; tries++) {
      try {
        await makeFolder(parentOf(path));
        return await act();
      } catch (error) {
        // A neighbor that failed may take away the empty folder that it made and we were about to use.
        if (!(error instanceof DiskError && error.fault === 'missing') || tries === 3) throw error;
      }
    }
  }

  async function makeFolder(folder: string): Promise<void> {
    if ((await disk.kind(folder)) === 'folder') return;
    const topmost = await disk.makeFolder(folder);
    if (topmost === null) return;
    const chain = [folder];
    while (chain[0] !== topmost && parentOf(chain[0]) !== chain[0]) chain.unshift(parentOf(chain[0]));
    madeFolders.push(...chain);
  }

  function replace(from: string, to: string, named: string): Promise<void> {
    return replaceFile(disk, { from, to, named }, wait);
  }

  async function readFormer(path: string): Promise<Manifest | null> {
    const bytes = await disk.read(path);
    if (bytes === null) return null;
    try {
      return readManifest(new TextDecoder().decode(bytes), path);
    } catch (error) {
      // A damaged one tells nothing about its files; they are replaced or left alone.
      if (error instanceof Refusal) return null;
      throw error;
    }
  }

  /** Files by absolute path, with every SHA-256 that one of the manifests records for them. */
  function listed(...manifests: readonly (Manifest | null)[]): Map<string, string[]> {
    const files = new Map<string, string[]>();
    for (const manifest of manifests) {
      if (manifest === null) continue;
      for (const [path, sha256] of filesOf(manifest, place.manifestPath)) {
        files.set(path, [...(files.get(path) ?? []), sha256]);
      }
    }
    return files;
  }
}

/** Puts a file in the place of another, and tries again while another program holds that open. `named` is the path that a refusal
 *  speaks of. Throws Refusal. */
export async function replaceFile(
  disk: Disk,
  { from, to, named }: { readonly from: string; readonly to: string; readonly named: string },
  wait: Pause,
): Promise<void> {
  for (let tries = 0; ; tries++) {
    try {
      return await disk.rename(from, to);
    } catch (error) {
      if (!(error instanceof DiskError && error.fault === 'busy'))
        return await orRefuse(named, 0, () => Promise.reject(error));
      if (tries === BUSY_TRIES) refuse('output-busy', { seconds: BUSY_SECONDS }, { path: named });
      await wait((BUSY_SECONDS * 1000) / BUSY_TRIES);
    }
  }
}

/** The output files of a manifest that lies at `manifestPath`: absolute path and recorded SHA-256. */
export function filesOf(manifest: Manifest, manifestPath: string): [path: string, sha256: string][] {
  return manifestFiles(manifest).map((file) => [resolvePath(parentOf(manifestPath), file.path), file.sha256]);
}

/** Removes the files that still have a SHA-256 given for them, and answers a warning for each that does not. Never touches what
 *  lies outside `within`, links resolved, whatever a manifest says. Throws Refusal. */
export async function removeUnedited(
  disk: Disk,
  files: ReadonlyMap<string, readonly string[]>,
  within: string,
): Promise<Problem[]> {
  const warnings: Problem[] = [];
  const allowed = await disk.realPath(within);
  for (const [path, recorded] of files) {
    if (pathBelow(allowed, await disk.realPath(parentOf(path))) === null) continue;
    const bytes = await disk.read(path);
    if (bytes === null) continue;
    if (recorded.includes(sha256Of(bytes))) await orRefuse(path, 0, () => disk.remove(path));
    else warnings.push(warning('output-edited', {}, { path }));
  }
  return warnings;
}

/** Runs what writes, and puts its failure in words. `path` is the output meant, not its temporary form. */
export async function orRefuse<T>(path: string, bytes: number, act: () => Promise<T>): Promise<T> {
  try {
    return await act();
  } catch (error) {
    if (!(error instanceof DiskError)) throw error;
    switch (error.fault) {
      case 'full':
        return refuse('disk-full', { bytes }, { path });
      case 'busy':
        return refuse('output-busy', { seconds: 0 }, { path });
      case 'denied':
      case 'missing':
      case 'other':
        return refuse('output-unwritable', { reason: error.reason }, { path });
    }
  }
}

function sha256Of(bytes: Uint8Array): string {
  return createHash('sha256').update(bytes).digest('hex');
}

async function quietly(tidy: () => Promise<void>): Promise<void> {
  try {
    await tidy();
  } catch (error) {
    // Tidying is best effort: the next build sweeps what stays.
    if (!(error instanceof DiskError)) throw error;
  }
}
