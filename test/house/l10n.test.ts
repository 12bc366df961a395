import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import ts from 'typescript';
import { describe, expect, test } from 'vitest';
import { textBundle, textsIn } from './texts.ts';
import { placeOf, readSources, type Source, top, walkSyntax } from './tree.ts';

const sources = readSources('extension/app', 'webview/page');

test('every text that the app and the page say is found for translators', () => {
  const said = sources.flatMap(sayings);
  expect(said.length).toBeGreaterThan(20);
  expect(said.filter((each) => each.text === null).map((each) => each.place)).toEqual([]);
  const found = new Set(sources.flatMap((each) => textsIn(each.text)));
  expect(said.filter((each) => !found.has(each.text as string))).toEqual([]);
});

test('a text with quotes and line breaks in its call is found', () => {
  const source = `vscode.l10n.t('It\\'s'); vscode.l10n.t(\n  "it's",\n  { a });`;
  expect(textsIn(source)).toEqual(["It's", "it's"]);
  expect(textBundle(['b'])).toMatchObject({ b: 'b' });
});

describe('package.nls.json', () => {
  const manifest = readFileSync(join(top, 'package.json'), 'utf8');
  const texts: Readonly<Record<string, string>> = JSON.parse(readFileSync(join(top, 'package.nls.json'), 'utf8'));
  const used = [...manifest.matchAll(/%([\w.]+)%/g)].map(([, name]) => name);

  test('has each text that package.json names, and no other', () => {
    expect(used.filter((name) => texts[name] === undefined)).toEqual([]);
    expect(Object.keys(texts).filter((name) => !used.includes(name))).toEqual([]);
  });
});

/** Texts of tables whose every template is in the bundle. */
const TEMPLATES: readonly string[] = ['words[code]', 'verdicts[kind]', 'harmWords[name]'];

/** The first argument of each call of `l10n.t` or `t`; null where it is neither a literal nor a template of a table. */
function sayings(source: Source): { readonly place: string; readonly text: string | null }[] {
  const found: { place: string; text: string | null }[] = [];
  walkSyntax(source, (node) => {
    if (!ts.isCallExpression(node) || !/^(vscode\.l10n\.)?t$/.test(node.expression.getText())) return;
    const [first] = node.arguments;
    if (TEMPLATES.includes(first.getText())) return;
    found.push({ place: placeOf(source, node), text: ts.isStringLiteralLike(first) ? first.text : null });
  });
  return found;
}
