import { readFileSync } from 'node:fs';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { kernels } from '../../core/kernel/table.ts';
import { fileKeys, ruleKeys, standard, treatmentKeys, walkKeys } from '../../core/treatment/keys.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { openSchema } from '../../core/treatment/schema/open-schema.ts';
import { jsonSchema, schemaText } from '../../core/treatment/schema/schema.ts';
import { settingsTable } from '../../core/treatment/schema/settings-table.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { accepts } from '../fixtures/json-schema.ts';

test('the committed schema is the one that the keys make; `npm run schema` writes it', () => {
  const committed = readFileSync(new URL('../../core/treatment/schema/sizeproof.schema.json', import.meta.url), 'utf8');
  expect(committed.replaceAll('\r\n', '\n')).toBe(schemaText());
});

test('every key has one sentence, and a default or keys of its own', () => {
  for (const { path, key } of [...walkKeys(fileKeys), ...walkKeys(ruleKeys)]) {
    expect(key.says, path).toMatch(/^[A-Z].*\.$/);
    expect(key.says, path).not.toMatch(/\. [A-Z]/);
  }
});

test('constant defaults are what resolving gives', () => {
  const { origins } = resolveTreatment(null, 'a.png');
  for (const { path, key } of walkKeys(treatmentKeys)) {
    const origin = origins.find((each) => each.key === path);
    if (origin !== undefined && key.default.kind === 'value') expect(origin.value, path).toEqual(standard(path));
  }
});

test('the tables name every key and kernel', () => {
  const tables = settingsTable();
  const cells = tables.split('\n').map((line) => line.split(' | ')[0]);
  for (const { path } of walkKeys(ruleKeys)) expect(cells).toContain(`| \`${path}\``);
  for (const { name } of [...fileKeys, ...kernels]) expect(cells).toContain(`| \`${name}\``);
  for (const line of tables.split('\n')) expect(line === '' || /^\| .* \|$/.test(line)).toBe(true);
});

/** Settings files that are right, and what one wrong value makes of them. */
const values: Readonly<Record<string, { readonly good: readonly unknown[]; readonly bad: readonly unknown[] }>> = {
  content: { good: ['color', 'data', null], bad: ['colour', 1, []] },
  channels: { good: [{ rg: 'normal', b: 'roughness' }, null], bad: [{}, { x: 'data' }, { r: 'x' }, 'rg'] },
  transfer: { good: ['linear', ['srgb', 'linear']], bad: ['gamma', [], [1], 1] },
  alpha: { good: [{ cutoff: 0.3 }, { use: null }, {}], bad: [{ cutof: 1 }, { cutoff: 2 }, { test: '<' }, 'mask'] },
  kernel: {
    good: ['box', { name: 'keys', a: -1 }, { minify: 'box' }, { magnify: { name: 'mitchell', b: 0 } }, null],
    bad: [
      'bx',
      { name: 'keys', b: 0 },
      { name: 'box', a: 0 },
      { a: 0 },
      { name: 'detail', lambda: 0.7 },
      { minify: 'x' },
    ],
  },
  wrap: { good: ['repeat', { x: 'repeat' }], bad: ['tile', { z: 'repeat' }, true] },
  levels: { good: ['none', { first: 2 }, { last: null }], bad: ['all', { first: -1 }, { first: 0.5 }, 3] },
  targets: {
    good: [['1x', '2.5x', '48x48', { scale: 2, name: 'big' }], []],
    bad: [['2'], [{}], [{ extent: [1] }], [{ scale: 2, x: 1 }], '2x'],
  },
  grid: { good: [{ cell: [16, 16], gutter: 1 }], bad: [{ cell: [16] }, { gutter: -1 }, 16] },
  depth: { good: ['same', 8, 16], bad: [12, '8'] },
  outputs: { good: [['png'], ['png', 'ktx2']], bad: [[], ['jpg'], 'png'] },
  normal: {
    good: [{ roughness: 0.5 }, { roughness: { path: 'r.png', channel: 'r' } }],
    bad: [{ roughness: 2 }, { count: 4 }, { roughness: { map: 'x' } }],
  },
  view: { good: [{ fovY: 75, texelsPerMeter: null }], bad: [{ fovY: 0 }, { screenHeight: 1.5 }] },
  limits: {
    good: [{ 'over-budget': 9 }, { 'over-budget': { bytes: 9, format: 'bc7' } }, { halo: 3 }],
    bad: [{ fringe: 1 }, { halo: 256 }, { 'over-budget': 0 }],
  },
};

describe('schema and parser', () => {
  const names = Object.keys(values);
  const settings = (rule: unknown) => ({ treatments: [{ match: '**', ...(rule as object) }] });
  const good = fc.record(Object.fromEntries(names.map((name) => [name, fc.constantFrom(...values[name].good)])), {
    requiredKeys: [],
  });

  test('whatever the parser takes the schema takes', () => {
    fc.assert(
      fc.property(good, (rule) => {
        const { problems } = parseSettings(JSON.stringify(settings(rule)), 's');
        // Keys that are right one by one can still contradict each other; that is no matter of the schema.
        const ofShape = ['unknown-key', 'missing-key', 'wrong-type', 'out-of-range', 'bad-choice', 'channel-group'];
        expect(problems.filter(({ code }) => ofShape.includes(code))).toEqual([]);
        expect(accepts(jsonSchema(), settings(rule))).toBe(true);
      }),
    );
  });

  test.each(names.flatMap((name) => values[name].bad.map((bad) => [name, bad] as const)))(
    'both refuse %s: %j',
    (name, bad) => {
      const file = settings({ [name]: bad });
      expect(accepts(jsonSchema(), file)).toBe(false);
      expect(parseSettings(JSON.stringify(file), 's').problems.length).toBeGreaterThan(0);
    },
  );

  test.each([
    { outdir: 'x' },
    { outDir: 1 },
    { exclude: 'x' },
    { treatments: [{}] },
    { treatments: {} },
    { defaults: { match: 'x' } },
    [],
  ])('both refuse %j', (file) => {
    expect(accepts(jsonSchema(), file)).toBe(false);
    expect(parseSettings(JSON.stringify(file), 's').problems.length).toBeGreaterThan(0);
  });
});

describe('the schema for editors', () => {
  const open = openSchema();

  test('accepts every text, since problems are told by the parser alone', () => {
    fc.assert(fc.property(fc.jsonValue(), (value) => accepts(open, value)));
    for (const [key, { good, bad }] of Object.entries(values)) {
      for (const value of [...good, ...bad]) {
        expect(accepts(open, { defaults: { [key]: value }, treatments: [{ [key]: value }] })).toBe(true);
      }
    }
  });

  test('offers every key, choice and sentence of the strict one', () => {
    const offers = (schema: unknown): string[] => {
      const found: string[] = [];
      JSON.stringify(schema, (name, value) => {
        if (name === 'description' || name === 'enum') found.push(JSON.stringify(value));
        if (name === 'properties') found.push(...Object.keys(value as object));
        return value;
      });
      return found.sort();
    };
    expect(offers(open)).toEqual(offers(jsonSchema()));
  });
});
