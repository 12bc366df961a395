import { createHash } from 'node:crypto';
import { type LfsPointer, readPointer } from '../../../core/codec/pointer.ts';
import { refuse } from '../../../core/problem.ts';
import { joinPath } from '../../../core/treatment/paths/path.ts';
import type { Disk } from '../files/disk.ts';

/** The file that a Git LFS pointer stands for, from the store of its repository; its SHA-256 is checked, and nothing is
 *  downloaded. Throws Refusal where it is not there, damaged, or larger than `limitBytes`.  [GitLFS, "Specification"] */
export async function readLfs(disk: Disk, store: string, pointer: LfsPointer, limitBytes: number): Promise<Uint8Array> {
  const { oid, bytes } = pointer;
  const path = joinPath(store, `objects/${oid.slice(0, 2)}/${oid.slice(2, 4)}/${oid}`);
  const stat = await disk.stat(path);
  if (stat === null) return refuse('lfs-missing', { bytes });
  if (stat.size > limitBytes) return refuse('side-too-large', { bytes: stat.size, limit: limitBytes });
  const content = await disk.read(path);
  if (content === null) return refuse('lfs-missing', { bytes });
  const found = createHash('sha256').update(content).digest('hex');
  if (found !== oid || content.length !== bytes) return refuse('lfs-damaged', { found, expected: oid });
  return content;
}

/** The bytes, or the file that they point to. */
export async function resolveLfs(
  disk: Disk,
  store: string,
  content: Uint8Array,
  limitBytes: number,
): Promise<Uint8Array> {
  const pointer = readPointer(content);
  return pointer === null ? content : readLfs(disk, store, pointer, limitBytes);
}
