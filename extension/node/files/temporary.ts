import { randomBytes } from 'node:crypto';
import { baseName, joinPath } from '../../../core/treatment/paths/path.ts';
import { parentOf } from './path.ts';

// Temporary files stand beside what they will replace: `.<name>.<process>-<random>.tmp`. The process id tells a sweeper whether
// the build that made one may still be running.

const pattern = /^\..+\.([0-9a-z]{1,8})-[0-9a-f]{12}\.tmp$/;

/** Bytes of UTF-8 that a temporary name keeps of the real one: file systems allow 255, and the rest takes 27. */
const KEPT_BYTES = 200;

/** A new name for the temporary form of `path`. */
export function temporaryFor(path: string): string {
  const name = clip(baseName(path));
  return joinPath(parentOf(path), `.${name}.${process.pid.toString(36)}-${randomBytes(6).toString('hex')}.tmp`);
}

/** The process that made a temporary file, by its name; `null` for any other name. */
export function temporaryOwner(name: string): number | null {
  const found = pattern.exec(name);
  return found === null ? null : Number.parseInt(found[1], 36);
}

/** The manifest that is laid down before anything is renamed: `.<name>.mips.json.next`. */
export function nextOf(manifestPath: string): string {
  return joinPath(parentOf(manifestPath), `.${baseName(manifestPath)}.next`);
}

/** The manifest that a `.next` file stands for; `null` for any other path. */
export function manifestOfNext(path: string): string | null {
  const found = /^\.(.+\.mips\.json)\.next$/.exec(baseName(path));
  return found === null ? null : joinPath(parentOf(path), found[1]);
}

function clip(name: string): string {
  const bytes = Buffer.from(name);
  // A character cut in two decodes to a replacement mark, which is a character like any other here.
  return bytes.length <= KEPT_BYTES ? name : bytes.subarray(0, KEPT_BYTES - 2).toString();
}
