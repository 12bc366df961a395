import { spawnSync } from 'node:child_process';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import ts from 'typescript';
import { expect, test } from 'vitest';

import { placeOf, type Source, top, walkSyntax } from './tree.ts';

const starter: Source = { path: 'run.mjs', text: readFileSync(join(top, 'run.mjs'), 'utf8') };

test('an old Node can parse the starter', () => {
  expect(newSyntax(starter)).toEqual([]);
});

test.each([
  "import { join } from 'node:path';",
  'const x = a?.b;',
  'const x = a?.();',
  'const x = a ?? b;',
  'a ||= b;',
  'try { a(); } catch { b(); }',
  'const x = 1n;',
  'const x = 1_000;',
  'class A { #b = 1; }',
  'await a();',
])('`%s` is too new for it', (text) => {
  expect(newSyntax({ path: 'made.mjs', text })).toHaveLength(1);
});

test('an old Node is told so, in a sentence, before anything is installed', () => {
  const aged = "Object.defineProperty(process, 'versions', { value: { ...process.versions, node: '18.20.4' } });";
  const { status, stdout, stderr } = start(['--import', `data:text/javascript,${encodeURIComponent(aged)}`], 'start');
  expect(stderr).toMatch(/^Sizeproof needs Node 20 or newer, and this is Node 18\.20\.4\. .*\.\n$/);
  expect(stdout).toBe('');
  expect(status).toBe(1);
});

test('a command that does not exist is answered with those that do', () => {
  const { status, stderr } = start([], 'polish');
  expect(stderr).toBe(
    'Expected one of start, test, build, types, lint, mutate, paint, schema, kernels, pack, page, host, bench, desktop, but there is no command "polish".\n',
  );
  expect(status).toBe(1);
});

function start(nodeOptions: readonly string[], command: string) {
  return spawnSync(process.execPath, [...nodeOptions, join(top, 'run.mjs'), command], { encoding: 'utf8' });
}

/** Syntax that came after ES2018, and imports, which run before the version check. `import()` and `import.meta` may stay:
 *  every Node that takes a module takes them. */
function newSyntax(source: Source): string[] {
  const found: string[] = [];
  walkSyntax(source, (node) => {
    if (isNew(node)) found.push(`${placeOf(source, node)} ${node.getText().split('\n')[0]}`);
  });
  return found;
}

function isNew(node: ts.Node): boolean {
  switch (node.kind) {
    case ts.SyntaxKind.ImportDeclaration:
    case ts.SyntaxKind.QuestionDotToken:
    case ts.SyntaxKind.QuestionQuestionToken:
    case ts.SyntaxKind.BarBarEqualsToken:
    case ts.SyntaxKind.AmpersandAmpersandEqualsToken:
    case ts.SyntaxKind.QuestionQuestionEqualsToken:
    case ts.SyntaxKind.BigIntLiteral:
    case ts.SyntaxKind.PropertyDeclaration:
      return true;
    case ts.SyntaxKind.NumericLiteral:
      return node.getText().includes('_');
    case ts.SyntaxKind.CatchClause:
      return (node as ts.CatchClause).variableDeclaration === undefined;
    case ts.SyntaxKind.AwaitExpression:
      return ts.findAncestor(node, ts.isFunctionLike) === undefined;
    default:
      return false;
  }
}
