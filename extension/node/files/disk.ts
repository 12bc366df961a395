import type { FileTree } from '../../../core/port.ts';

/** What tells a file that may have changed from one that has not. */
export interface FileStat {
  /** Bytes. */
  readonly size: number;
  /** Milliseconds since 1970, with what fraction the file system keeps. */
  readonly mtimeMs: number;
  /** 0 where the file system has none. */
  readonly inode: number;
}

/** A stat as numbers that can be compared one by one. */
export function statNumbers({ size, mtimeMs, inode }: FileStat): [number, number, number] {
  return [size, mtimeMs, inode];
}

/** What tells a folder in which an entry came, went or was renamed from one in which none did. */
export interface FolderStamp {
  /** Milliseconds since 1970, as of a file. */
  readonly modifiedMs: number;
  /** When anything about the folder changed; unlike `modifiedMs`, no program sets it. */
  readonly changedMs: number;
  readonly inode: number;
}

/** `busy`: open elsewhere, worth trying again. `full`: no space or quota left. `denied`: permissions, a read-only system, or
 *  something else of that name. `missing`: a folder on the way is gone. */
export type DiskFault = 'busy' | 'full' | 'denied' | 'missing' | 'other';

/** Thrown by what writes. `reason` is in words, without the path. */
export class DiskError extends Error {
  readonly fault: DiskFault;
  readonly path: string;
  readonly reason: string;

  constructor(fault: DiskFault, path: string, reason: string) {
    super(`${path}: ${reason}`);
    this.name = 'DiskError';
    this.fault = fault;
    this.path = path;
    this.reason = reason;
  }
}

/** The one door to the file system: everything that is read or written passes here, so a test can count it, or end the process
 *  at any call. Paths are absolute and "/"-separated. Reading never throws; writing throws DiskError. */
export interface Disk extends FileTree {
  /** `null` for what is not a file. Links are followed. */
  stat(path: string): Promise<FileStat | null>;
  /** `null` for what is no folder, and where the system does not tell. */
  folderStamp(path: string): Promise<FolderStamp | null>;
  /** Whether all of these are files whose stats are the numbers that `statNumbers` gives, three a file in order. */
  areStill(paths: readonly string[], numbers: ArrayLike<number>): Promise<boolean>;
  /** Makes a new file of these bytes. An existing file is refused, and a failed one leaves nothing behind. */
  write(path: string, bytes: Uint8Array): Promise<void>;
  /** The same of a file that comes in pieces, each written before the next is asked for. What the pieces throw is thrown on. */
  writePieces(path: string, pieces: AsyncIterable<Uint8Array>): Promise<void>;
  /** Makes what was written last through a power cut; answers the files' stats, which they keep when they are renamed. Many at a
   *  time: a system that journals takes hardly longer for twenty than for one. */
  flush(paths: readonly string[]): Promise<FileStat[]>;
  /** Puts a file in the place of another, whole, at once. */
  rename(from: string, to: string): Promise<void>;
  /** Removes a file; a missing one is fine. */
  remove(path: string): Promise<void>;
  /** Makes a folder and those above it; answers the topmost that was new, or `null`. */
  makeFolder(path: string): Promise<string | null>;
  /** Removes a folder if it is empty, else leaves it. */
  removeEmptyFolder(path: string): Promise<void>;
  /** Makes renames in a folder last through a power cut, where the system can. */
  flushFolder(path: string): Promise<void>;
}
