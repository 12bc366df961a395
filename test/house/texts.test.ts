import { expect, test } from 'vitest';

import { readTree } from './tree.ts';

const texts = readTree(
  '',
  /(\.(ts|mts|js|mjs|json|jsonc|md|txt|html|css|npmrc|gitignore|vscodeignore)|LICENSE|\.ci\/run)$/,
);

test.each(['package-lock.json', 'test/package-lock.json'])('%s names no place to download from', (path) => {
  const lock = texts.find((each) => each.path === path);
  expect(lock?.text).toContain('"lockfileVersion"');
  expect(lock?.text).toContain('"integrity"');
  expect(lock?.text).not.toContain('"resolved"');
  expect(registryWords(lock?.text ?? '')).toEqual([]);
});

test('no text names a package registry', () => {
  const found = texts.flatMap(({ path, text }) => registryWords(text).map((word) => `${path} ${word}`));
  expect(found).toEqual([]);
});

test('no text holds a path of somebody’s machine', () => {
  expect(texts.flatMap(({ path, text }) => machinePaths(text).map((found) => `${path} ${found}`))).toEqual([]);
});

test('a registry and a machine’s path are noticed', () => {
  const host = ['registry', 'example', 'org'].join('.');
  expect(registryWords(`https://${host}/a.tgz`)).not.toEqual([]);
  const folders = ['home', 'Users', 'root', 'work', 'tmp'].map((each) => `/${each}/someone`);
  for (const folder of [...folders, ['C:', 'Users', 'someone'].join('\\')]) {
    expect(machinePaths(`see ${folder}/notes`)).toHaveLength(1);
  }
  expect(machinePaths('core/home/a.ts and textures/root/b.png')).toEqual([]);
});

/** Hosts of package registries; the one that keeps the graphics standards is none. */
function registryWords(text: string): string[] {
  return text.match(/\bregistry\.(?!khronos\.org)[a-z][\w-]*\.[a-z]+|https?:\/\/(npm|packages)\.[^\s"']+/g) ?? [];
}

/** A folder that only some machines have, at the start of a path. Nobody is called by one letter: that is an example. */
function machinePaths(text: string): string[] {
  return text.match(/(?<![\w.)}\]/*-])\/(home|Users|root|work|tmp)\/\w{2,}|[A-Za-z]:\\+Users\\+\w{2,}/g) ?? [];
}
