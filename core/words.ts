// One English template per problem code, grouped by the exit code it leads to. `{name}` is filled from the problem's
// values. The last sentence says what to do. Doors put `path:line:column: error code: ` in front.

/** Exit 1: findings over their limit, or outputs that are not what their manifest says. */
const findings = {
} as const;

/** Exit 2: usage and settings. */
const usage = {
} as const;

/** Exit 3: a source that could not be read. */
const sources = {
} as const;

/** Exit 4: outputs that could not be written. */
const outputs = {
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
