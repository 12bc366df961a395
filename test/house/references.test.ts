import { expect, test } from 'vitest';

import { readSources, readTree, type Source } from './tree.ts';

/** A block, or lines that follow each other. */
const COMMENT = /\/\*[\s\S]*?\*\/|(?<=^|\s)\/\/.*(\n\s*\/\/.*)*/g;

const [references] = readTree('core', /^core\/REFERENCES\.md$/);
const keys = keysOf(references.text);
const citations = readSources('core').flatMap(citationsOf);

test('every source that core cites is listed', () => {
  expect(citations.length).toBeGreaterThan(0);
  expect(citations.filter(({ key }) => !keys.includes(key)).map(({ place, key }) => `${place} ${key}`)).toEqual([]);
});

test('every source is listed once', () => {
  expect(keys.filter((key, at) => keys.indexOf(key) !== at)).toEqual([]);
});

test.each([
  ['// As drawn there.  [Nobody07]', ['Nobody07']],
  ['/** Two of them.\n *  [Nobody07, 4.1; Somebody, the table] */', ['Nobody07', 'Somebody']],
  ['/** [Standard9, as quoted in\n *  Other10, chapter 2] */', ['Standard9', 'Other10']],
  ['/** On [0, 1], weights [1 2 1], a `[Key]` in code and a [link](to/it). */', []],
  ["const row: [Float32Array, Float32Array] = read('[Nobody07]');", []],
])('%j cites %j', (text, cited) => {
  expect(citationsOf({ path: 'core/made.ts', text }).map(({ key }) => key)).toEqual(cited);
});

interface Citation {
  readonly key: string;
  readonly place: string;
}

/** Keys in brackets in comments: the first word of each part, and every word that ends with a year or number as keys do. */
function citationsOf({ path, text }: Source): Citation[] {
  return [...text.matchAll(COMMENT)].flatMap((comment) => {
    const words = comment[0].replace(/\n\s*(\*|\/\/)?/g, ' ').replace(/`[^`]*`/g, '');
    return [...words.matchAll(/\[([A-Z][^\][]+)\](?!\()/g)].flatMap(([, inside]) => {
      const first = inside.split(';').map((part) => part.trim().split(/[\s,:]/)[0]);
      const others = inside.match(/\b[A-Z][A-Za-z]{2,}\d+\b/g) ?? [];
      const line = text.slice(0, comment.index).split('\n').length;
      return [...new Set([...first, ...others])].map((key) => ({ key, place: `${path}:${line}` }));
    });
  });
}

/** Keys that the list explains: in bold or slanted at the start of an entry, several joined by "and". */
function keysOf(text: string): string[] {
  return [...text.matchAll(/^- (.*)/gm)].flatMap(([, entry]) => {
    const head = /^(\*{1,2}\w+\*{1,2})( and \*{1,2}\w+\*{1,2})*/.exec(entry)?.[0] ?? '';
    return head.match(/\w+/g)?.filter((word) => word !== 'and') ?? [];
  });
}
