import { existsSync } from 'node:fs';
import { expect, test } from 'vitest';
import { roomCycles, wrongArrows } from './arrows.ts';
import { importsOf } from './imports.ts';
import { readSources, type Source, top } from './tree.ts';

const sources = readSources(...['core', 'extension', 'webview'].filter((room) => existsSync(`${top}/${room}`)));
const imports = sources.flatMap(importsOf);

test('every import follows the plan', () => {
  expect(imports.length).toBeGreaterThan(0);
  expect(wrongArrows(imports)).toEqual([]);
});

test('the rooms of core load each other in no ring', () => {
  expect(roomCycles(imports)).toEqual([]);
});

const made = (path: string, text: string): Source => ({ path, text });

test.each([
  ['core/kernel/bad.ts', "import { readFileSync } from 'node:fs';"],
  ['core/kernel/bad.ts', "import type { Uri } from 'vscode';"],
  ['core/kernel/bad.ts', "export * from '../../extension/node/files.ts';"],
  ['core/kernel/bad.ts', "import type { Ask } from '../protocol.ts';"],
  ['core/kernel/bad.ts', "const late = await import('../../test/house/tree.ts');"],
  ['core/kernel/bad.ts', "type Late = import('pngjs').PNG;"],
  ['core/kernel/bad.ts', "import 'pngjs';"],
  ['extension/node/bad.ts', "import { parse } from '../cli/arguments.ts';"],
  ['extension/node/bad.ts', "import * as vscode from 'vscode';"],
  ['extension/cli/bad.ts', "import { show } from '../app/show.ts';"],
  ['extension/app/bad.ts', "import { createHash } from 'node:crypto';"],
  ['webview/page/bad.ts', "import { work } from '../worker/work.ts';"],
  ['attic/bad.ts', "import { words } from '../core/words.ts';"],
])('%s with `%s` is an arrow against the plan', (path, text) => {
  expect(wrongArrows(importsOf(made(path, text)))).toHaveLength(1);
});

test('ktx-parse in a second file is against the plan', () => {
  const importing = ['core/codec/a.ts', 'core/codec/b.ts'].map((path) =>
    made(path, "import { write } from 'ktx-parse';"),
  );
  expect(wrongArrows(importing.slice(0, 1).flatMap(importsOf))).toEqual([]);
  expect(wrongArrows(importing.flatMap(importsOf))).toHaveLength(1);
});

test('a ring of rooms is found once, and types alone make none', () => {
  const there = made('core/a/a.ts', "import { b } from '../b/b.ts';");
  const back = made('core/b/b.ts', "import { a } from '../a/a.ts';");
  const typeBack = made('core/b/b.ts', "import type { A } from '../a/a.ts';");
  expect(roomCycles([there, back].flatMap(importsOf))).toEqual(['core/a -> core/b -> core/a']);
  expect(roomCycles([there, typeBack].flatMap(importsOf))).toEqual([]);
});
