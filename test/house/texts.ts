import { harmWords } from '../../core/review/harms.ts';
import { verdicts } from '../../core/review/verdict.ts';
import { words } from '../../core/words.ts';

/** English texts that a source gives to `l10n.t`, or a page to its own `t`. They are literals, or the host could not know them. */
export function textsIn(source: string): string[] {
  const calls = source.matchAll(/(?<![\w.])(?:vscode\.l10n\.)?t\(\s*('(?:[^'\\]|\\.)*'|"(?:[^"\\]|\\.)*")/g);
  return [...calls].map(([, literal]) => literal.slice(1, -1).replace(/\\(.)/g, '$1'));
}

/** The bundle that translators start from: templates of problems, verdicts and harms, and the texts of sources, each its own translation. */
export function textBundle(texts: readonly string[]): Readonly<Record<string, string>> {
  const templates = [words, verdicts, harmWords].flatMap((table) => Object.values(table));
  const all = [...new Set([...texts, ...templates])].sort();
  return Object.fromEntries(all.map((text) => [text, text]));
}
