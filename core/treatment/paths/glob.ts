import picomatch from 'picomatch/posix.js';
import type { Fault } from '../../words.ts';

/** Whether a root-relative path matches one of the globs. Case-sensitive; `*` and `**` pass over names that start with a
 *  dot; the path is compared in NFC. The globs must have been checked. */
export function globMatcher(globs: readonly string[]): (path: string) => boolean {
  const matchers = globs.map((glob) => picomatch(glob.normalize('NFC'), options));
  return (path) => matchers.some((matches) => matches(path));
}

/** Whether a text uses any of the characters that make a glob. */
export function isGlob(text: string): boolean {
  return /[*?[\]{}]/.test(text);
}

/** What is wrong with a glob; null where nothing is. */
export function globFault(glob: string): Fault | null {
  const reason = reasonAgainst(glob);
  return reason === null ? null : { code: 'bad-glob', values: { glob, reason } };
}

const options = { dot: false, strictBrackets: true, noextglob: true, nonegate: true } as const;

// A run of stars is one loop of the regular expression that a glob becomes, and matching may take the path's length to the
// power of the loops. Three a name and six in all keep that far from a standstill; groups could nest loops, so there are none.
const MAX_RUNS = 6;
const MAX_RUNS_IN_NAME = 3;

function reasonAgainst(glob: string): string | null {
  if (glob === '') return 'it is empty';
  if (glob.length > 1024) return 'it is longer than 1024 characters';
  if (glob.startsWith('!')) return 'a leading ! is not offered';
  if (/[()]/.test(glob)) return 'groups in parentheses are not offered; ? stands for a parenthesis in a name';
  if (/[\]}]\+/.test(glob)) return 'a + after a bracket is not offered';
  if (/\[!/.test(glob)) return 'a class is negated by [^';
  if (/\{[^{}]*\.\./.test(glob)) return 'ranges in braces are not offered';
  if (runs(glob) > MAX_RUNS) return `it has more than ${MAX_RUNS} runs of *`;
  if (glob.split('/').some((name) => runs(name) > MAX_RUNS_IN_NAME))
    return `a name in it has more than ${MAX_RUNS_IN_NAME} runs of *`;
  if (!compiles(glob)) return 'a bracket or brace has no partner';
  return null;
}

function runs(glob: string): number {
  return glob.match(/\*+/g)?.length ?? 0;
}

function compiles(glob: string): boolean {
  try {
    picomatch.makeRe(glob, options);
    return true;
  } catch (error) {
    if (error instanceof SyntaxError) return false;
    throw error;
  }
}
