import { relative as relativeNative } from 'node:path';
import { type Problem, say } from '../../core/problem.ts';
import { slashed } from '../node/files/node-disk.ts';

/** A path as people and scripts read it: relative to the working directory where there is a way, "/"-separated. */
export function nameFrom(folder: string): (path: string) => string {
  return (path) => slashed(relativeNative(folder, path)) || '.';
}

/** A problem in the JSON document. */
export function problemJson(problem: Problem, nameOf: (path: string) => string): object {
  const { code, severity, path, line = 1, column = 1, values } = problem;
  const named = path === undefined ? null : nameOf(path);
  return { code, severity, path: named, line, column, message: say(problem), values };
}
