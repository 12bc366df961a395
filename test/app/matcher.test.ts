import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { problemLine } from '../../core/line.ts';
import type { Problem } from '../../core/problem.ts';
import { top } from '../house/tree.ts';

const { contributes } = JSON.parse(readFileSync(join(top, 'package.json'), 'utf8'));
const [pattern] = contributes.problemPatterns;

test.each<[string, Problem]>([
  ['a place', { code: 'out-of-range', severity: 'error', values: {}, path: 'art/sizeproof.json', line: 3, column: 17 }],
  ['a path alone', { code: 'stale', severity: 'warning', values: {}, path: 'art/a: b (1).png' }],
  ['a drive', { code: 'disk-full', severity: 'error', values: {}, path: 'C:/art/leaf.png' }],
])('the problem matcher reads a line with %s', (_, problem) => {
  const found = new RegExp(pattern.regexp).exec(problemLine(problem, (path) => path));
  const read = Object.fromEntries(
    ['file', 'line', 'column', 'severity', 'code'].map((name) => [name, found?.[pattern[name]]]),
  );
  const { code, severity, path, line = 1, column = 1 } = problem;
  expect(read).toEqual({ file: path, line: String(line), column: String(column), severity, code });
});
