import { pathBelow } from '../../../core/treatment/paths/path.ts';
import type { Disk, FolderStamp } from '../files/disk.ts';
import { cacheFile, FRESH_MS, replaceFiles } from './stat-index.ts';
import { type FolderTraces, tracesIn } from './sweep.ts';

// What builds left in the folders of outputs when they were last listed, so that a folder in which no entry came or went since is
// not listed again. One JSON document a root, a hint like the stat index:
//
//   form      as this version writes it
//   folders   by the way from the root: [modified, changed, inode, manifests, folders]
//
// A folder with marks or temporary files in it is listed each time. What the files hold is no matter of their folder.

export interface FolderRecord {
  /** What lies in a folder now. */
  look(folder: string): Promise<FolderTraces>;
  /** Keeps what was listed, if anything was. Failing is harmless. */
  save(): Promise<void>;
}

type Entry = readonly [
  modified: number,
  changed: number,
  inode: number,
  manifests: readonly string[],
  folders: readonly string[],
];

const FORM = 'sizeproof folder record 1';

/** Opens the record of one root, kept in `cacheFolder`; `null` keeps none. `now` gives milliseconds since 1970. */
export async function openFolderRecord(
  disk: Disk,
  cacheFolder: string | null,
  root: string,
  now: () => number = Date.now,
): Promise<FolderRecord> {
  const file = cacheFile(cacheFolder, root, 'folders', 'json');
  const bytes = file === null ? null : await disk.read(file);
  const known = bytes === null ? new Map<string, Entry>() : parse(Buffer.from(bytes).toString());
  const used = new Map<string, Entry>();
  let changed = false;
  return { look, save };

  async function look(folder: string): Promise<FolderTraces> {
    const key = pathBelow(root, folder) ?? folder;
    // Stamped before it is listed: what comes in between is noticed by the next run.
    const listedMs = now();
    const stamp = file === null ? null : await disk.folderStamp(folder);
    const entry = known.get(key);
    if (stamp !== null && entry !== undefined && isSame(entry, stamp)) {
      used.set(key, entry);
      return { manifests: entry[3], folders: entry[4], interrupted: [], temporaries: [] };
    }
    const traces = await tracesIn(disk, folder);
    const { manifests, folders, interrupted, temporaries } = traces;
    // Another entry may come under the same time stamp.
    const isSettled = stamp !== null && listedMs - Math.max(stamp.modifiedMs, stamp.changedMs) >= FRESH_MS;
    if (stamp !== null && isSettled && interrupted.length + temporaries.length === 0) {
      used.set(key, [stamp.modifiedMs, stamp.changedMs, stamp.inode, manifests, folders]);
      changed = true;
    }
    return traces;
  }

  async function save(): Promise<void> {
    if (file === null || !changed) return;
    const folders = { ...Object.fromEntries(known), ...Object.fromEntries(used) };
    await replaceFiles(disk, [{ file, print: () => Buffer.from(JSON.stringify({ form: FORM, folders })) }]);
  }
}

function isSame([modified, changed, inode]: Entry, stamp: FolderStamp): boolean {
  return modified === stamp.modifiedMs && changed === stamp.changedMs && inode === stamp.inode;
}

/** What another version wrote, or a damaged text, is no record. */
function parse(text: string): Map<string, Entry> {
  try {
    const record = JSON.parse(text);
    if (record?.form !== FORM) return new Map();
    return new Map(Object.entries(record.folders as object).filter(([, entry]) => isEntry(entry)));
  } catch {
    return new Map();
  }
}

function isEntry(value: unknown): value is Entry {
  return Array.isArray(value) && value.length === 5 && value.slice(3).every(isNames);
}

function isNames(value: unknown): value is string[] {
  return Array.isArray(value) && value.every((each) => typeof each === 'string');
}
