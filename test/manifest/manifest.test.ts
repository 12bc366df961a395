import fc from 'fast-check';
import { expect, test } from 'vitest';
import { compareManifest, manifestFiles, movedOutputs, type Present } from '../../core/manifest/compare.ts';
import type { Manifest } from '../../core/manifest/manifest.ts';
import { movedTo, sourcesByHash } from '../../core/manifest/orphan.ts';
import { readManifest } from '../../core/manifest/read.ts';
import { writeManifest } from '../../core/manifest/write.ts';
import { Refusal } from '../../core/problem.ts';
import { sampleManifest, sampleTreatment, sha256 } from './sample.ts';

const manifest = sampleManifest({ 'leaf.0.png': 'a', 'leaf.1.png': 'b' });

function problemOf(act: () => unknown) {
  try {
    act();
  } catch (error) {
    if (error instanceof Refusal) return error.problem;
    throw error;
  }
  throw new Error('Nothing was refused.');
}

test('what is written reads back as it was, and writes alike', () => {
  const text = writeManifest(manifest);
  expect(readManifest(text, 'x')).toEqual(manifest);
  expect(writeManifest(readManifest(text, 'x'))).toBe(text);
});

test('the order of keys and the line ends of the input do not matter', () => {
  const reversed = (value: unknown): unknown =>
    Array.isArray(value)
      ? value.map(reversed)
      : typeof value === 'object' && value !== null
        ? Object.fromEntries(
            Object.entries(value)
              .reverse()
              .map(([key, each]) => [key, reversed(each)]),
          )
        : value;
  expect(writeManifest(reversed(manifest) as Manifest)).toBe(writeManifest(manifest));
  const windows = `\ufeff${writeManifest(manifest).replaceAll('\n', '\r\n')}`;
  expect(readManifest(windows, 'x')).toEqual(manifest);
});

test('the text is LF, two spaces a step, one line end at the end, and starts with the format', () => {
  const text = writeManifest(manifest);
  expect(text).not.toMatch(/\r|\t| \n/);
  expect(text).toMatch(
    /^\{\n {2}"format": 1,\n {2}"algorithm": \d+,\n {2}"encoder": "[0-9a-f]{64}",\n {2}"sources": \[\n/,
  );
  expect(text).toMatch(/[^\n]\n$/);
  for (const line of text.split('\n')) expect((/^ */.exec(line)?.[0].length ?? 0) % 2).toBe(0);
});

test('statistics keep six significant digits', () => {
  const level = { ...manifest.levels[0], coverage: 1 / 3, luminance: 0.000123456789 };
  const text = writeManifest({ ...manifest, levels: [level] });
  expect(text).toContain('"coverage": 0.333333,');
  expect(text).toContain('"luminance": 0.000123457,');
  expect(writeManifest(readManifest(text, 'x'))).toBe(text);
});

test('any number that a setting may take survives', () => {
  fc.assert(
    fc.property(
      fc.double({ min: -1, max: 0, noNaN: true }),
      fc.double({ min: 0, max: 1, noNaN: true }),
      (a, cutoff) => {
        const kernel = { ...sampleTreatment.kernel, minify: { name: 'keys', params: { a: a + 0 } } };
        const settings = { ...sampleTreatment, kernel, alpha: { ...sampleTreatment.alpha, cutoff: cutoff + 0 } };
        expect(readManifest(writeManifest({ ...manifest, settings }), 'x').settings).toEqual(settings);
      },
    ),
  );
});

test('every leaf is checked: null in its place is damage, and so is its absence or a key beside it', () => {
  const nullable = new Set([
    'channels',
    'last',
    'grid',
    'name',
    'roughness',
    'texelsPerMeter',
    'thinning',
    'halo',
    'overBudget',
  ]);
  const optional = new Set(['level', 'file', 'coverage', 'coverageScale', 'luminance', 'clipped']);
  const visited: string[] = [];
  const visit = (holder: Record<string, unknown>, path: string): void => {
    for (const [key, value] of Object.entries(holder)) {
      const put = (other: unknown) => {
        holder[key] = other;
        const problem = problemOf(() => readManifest(JSON.stringify(whole), 'm'));
        holder[key] = value;
        return problem.code;
      };
      visited.push(`${path}.${key}`);
      if (!nullable.has(key) && !optional.has(key))
        expect([path, key, put(undefined)]).toEqual([path, key, 'manifest-damaged']);
      if (!nullable.has(key)) expect([path, key, put(null)]).toEqual([path, key, 'manifest-damaged']);
      expect([path, key, put({ odd: [] })]).toEqual([path, key, 'manifest-damaged']);
      if (typeof value === 'number') expect([path, key, put(-1e9)]).toEqual([path, key, 'manifest-damaged']);
      if (typeof value === 'object' && value !== null) visit(value as Record<string, unknown>, `${path}.${key}`);
    }
    if (!Array.isArray(holder)) {
      holder.surplus = 1;
      expect(problemOf(() => readManifest(JSON.stringify(whole), 'm')).code).toBe('manifest-damaged');
      delete holder.surplus;
    }
  };
  const whole = JSON.parse(writeManifest(manifest)) as Record<string, unknown>;
  visit(whole, '');
  expect(visited.length).toBeGreaterThan(100);
});

test.each([
  ['empty', '', 'manifest-damaged'],
  ['not JSON', '{"format": 1,', 'manifest-damaged'],
  ['a list', '[]', 'manifest-damaged'],
  ['null', 'null', 'manifest-damaged'],
  ['another format, none', '{"format": 0}', 'manifest-damaged'],
  ['a newer format of any shape', '{"format": 2, "unheard": "of"}', 'manifest-newer'],
])('%s is refused as such', (_, text, code) => {
  expect(problemOf(() => readManifest(text, 'a/b.mips.json'))).toMatchObject({ code, path: 'a/b.mips.json' });
});

test.each(['\n', '\r\n'])('merge markers are named with their line (%j)', (end) => {
  const lines = writeManifest(manifest).split('\n');
  const ours = [
    ...lines.slice(0, 3),
    '<<<<<<< HEAD',
    lines[3],
    '=======',
    lines[3],
    '>>>>>>> theirs',
    ...lines.slice(4),
  ];
  expect(problemOf(() => readManifest(ours.join(end), 'm'))).toMatchObject({ code: 'manifest-conflict', line: 4 });
});

test.each(['/etc/x.png', 'C:/x.png', 'C:x.png', 'a\\b.png', '', 'a\nb'])('%j is no path for an output', (path) => {
  const level = { ...manifest.levels[0], file: { path, sha256: sha256('') } };
  const text = JSON.stringify({ ...manifest, levels: [level] });
  expect(problemOf(() => readManifest(text, 'm')).code).toBe('manifest-damaged');
});

const present: Present = {
  sources: [{ path: '../leaf.png', use: 'image', sha256: sha256('source') }],
  settings: sampleTreatment,
  outputs: new Map([
    ['leaf.0.png', sha256('a')],
    ['leaf.1.png', sha256('b')],
  ]),
};

test.each<[string, Partial<Present>, Partial<Manifest>, string[]]>([
  ['nothing', {}, {}, []],
  ['another encoder', {}, { encoder: sha256('other') }, []],
  ['the source', { sources: [{ ...present.sources[0], sha256: sha256('other') }] }, {}, ['source']],
  ['a missing source', { sources: [{ ...present.sources[0], sha256: null }] }, {}, ['source']],
  [
    'one source more',
    { sources: [...present.sources, { path: 'r.png', use: 'roughness', sha256: sha256('r') }] },
    {},
    ['source'],
  ],
  ['a setting', { settings: { ...sampleTreatment, fill: 'none' } }, {}, ['settings']],
  ['no settings', { settings: null }, {}, ['settings']],
  ['the algorithm', {}, { algorithm: 999 }, ['algorithm']],
  ['an output', { outputs: new Map([...(present.outputs ?? []), ['leaf.1.png', sha256('x')]]) }, {}, ['output']],
  ['a missing output', { outputs: new Map([['leaf.0.png', sha256('a')]]) }, {}, ['output']],
  ['outputs left out', { outputs: null }, {}, []],
  [
    'all',
    { sources: [], settings: null, outputs: new Map() },
    { algorithm: 999 },
    ['source', 'settings', 'algorithm', 'output'],
  ],
])('%s moved: %s', (_, now, recorded, moved) => {
  expect(compareManifest({ ...manifest, ...recorded }, { ...present, ...now })).toEqual(moved);
});

test('settings in another order are the same settings', () => {
  const settings = Object.fromEntries(Object.entries(sampleTreatment).reverse()) as unknown as typeof sampleTreatment;
  expect(compareManifest(manifest, { ...present, settings })).toEqual([]);
});

test('outputs are listed in order, levels before targets before containers', () => {
  const full: Manifest = {
    ...manifest,
    targets: [{ ...manifest.levels[0], target: '2x', file: { path: 'leaf.2x.png', sha256: sha256('t') } }],
    containers: [{ path: 'leaf.ktx2', sha256: sha256('k') }],
  };
  expect(manifestFiles(full).map((file) => file.path)).toEqual([
    'leaf.0.png',
    'leaf.1.png',
    'leaf.2x.png',
    'leaf.ktx2',
  ]);
  expect(movedOutputs(full, new Map([['leaf.ktx2', sha256('k')]])).map((file) => file.path)).toEqual([
    'leaf.0.png',
    'leaf.1.png',
    'leaf.2x.png',
  ]);
});

test('a moved source is found by its hash; of two, the first by path', () => {
  const byHash = sourcesByHash([
    { path: 'z/leaf.png', sha256: sha256('source') },
    { path: 'b/leaf.png', sha256: sha256('source') },
    { path: 'gone.png', sha256: null },
  ]);
  expect(movedTo(manifest, byHash)).toBe('b/leaf.png');
  expect(movedTo(manifest, sourcesByHash([]))).toBeUndefined();
});
