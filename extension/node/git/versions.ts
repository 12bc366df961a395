import { refuse } from '../../../core/problem.ts';
import type { Disk } from '../files/disk.ts';
import type { FileRef } from './changes.ts';
import { resolveLfs } from './lfs.ts';
import { type Objects, openObjects } from './objects.ts';

/** Reads versions of files wherever they are. */
export interface Versions {
  /** The file as it is stored: a Git LFS pointer is that pointer. Throws Refusal. */
  stored(ref: FileRef, limitBytes: number): Promise<Uint8Array>;
  /** The file that people see: a Git LFS pointer is followed to the local store. Throws Refusal. */
  content(ref: FileRef, limitBytes: number): Promise<Uint8Array>;
  /** Learns the sizes of many at once, so that each need not be asked for. */
  expect(refs: readonly FileRef[]): Promise<void>;
  /** Bytes of the file as it is stored. Throws Refusal. */
  size(ref: FileRef): Promise<number>;
  close(): void;
}

/** Keeps a Git open for each repository that is asked. */
export function openVersions(disk: Disk): Versions {
  const opened = new Map<string, Objects>();
  const objectsOf = (repository: string): Objects => {
    const objects = opened.get(repository) ?? openObjects(repository);
    opened.set(repository, objects);
    return objects;
  };

  async function size(ref: FileRef): Promise<number> {
    switch (ref.kind) {
      case 'object':
        return objectsOf(ref.repository).size(ref.id);
      case 'file': {
        const stat = await disk.stat(ref.path);
        return stat === null ? refuse('source-unreadable', { reason: 'it cannot be opened' }) : stat.size;
      }
      case 'link':
        return refuse('not-a-file', { kind: 'a link' });
      case 'submodule':
        return refuse('not-a-file', { kind: 'a submodule' });
      case 'unmerged':
        return refuse('git-unmerged', {});
    }
  }

  async function stored(ref: FileRef, limitBytes: number): Promise<Uint8Array> {
    const bytes = await size(ref);
    if (bytes > limitBytes) refuse('side-too-large', { bytes, limit: limitBytes });
    if (ref.kind === 'object') return objectsOf(ref.repository).read(ref.id, limitBytes);
    const content = ref.kind === 'file' ? await disk.read(ref.path) : null;
    return content ?? refuse('source-unreadable', { reason: 'it cannot be opened' });
  }

  return {
    async expect(refs) {
      const ids = new Map<string, string[]>();
      for (const ref of refs) {
        if (ref.kind !== 'object') continue;
        const own = ids.get(ref.repository) ?? [];
        own.push(ref.id);
        ids.set(ref.repository, own);
      }
      for (const [repository, own] of ids) await objectsOf(repository).expect(own);
    },
    size,
    stored,
    async content(ref, limitBytes) {
      const content = await stored(ref, limitBytes);
      return 'store' in ref ? resolveLfs(disk, ref.store, content, limitBytes) : content;
    },
    close() {
      for (const objects of opened.values()) objects.close();
      opened.clear();
    },
  };
}
