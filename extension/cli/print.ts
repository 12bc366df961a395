import { relative as relativeNative } from 'node:path';
import { type Problem, say } from '../../core/problem.ts';
import { slashed } from '../node/node-disk.ts';

/** A path as people and scripts read it: relative to the working directory where there is a way, "/"-separated. */
export function nameFrom(folder: string): (path: string) => string {
  return (path) => slashed(relativeNative(folder, path)) || '.';
}

/** `path:line:column: severity code: words`, on one line whatever the names in it hold. */
export function problemLine(problem: Problem, nameOf: (path: string) => string): string {
  const path = problem.path === undefined ? '.' : nameOf(problem.path);
  const { line = 1, column = 1, severity, code } = problem;
  return oneLine(`${path}:${line}:${column}: ${severity} ${code}: ${say(problem)}`);
}

/** A problem in the JSON document. */
export function problemJson(problem: Problem, nameOf: (path: string) => string): object {
  const { code, severity, path, line = 1, column = 1, values } = problem;
  const named = path === undefined ? null : nameOf(path);
  return { code, severity, path: named, line, column, message: say(problem), values };
}

/** A text without characters that would end its line or command a terminal. */
export function oneLine(text: string): string {
  return text.replace(/\p{Cc}|\u2028|\u2029/gu, (character) => {
    return `\\u${character.charCodeAt(0).toString(16).padStart(4, '0')}`;
  });
}
