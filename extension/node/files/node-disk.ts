import * as fs from 'node:fs';
import type { FileEntry } from '../../../core/port.ts';
import { type Disk, DiskError, type DiskFault, type FileStat, type FolderStamp } from './disk.ts';
import { parentOf } from './path.ts';

/** The file system through Node. Calls are synchronous inside: statting 130 000 files takes half a second so, and several
 *  through the thread pool; callers that loop long give way to the event loop themselves. */
export const nodeDisk: Disk = {
  async list(folder) {
    return attempt(() => fs.readdirSync(folder, { withFileTypes: true }).map((entry) => entryOf(folder, entry)));
  },
  async read(path) {
    return attempt(() => fs.readFileSync(path));
  },
  async readHead(path, byteCount) {
    return attempt(() => readHead(path, byteCount));
  },
  async kind(path) {
    const stats = attempt(() => fs.statSync(path));
    return stats === null ? null : stats.isDirectory() ? 'folder' : stats.isFile() ? 'file' : null;
  },
  async realPath(path) {
    return realPath(path);
  },
  async stat(path): Promise<FileStat | null> {
    const stats = quickStat(path);
    return stats?.isFile() ? statOf(stats) : null;
  },
  async folderStamp(path): Promise<FolderStamp | null> {
    // Of the file systems that Windows mounts, some leave a folder's times alone.
    const stats = process.platform === 'win32' ? undefined : quickStat(path);
    return stats?.isDirectory() ? { modifiedMs: stats.mtimeMs, changedMs: stats.ctimeMs, inode: stats.ino } : null;
  },
  async areStill(paths, numbers) {
    return paths.every((path, at) => isStill(path, numbers, 3 * at));
  },
  async write(path, bytes) {
    return change(path, () => write(path, bytes));
  },
  writePieces,
  async flush(paths) {
    const stats: FileStat[] = [];
    for (let at = 0; at < paths.length; at += OPEN_FILES) {
      const flushing = paths.slice(at, at + OPEN_FILES).map(flushFile);
      // All of them have ended before the first failure is told.
      await Promise.allSettled(flushing);
      stats.push(...(await Promise.all(flushing)));
    }
    return stats;
  },
  async rename(from, to) {
    change(to, () => fs.renameSync(from, to));
  },
  async remove(path) {
    change(path, () => fs.rmSync(path, { force: true }));
  },
  async makeFolder(path) {
    const made = change(path, () => fs.mkdirSync(path, { recursive: true }));
    return made === undefined ? null : slashed(made);
  },
  async removeEmptyFolder(path) {
    attempt(() => fs.rmdirSync(path));
  },
  async flushFolder(path) {
    // Windows cannot open a folder for flushing, and keeps its own journal of renames.
    if (process.platform !== 'win32') await flushFolder(path);
  },
};

/** A path as the rest of the house writes it: absolute paths of this system with "/" between the parts. */
export function slashed(path: string): string {
  return process.platform === 'win32' ? path.replaceAll('\\', '/') : path;
}

function entryOf(folder: string, entry: fs.Dirent): FileEntry {
  const name = entry.name;
  if (entry.isFile()) return { name, kind: 'file' };
  if (entry.isDirectory()) return { name, kind: 'folder' };
  if (!entry.isSymbolicLink()) return { name, kind: 'other' };
  const stats = attempt(() => fs.statSync(`${folder}/${name}`));
  if (stats === null) return { name, kind: 'lost' };
  return { name, kind: stats.isDirectory() ? 'folder-link' : stats.isFile() ? 'file-link' : 'other' };
}

function statOf(stats: fs.Stats): FileStat {
  return { size: stats.size, mtimeMs: stats.mtimeMs, inode: stats.ino };
}

/** One call for each of a hundred thousand files: nothing else may be done for it. */
function isStill(path: string, numbers: ArrayLike<number>, at: number): boolean {
  const stats = quickStat(path);
  if (stats === undefined || !stats.isFile()) return false;
  return stats.size === numbers[at] && stats.mtimeMs === numbers[at + 1] && stats.ino === numbers[at + 2];
}

function quickStat(path: string): fs.Stats | undefined {
  try {
    return fs.statSync(path, QUIET);
  } catch (error) {
    if (codeOf(error) === undefined) throw error;
    return undefined;
  }
}

const QUIET = { throwIfNoEntry: false } as const;

function readHead(path: string, byteCount: number): Uint8Array {
  const handle = fs.openSync(path, 'r');
  try {
    const bytes = new Uint8Array(byteCount);
    let filled = 0;
    while (filled < byteCount) {
      const count = fs.readSync(handle, bytes, filled, byteCount - filled, filled);
      if (count === 0) break;
      filled += count;
    }
    return bytes.subarray(0, filled);
  } finally {
    fs.closeSync(handle);
  }
}

function realPath(path: string): string {
  const found = attempt(() => slashed(fs.realpathSync.native(path)));
  if (found !== null) return found;
  const parent = parentOf(path);
  if (parent === path) return path;
  return `${realPath(parent).replace(/\/$/, '')}/${path.slice(path.lastIndexOf('/') + 1)}`;
}

function write(path: string, bytes: Uint8Array): void {
  const handle = fs.openSync(path, 'wx');
  try {
    writeAll(handle, bytes);
  } catch (error) {
    fs.closeSync(handle);
    fs.rmSync(path, { force: true });
    throw error;
  }
  fs.closeSync(handle);
}

async function writePieces(path: string, pieces: AsyncIterable<Uint8Array>): Promise<void> {
  const handle = change(path, () => fs.openSync(path, 'wx'));
  try {
    for await (const piece of pieces) change(path, () => writeAll(handle, piece));
  } catch (error) {
    fs.closeSync(handle);
    fs.rmSync(path, { force: true });
    throw error;
  }
  fs.closeSync(handle);
}

function writeAll(handle: number, bytes: Uint8Array): void {
  for (let written = 0; written < bytes.length; ) written += fs.writeSync(handle, bytes, written);
}

/** Files that are flushed at a time: each is open meanwhile. */
const OPEN_FILES = 64;

async function flushFile(path: string): Promise<FileStat> {
  // Windows flushes what is open for writing alone.
  const handle = change(path, () => fs.openSync(path, 'r+'));
  const fault = await sync(handle);
  return change(path, () => {
    try {
      if (fault !== null) throw fault;
      return statOf(fs.fstatSync(handle));
    } finally {
      fs.closeSync(handle);
    }
  });
}

async function flushFolder(path: string): Promise<void> {
  const handle = attempt(() => fs.openSync(path, 'r'));
  if (handle === null) return;
  await sync(handle);
  fs.closeSync(handle);
}

/** On the thread pool, so that several go on together. Answers what went wrong. */
function sync(handle: number): Promise<Error | null> {
  return new Promise((resolve) => fs.fsync(handle, resolve));
}

/** What cannot be read is not there, as the port says. */
function attempt<T>(read: () => T): T | null {
  try {
    return read();
  } catch (error) {
    if (codeOf(error) === undefined) throw error;
    return null;
  }
}

function change<T>(path: string, act: () => T): T {
  try {
    return act();
  } catch (error) {
    const code = codeOf(error);
    if (code === undefined) throw error;
    throw new DiskError(faultOf(code), path, reasons[code] ?? `the system answers ${code}`);
  }
}

function faultOf(code: string): DiskFault {
  if (code === 'ENOSPC' || code === 'EDQUOT') return 'full';
  if (code === 'EBUSY' || code === 'ETXTBSY') return 'busy';
  // Windows answers these two while another program holds the file.
  if (code === 'EPERM' || code === 'EACCES') return process.platform === 'win32' ? 'busy' : 'denied';
  if (code === 'ENOENT') return 'missing';
  return code in reasons ? 'denied' : 'other';
}

const reasons: Readonly<Record<string, string>> = {
  EACCES: 'permission is denied',
  EPERM: 'the system does not permit it',
  EROFS: 'the file system is read-only',
  ENOTDIR: 'a file stands where a folder is needed',
  EEXIST: 'a file stands where a folder is needed',
  EISDIR: 'a folder of this name stands in the way',
  ENOTEMPTY: 'a folder of this name stands in the way',
  ENAMETOOLONG: 'the path is too long for this system',
  ELOOP: 'its links lead round in a circle',
  ENOENT: 'its folder is gone',
  EBUSY: 'another program holds it open',
  ETXTBSY: 'another program holds it open',
  ENOSPC: 'the disk is full',
  EDQUOT: 'the quota is used up',
};

function codeOf(error: unknown): string | undefined {
  const code = (error as { code?: unknown }).code;
  return typeof code === 'string' ? code : undefined;
}
