import * as vscode from 'vscode';
import { oneLine } from '../../core/line.ts';
import type { Problem } from '../../core/problem.ts';
import { words } from '../../core/words.ts';

/** A problem in the user's language, without its place. */
export function sayProblem({ code, values }: Problem): string {
  return vscode.l10n.t(words[code], { ...values });
}

/** `path:line:column: severity code: words` on one line, as the problem matcher reads it. Code and severity stay English. */
export function sayProblemLine(problem: Problem, nameOf: (path: string) => string): string {
  const { path, line = 1, column = 1, severity, code } = problem;
  const name = path === undefined ? '.' : nameOf(path);
  return oneLine(`${name}:${line}:${column}: ${severity} ${code}: ${sayProblem(problem)}`);
}

/** Translations by English text, as the host loaded them. */
export function translations(): Record<string, string> {
  const entries = Object.entries(vscode.l10n.bundle ?? {}).filter(([, text]) => typeof text === 'string');
  return Object.fromEntries(entries);
}
