import fc from 'fast-check';
import { parse } from 'jsonc-parser';
import { describe, expect, test } from 'vitest';
import { type Adopter, adoptSettings } from '../../core/treatment/edit/adopt.ts';
import { settingsTemplate } from '../../core/treatment/edit/template.ts';
import { exactGlob } from '../../core/treatment/paths/exact-glob.ts';
import { globFault, globMatcher } from '../../core/treatment/paths/glob.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { problemOf } from '../fixtures/refusal.ts';

const leaf: Adopter = { texture: 'foliage/leaf[1].png' };

function adopted(text: string, adopter: Adopter, settings: Readonly<Record<string, unknown>>): string {
  const { offset, length, text: by } = adoptSettings(text, 'sizeproof.json', adopter, settings);
  return text.slice(0, offset) + by + text.slice(offset + length);
}

function treatmentAfter(text: string, texture: string) {
  return resolveTreatment(parseSettings(text, 's').settings, texture).treatment;
}

describe('adopting for one file', () => {
  test.each([
    ['an empty object', '{}', '{ "treatments": [#] }'],
    ['an empty list', '{ "treatments": [] }', '{ "treatments": [#] }'],
    ['a null', '{ "treatments": null }', '{ "treatments": [#] }'],
    [
      'a list of one line with a comma at its end',
      '{"treatments":[{"match":"a/**"},]}',
      '{"treatments":[{"match":"a/**"}, #,]}',
    ],
    [
      'a comment behind the last treatment, which it keeps',
      '{\n  "treatments": [\n    { "match": "a/**" } // why\n    // more\n  ] // end\n}\n',
      '{\n  "treatments": [\n    { "match": "a/**" }, // why\n    #\n    // more\n  ] // end\n}\n',
    ],
    [
      'tabs and CRLF',
      '{\r\n\t"defaults": {}, // x\r\n}\r\n',
      '{\r\n\t"defaults": {}, // x\r\n\t"treatments": [#],\r\n}\r\n',
    ],
    ['a list that holds a line break alone', '{\n  "treatments": [\n  ]\n}', '{\n  "treatments": [\n    #\n  ]\n}'],
  ])('%s', (_, before, after) => {
    const item = '{ "match": "foliage/leaf[[]1[]].png", "kernel": "mitchell" }';
    expect(adopted(before, leaf, { kernel: 'mitchell' })).toBe(after.replace('#', item));
  });

  test('keeps every comment of the file that `init` writes', () => {
    const after = adopted(settingsTemplate, leaf, { kernel: 'mitchell' });
    const comments = (text: string) => text.match(/\/\/.*/g);
    expect(comments(after)).toEqual(comments(settingsTemplate));
    expect(treatmentAfter(after, 'foliage/leaf[1].png').kernel.minify.name).toBe('mitchell');
    expect(treatmentAfter(after, 'foliage/leaf.png').kernel.minify.name).toBe('kaiser');
  });

  test('a second time changes the same treatment, key by key', () => {
    const once = adopted('{}', leaf, { kernel: 'mitchell', alpha: { use: 'mask' } });
    const twice = adopted(once, leaf, { kernel: { name: 'kaiser', alpha: 3 }, alpha: { cutoff: 0.25 } });
    expect(parse(twice)).toEqual({
      treatments: [
        {
          match: 'foliage/leaf[[]1[]].png',
          kernel: { name: 'kaiser', alpha: 3 },
          alpha: { use: 'mask', cutoff: 0.25 },
        },
      ],
    });
  });
});

test('adopting for a treatment changes that one, and its neighbors stay as they are written', () => {
  const before = '{ "treatments": [ {"match":"a/**"} , { "match": "b/**", "wrap": { "x": "repeat" } /* x */ } ] }';
  expect(adopted(before, { treatment: 1 }, { wrap: { y: 'repeat' }, content: 'data' })).toBe(
    '{ "treatments": [ {"match":"a/**"} , { "match": "b/**", "wrap": { "x": "repeat", "y": "repeat" }, "content": "data" /* x */ } ] }',
  );
});

test('the change is the shortest that does it', () => {
  const before = '{ "treatments": [{ "match": "a/**", "kernel": "box" }] }';
  const change = adoptSettings(before, 's', { treatment: 0 }, { kernel: 'even' });
  expect(change).toEqual({ offset: before.indexOf('box'), length: 3, text: 'even' });
});

test.each([
  ['a file with problems', '{ "treatment": [] }', { kernel: 'box' }, 'unknown-key'],
  ['a key that is none', '{}', { kernal: 'box' }, 'unknown-key'],
  ['a value that is none', '{}', { kernel: 'boxes' }, 'bad-choice'],
])('refuses %s', async (_, before, settings, code) => {
  const problem = await problemOf(() => adoptSettings(before, 's', leaf, settings));
  expect(problem?.code).toBe(code);
});

test('any path has a glob that is accepted and matches it', () => {
  const name = fc
    .string({ unit: fc.constantFrom(...'ab.-_ []{}()*?!+@\\^$|,#~"é'), minLength: 1, maxLength: 12 })
    .filter((each) => !each.startsWith('.'));
  fc.assert(
    fc.property(fc.array(name, { minLength: 1, maxLength: 3 }), (names) => {
      const path = names.join('/').normalize('NFC');
      const glob = exactGlob(path);
      expect(globFault(glob)).toBeNull();
      expect(globMatcher([glob])(path)).toBe(true);
      expect(globMatcher([glob])(`${path}x`)).toBe(false);
    }),
    { numRuns: 1000 },
  );
});
