import { createHash } from 'node:crypto';
import { PEEK_BYTES } from '../../../core/codec/peek.ts';
import { readPointer } from '../../../core/codec/pointer.ts';
import { POINTER_BYTES } from '../../../core/finding/not-downloaded.ts';
import { type Cancel, Cancelled } from '../../../core/port.ts';
import { Refusal } from '../../../core/problem.ts';
import { type Glance, type GlanceSide, glanceAt } from '../../../core/review/glance.ts';
import type { Disk } from '../files/disk.ts';
import type { FileRef } from '../git/changes.ts';
import { readLfs } from '../git/lfs.ts';
import type { Versions } from '../git/versions.ts';
import type { ReviewVersion } from '../workers/review-job.ts';
import type { ReviewEntry } from './list.ts';

export interface GlancedEntry {
  readonly entry: ReviewEntry;
  readonly glance: Glance;
  /** Equal for the same two contents, to remember a look by. */
  readonly content: string;
}

/** Judges entries by their ids and headers, in their order, each as soon as it is known; nothing is decoded, and one file is held at
 *  a time. Throws Cancelled. */
export async function glanceEntries(
  entries: readonly ReviewEntry[],
  { disk, versions }: { readonly disk: Disk; readonly versions: Versions },
  cancel: Cancel,
  done: (index: number, glanced: GlancedEntry) => void,
): Promise<void> {
  await versions.expect(entries.flatMap(({ before, after }) => [before, after].flatMap((each) => each?.file ?? [])));
  for (const [index, entry] of entries.entries()) {
    if (cancel.cancelled) throw new Cancelled();
    const sizes = await Promise.all([entry.before, entry.after].map((each) => each && sizeOf(each.file, versions)));
    // Files of other lengths differ whatever they hold; a pointer may stand for the file on the other side.
    const whole = sizes[0] === sizes[1] || sizes.some((bytes) => bytes !== null && bytes < POINTER_BYTES);
    const heads = sizes.map((bytes) => ({ bytes, whole }));
    const sides = { disk, versions, hash: hashOf(entry) };
    const before = await sideOf(entry.before, heads[0], sides);
    const after = await sideOf(entry.after, heads[1], sides);
    const glance = glanceAt(entry.path, before, after);
    done(index, { entry, glance, content: `${before?.id ?? ''} ${after?.id ?? ''}` });
  }
}

interface Sides {
  readonly disk: Disk;
  readonly versions: Versions;
  readonly hash: 'sha1' | 'sha256';
}

/** Larger objects are not read for their header: Git would have to inflate all of them. */
const MOST_READ = 16 * 1024 * 1024;

async function sizeOf(file: FileRef, versions: Versions): Promise<number | null> {
  try {
    return await versions.size(file);
  } catch (error) {
    if (error instanceof Refusal) return null;
    throw error;
  }
}

async function sideOf(
  version: ReviewVersion | null,
  { bytes, whole }: { readonly bytes: number | null; readonly whole: boolean },
  sides: Sides,
): Promise<GlanceSide | null> {
  if (version === null) return null;
  const { file, treatment } = version;
  const { disk, versions, hash } = sides;
  const known = { id: idOf(file), fileBytes: bytes, head: null, problem: null, treatment };
  try {
    if (file.kind === 'file' && (!whole || (bytes ?? 0) > MOST_READ)) {
      const head = await disk.readHead(file.path, PEEK_BYTES);
      if (head !== null) return await followed(known, file, head, sides);
    }
    if (file.kind === 'object' && bytes !== null && bytes > MOST_READ) return known;
    const stored = await versions.stored(file, MOST_READ);
    const id = file.kind === 'file' ? blobId(stored, hash) : known.id;
    return await followed({ ...known, id }, file, stored, sides);
  } catch (error) {
    if (error instanceof Refusal) return { ...known, problem: error.problem };
    throw error;
  }
}

/** The file that a Git LFS pointer stands for, where it is here; its SHA-256 is its id, so that it equals the file itself. */
async function followed(known: GlanceSide, file: FileRef, stored: Uint8Array, sides: Sides): Promise<GlanceSide> {
  const pointer = readPointer(stored);
  if (pointer === null || !('store' in file)) return { ...known, head: stored.subarray(0, PEEK_BYTES) };
  // Too large to hash for a glance; its pointer tells it from others.
  if (pointer.bytes > MOST_READ) return { ...known, fileBytes: pointer.bytes, id: `lfs ${pointer.oid}` };
  const content = await readLfs(sides.disk, file.store, pointer, MOST_READ);
  return {
    ...known,
    id: blobId(content, sides.hash),
    fileBytes: content.length,
    head: content.subarray(0, PEEK_BYTES),
  };
}

function idOf(file: FileRef): string {
  switch (file.kind) {
    case 'object':
      return file.id;
    case 'file':
      return `file ${file.path}`;
    case 'link':
    case 'submodule':
    case 'unmerged':
      return file.kind;
  }
}

/** The hash of the repository that an entry lies in: its ids are as long.  [Git, "hash-function-transition"] */
function hashOf({ before, after }: ReviewEntry): Sides['hash'] {
  const ids = [before, after].flatMap((each) => (each?.file.kind === 'object' ? [each.file.id] : []));
  return ids.some((id) => id.length === SHA256_DIGITS) ? 'sha256' : 'sha1';
}

const SHA256_DIGITS = 64;

/** The id that Git gives to a blob of these bytes. */
function blobId(bytes: Uint8Array, hash: Sides['hash']): string {
  return createHash(hash).update(`blob ${bytes.length}\0`).update(bytes).digest('hex');
}
