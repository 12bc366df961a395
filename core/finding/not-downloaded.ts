import { readPointer } from '../codec/pointer.ts';
import { finding, type Problem } from '../problem.ts';

/** Whether a file's head is a Git LFS pointer where an image should be. A pointer is shorter than 1024 bytes. */
export function notDownloaded(head: Uint8Array): Problem | null {
  const pointer = readPointer(head);
  return pointer === null ? null : finding('not-downloaded', { bytes: pointer.bytes });
}

/** Bytes of a file that tell a pointer from an image: a longer file is none. */
export const POINTER_BYTES = 1024;
