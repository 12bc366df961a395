import { refuse } from '../problem.ts';

/** What a Git LFS pointer says about the file it stands for. */
export interface LfsPointer {
  /** SHA-256 of the file, lower-case hexadecimal. */
  readonly oid: string;
  readonly bytes: number;
}

/** Recognises a pointer: text below 1024 bytes of `key value` lines, `version` first, with `oid sha256:` and `size` among
 *  them; other keys are allowed, and so are CRLF line ends, which a checkout may have made. Null for anything else.
 *  [GitLFS, "Specification", "The Pointer"] */
export function readPointer(bytes: Uint8Array): LfsPointer | null {
  if (bytes.length >= POINTER_LIMIT_BYTES || bytes[0] !== V) return null;
  // The keys are ASCII; what else there is only has to survive.
  const [version, ...lines] = String.fromCharCode(...bytes).split(/\r?\n/);
  if (!VERSION.test(version)) return null;
  const oid = findValue(lines, /^oid sha256:([0-9a-f]{64})$/);
  const size = findValue(lines, /^size ([0-9]{1,15})$/);
  return oid === null || size === null ? null : { oid, bytes: Number(size) };
}

/** Refuses a pointer where an image should be. */
export function refusePointer(bytes: Uint8Array): void {
  const pointer = readPointer(bytes);
  if (pointer !== null) refuse('not-downloaded', { bytes: pointer.bytes });
}

const POINTER_LIMIT_BYTES = 1024;

/** The letter `v`. */
const V = 0x76;

/** The present name of the specification and the one before its release. */
const VERSION = /^version https:\/\/(git-lfs|hawser)\.github\.com\/spec\/v[0-9]+$/;

function findValue(lines: readonly string[], pattern: RegExp): string | null {
  for (const line of lines) {
    const match = pattern.exec(line);
    if (match !== null) return match[1];
  }
  return null;
}
