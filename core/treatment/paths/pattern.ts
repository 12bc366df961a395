/** Names of the `{placeholders}` in a pattern, in order; a stray brace counts as a nameless one. */
export function placeholders(pattern: string): readonly string[] {
  return Array.from(pattern.matchAll(/\{([^{}]*)\}|[{}]/g), (found) => found[1] ?? '');
}

/** The pattern with its placeholders filled in. One with nothing to say goes, with the `.`, `-` or `_` before it; a folder
 *  with nothing to say goes too. */
export function fillPattern(pattern: string, values: Readonly<Record<string, string>>): string {
  const filled = pattern.replace(/([._-]?)\{(\w+)\}/g, (_, separator: string, name: string) =>
    values[name] ? `${separator}${values[name]}` : '',
  );
  return filled
    .split('/')
    .filter((segment) => segment !== '' && segment !== '.')
    .join('/');
}
