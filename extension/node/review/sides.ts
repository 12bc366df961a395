import { Refusal } from '../../../core/problem.ts';
import type { PairSide } from '../../../core/review/want.ts';
import type { Versions } from '../git/versions.ts';
import type { ReviewVersion } from '../workers/review-job.ts';
import type { ReviewEntry } from './list.ts';

/** A file that a page is given: moving more takes many seconds. */
const PAGE_BYTES = 256 * 1024 * 1024;

export interface EntrySides {
  readonly before: PairSide;
  readonly after: PairSide;
}

/** Both versions of an entry with their bytes, or why one cannot be had. */
export async function sidesOf({ before, after, path, oldPath }: ReviewEntry, versions: Versions): Promise<EntrySides> {
  return { before: await sideOf(before, oldPath, versions), after: await sideOf(after, path, versions) };
}

/** The sides of entries, one after the other, read while they fit into `limit` bytes together; from there on unread, and said to be
 *  too large. */
export async function sidesWithin(
  entries: readonly ReviewEntry[],
  versions: Versions,
  limit: number,
): Promise<readonly EntrySides[]> {
  const sides: EntrySides[] = [];
  let bytes = 0;
  for (const entry of entries) {
    const each = bytes > limit ? leftOut(entry, bytes, limit) : await sidesOf(entry, versions);
    bytes += sizeOf(each.before) + sizeOf(each.after);
    sides.push(each);
  }
  return sides;
}

/** One version with its bytes in a buffer of their own, to be posted to a page. */
async function sideOf(version: ReviewVersion | null, path: string, versions: Versions): Promise<PairSide> {
  if (version === null) return { kind: 'none' };
  const { file, treatment } = version;
  try {
    if (treatment === null) throw new Refusal({ code: 'settings-broken', severity: 'error', values: {} });
    const bytes = await versions.content(file, PAGE_BYTES);
    return { kind: 'file', path, treatment, bytes: new Uint8Array(bytes).buffer };
  } catch (error) {
    if (error instanceof Refusal) return { kind: 'problem', problem: error.problem };
    throw error;
  }
}

function leftOut({ before, after }: ReviewEntry, bytes: number, limit: number): EntrySides {
  const side = (version: ReviewVersion | null): PairSide =>
    version === null
      ? { kind: 'none' }
      : { kind: 'problem', problem: { code: 'side-too-large', severity: 'error', values: { bytes, limit } } };
  return { before: side(before), after: side(after) };
}

function sizeOf(side: PairSide): number {
  return side.kind === 'file' ? side.bytes.byteLength : 0;
}
