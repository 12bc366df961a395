import { createHash } from 'node:crypto';
import { joinPath } from '../../../core/treatment/paths/path.ts';
import { type Disk, DiskError, type FileStat } from '../files/disk.ts';
import { parentOf } from '../files/path.ts';
import { temporaryFor } from '../files/temporary.ts';

// What files hashed to when they were last read or written, so that an unchanged one costs a stat. One text file for each folder
// of a root, read when a file of that folder is asked for:
//
//   sizeproof stat index 1
//   <sha256> <size> <mtime in ms> <inode> <when hashed, ms since 1970> <path relative to the root>
//
// It is a hint: a damaged one is ignored, a missing one is made.

export interface StatIndex {
  /** SHA-256 of a file, `null` where there is none. Reads it only if its stat moved, or is too fresh to trust. */
  hash(path: string): Promise<string | null>;
  /** Takes what a build has just written; `settle` makes use of it. */
  learn(path: string, sha256: string, stat: FileStat): void;
  /** Looks again at what was learned, and keeps what has stayed as it was. */
  settle(): Promise<void>;
  /** What a file hashed to and its stat at that time, where both may be relied on without reading it; else `null`. */
  trusted(path: string): (FileStat & { readonly sha256: string }) | null;
  /** Keeps what was learned, if anything was. Failing is harmless. */
  save(): Promise<void>;
}

/** The files of one folder. */
interface Shard {
  /** `null` where nothing is kept. */
  readonly file: string | null;
  readonly entries: Map<string, Entry>;
  changed: boolean;
}

interface Entry extends FileStat {
  readonly sha256: string;
  readonly hashedMs: number;
  used: boolean;
}

/** A file changed within this time of being hashed may change again under the same time stamp: FAT keeps 2 s. */
export const FRESH_MS = 2000;

/** Entries of files that nobody asked for may outnumber the others so far, before they are dropped. */
const SPARE_ENTRIES = 10_000;

const header = 'sizeproof stat index 1';

/** Opens the index of one root, kept in `cacheFolder`; `null` keeps none. `now` gives milliseconds since 1970. */
export async function openStatIndex(
  disk: Disk,
  cacheFolder: string | null,
  root: string,
  now: () => number = Date.now,
): Promise<StatIndex> {
  const shards = new Map<string, Shard>();
  const learned: { readonly path: string; readonly sha256: string; readonly stat: FileStat }[] = [];

  return { hash, learn, settle, trusted, save };

  async function hash(path: string): Promise<string | null> {
    const stat = await disk.stat(path);
    const key = keyOf(path);
    const shard = await shardOf(path);
    const { entries } = shard;
    const known = entries.get(key);
    if (stat === null) {
      if (known !== undefined) shard.changed = entries.delete(key);
      return null;
    }
    if (known !== undefined && isSame(known, stat) && isSettled(known)) {
      known.used = true;
      return known.sha256;
    }
    const hashedMs = now();
    const bytes = await disk.read(path);
    if (bytes === null) return null;
    const sha256 = sha256Of(bytes);
    entries.set(key, { ...stat, sha256, hashedMs, used: true });
    shard.changed = true;
    return sha256;
  }

  function learn(path: string, sha256: string, stat: FileStat): void {
    learned.push({ path, sha256, stat });
  }

  async function settle(): Promise<void> {
    for (const { path, sha256, stat } of learned.splice(0)) {
      const hashedMs = now();
      const present = await disk.stat(path);
      // What was written meanwhile has another time stamp.
      if (present === null || !isSame(stat, present)) continue;
      const shard = await shardOf(path);
      shard.entries.set(keyOf(path), { ...stat, sha256, hashedMs, used: true });
      shard.changed = true;
    }
  }

  function trusted(path: string): Entry | null {
    const entry = shards.get(parentOf(path))?.entries.get(keyOf(path));
    return entry?.used && isSettled(entry) ? entry : null;
  }

  async function save(): Promise<void> {
    const news: NewFile[] = [];
    for (const shard of shards.values()) {
      if (shard.file === null || !shard.changed) continue;
      news.push({ file: shard.file, print: () => print(shard.entries) });
      shard.changed = false;
    }
    await replaceFiles(disk, news);
  }

  async function shardOf(path: string): Promise<Shard> {
    const folder = parentOf(path);
    const known = shards.get(folder);
    if (known !== undefined) return known;
    const file = cacheFile(cacheFolder, root, keyOf(folder), 'txt');
    const bytes = file === null ? null : await disk.read(file);
    const entries = bytes === null ? new Map<string, Entry>() : parse(Buffer.from(bytes).toString());
    const shard = { file, entries, changed: false };
    shards.set(folder, shard);
    return shard;
  }

  /** Paths below the root are kept relative to it: shorter, and alike on drives that move. */
  function keyOf(path: string): string {
    return path.startsWith(`${root}/`) ? path.slice(root.length + 1) : path;
  }
}

/** The user's cache folder for this program, by the custom of each system; `null` where no home is known. */
export function cacheFolder(env: Readonly<Record<string, string | undefined>>, platform: string): string | null {
  const home = env.HOME || env.USERPROFILE;
  const base =
    platform === 'win32'
      ? env.LOCALAPPDATA || (home && `${home}/AppData/Local`)
      : platform === 'darwin'
        ? home && `${home}/Library/Caches`
        : env.XDG_CACHE_HOME || (home && `${home}/.cache`);
  return base ? joinPath(base.replaceAll('\\', '/'), 'sizeproof') : null;
}

/** Where the cache keeps what is known of one folder of a root. */
export function cacheFile(cacheFolder: string | null, root: string, folder: string, ending: string): string | null {
  if (cacheFolder === null) return null;
  return joinPath(cacheFolder, `${sha256Of(Buffer.from(`${root}\n${folder}`)).slice(0, 24)}.${ending}`);
}

/** A file of the cache that is to be written anew. */
export interface NewFile {
  readonly file: string;
  readonly print: () => Uint8Array;
}

/** Writes files of the cache anew, each whole at each instant. Failing is harmless: what is not kept is found out again. */
export async function replaceFiles(disk: Disk, news: readonly NewFile[]): Promise<void> {
  if (news.length === 0) return;
  const written: { readonly temporary: string; readonly file: string }[] = [];
  try {
    for (const { file, print } of news) {
      const temporary = temporaryFor(file);
      await disk.makeFolder(parentOf(file));
      await disk.write(temporary, print());
      written.push({ temporary, file });
    }
    await disk.flush(written.map(({ temporary }) => temporary));
    for (const { temporary, file } of written) await disk.rename(temporary, file);
  } catch (error) {
    if (!(error instanceof DiskError)) throw error;
    for (const { temporary } of written) await disk.remove(temporary).catch(() => undefined);
  }
}

function isSettled(entry: Entry): boolean {
  return entry.hashedMs - entry.mtimeMs >= FRESH_MS;
}

function isSame(entry: FileStat, stat: FileStat): boolean {
  return entry.size === stat.size && entry.mtimeMs === stat.mtimeMs && entry.inode === stat.inode;
}

function parse(text: string): Map<string, Entry> {
  const entries = new Map<string, Entry>();
  const lines = text.split('\n');
  if (lines[0] !== header) return entries;
  for (const line of lines) {
    const parts = line.split(' ', 5);
    const path = line.slice(parts.join(' ').length + 1);
    const [size, mtimeMs, inode, hashedMs] = parts.slice(1).map(Number);
    // NaN fails every comparison, so a damaged line is left out.
    if (parts[0].length !== 64 || path === '' || !(size >= 0 && inode >= 0 && hashedMs - mtimeMs > -Infinity)) continue;
    entries.set(path, { sha256: parts[0], size, mtimeMs, inode, hashedMs, used: false });
  }
  return entries;
}

function print(entries: ReadonlyMap<string, Entry>): Uint8Array {
  const used = [...entries].filter(([, entry]) => entry.used);
  const kept = entries.size > 2 * used.length + SPARE_ENTRIES ? used : [...entries];
  const lines = kept.map(
    ([path, each]) => `${each.sha256} ${each.size} ${each.mtimeMs} ${each.inode} ${each.hashedMs} ${path}`,
  );
  return Buffer.from(`${header}\n${lines.join('\n')}\n`);
}

export function sha256Of(bytes: Uint8Array): string {
  return createHash('sha256').update(bytes).digest('hex');
}
