// One English template per problem code, grouped by the exit code it leads to. `{name}` is filled from the problem's
// values. The last sentence says what to do. Doors put `path:line:column: error code: ` in front.

/** Exit 1: findings over their limit, or outputs that are not what their manifest says. */
const findings = {
  stale: 'The {what} moved since this was built. Build again.',
} as const;

/** Exit 2: usage and settings. */
const usage = {
  'nothing-selected': 'No texture matches {selector}. Check the path, the extensions and the exclude globs.',
} as const;

/** Exit 3: a source that could not be read. */
const sources = {
  'not-downloaded':
    'This is a Git LFS pointer, not the image: {bytes} bytes are expected. Fetch it with `git lfs pull` and build again.',
} as const;

/** Exit 4: outputs that could not be written. */
const outputs = {
  'output-busy': 'Another program holds this file open; it could not be replaced within {seconds} s. Close it and build again.',
} as const;

export const words = { ...findings, ...usage, ...sources, ...outputs } as const;

export type Code = keyof typeof words;

/** The values that a code's template names. */
export type Values<C extends Code> = { readonly [Name in Placeholder<(typeof words)[C]>]: string | number };

type Placeholder<Text extends string> = Text extends `${string}{${infer Name}}${infer Rest}`
  ? Name | Placeholder<Rest>
  : never;

export function exitOf(code: Code): 1 | 2 | 3 | 4 {
  if (code in findings) return 1;
  if (code in usage) return 2;
  if (code in sources) return 3;
  return 4;
}
