import { type Problem, say } from './problem.ts';

/** `path:line:column: severity code: words`, on one line whatever the names in it hold. */
export function problemLine(problem: Problem, nameOf: (path: string) => string): string {
  const path = problem.path === undefined ? '.' : nameOf(problem.path);
  const { line = 1, column = 1, severity, code } = problem;
  return oneLine(`${path}:${line}:${column}: ${severity} ${code}: ${say(problem)}`);
}

/** A text without characters that would end its line or command a terminal. */
export function oneLine(text: string): string {
  return text.replace(/\p{Cc}|\u2028|\u2029/gu, (character) => {
    return `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`;
  });
}
