import ts from 'typescript';
import { expect, test } from 'vitest';

import { words } from '../../core/words.ts';
import { placeOf, readSources, type Source, walkSyntax } from './tree.ts';

const sources = readSources('core', 'extension', 'webview').filter((each) => each.path !== 'core/words.ts');

test.each(Object.keys(words))('%s is said somewhere', (code) => {
  const users = sources.filter((each) => literalsOf(each).has(code)).map((each) => each.path);
  expect(users).not.toEqual([]);
});

test('every code that is said has words', () => {
  expect(sources.flatMap(wordless)).toEqual([]);
});

test('a code without words is noticed', () => {
  const made = (text: string): Source => ({ path: 'core/made.ts', text });
  expect(wordless(made("refuse('no-such-code', {});"))).toEqual(['core/made.ts:1 no-such-code']);
  expect(wordless(made("warning('no-such-code', {});"))).toEqual(['core/made.ts:1 no-such-code']);
  expect(wordless(made("const p = { code: 'no-such-code', severity: 'error' };"))).toEqual([
    'core/made.ts:1 no-such-code',
  ]);
  expect(wordless(made("refuse('stale', { what: 'source' });"))).toEqual([]);
});

test.each(Object.entries(words))('%s is whole sentences with named numbers', (code, template) => {
  expect(code).toMatch(/^[a-z0-9]+(-[a-z0-9]+)*$/);
  expect(template).toMatch(/^([A-Z{`]|--)/);
  expect(template).toMatch(/\.$/);
  expect(template).not.toMatch(/undefined|null|NaN|\[object|\n|\s$| {2}/);
  expect(template.replace(/\{[a-zA-Z]\w*\}/g, '')).not.toMatch(/[{}]/);
});

/** Problems are made by `refuse(code`, `warning(code` and object literals `{ code: ..., severity: ... }`. */
function wordless(source: Source): string[] {
  const found: string[] = [];
  const check = (node: ts.Node | undefined): void => {
    if (node === undefined || !ts.isStringLiteralLike(node) || node.text in words) return;
    found.push(`${placeOf(source, node)} ${node.text}`);
  };
  walkSyntax(source, (node) => {
    if (ts.isCallExpression(node) && /^(refuse|warning)$/.test(node.expression.getText())) check(node.arguments[0]);
    if (!ts.isObjectLiteralExpression(node)) return;
    const code = node.properties.find((each) => each.name?.getText() === 'code');
    const severity = node.properties.some((each) => each.name?.getText() === 'severity');
    if (severity && code !== undefined && ts.isPropertyAssignment(code)) check(code.initializer);
  });
  return found;
}

const literals = new Map<string, Set<string>>();

function literalsOf(source: Source): Set<string> {
  const known = literals.get(source.path);
  if (known !== undefined) return known;
  const found = new Set<string>();
  walkSyntax(source, (node) => {
    if (ts.isStringLiteralLike(node)) found.add(node.text);
  });
  literals.set(source.path, found);
  return found;
}
