import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { explainTexture } from '../../core/treatment/explain.ts';
import { treatmentKeys, walkKeys } from '../../core/treatment/keys.ts';
import { type Merged, mergePatches, type Patch, patchOf, withoutNulls } from '../../core/treatment/merge.ts';
import { resolveTreatment, unusedTreatments } from '../../core/treatment/resolve.ts';
import { parseSettings, type Settings } from '../../core/treatment/settings.ts';
import type { Treatment } from '../../core/treatment/treatment.ts';
import { problemOf } from '../fixtures/refusal.ts';

function settingsOf(value: unknown): Settings {
  const { settings, problems } = parseSettings(JSON.stringify(value), '/r/sizeproof.json');
  if (settings === null) throw new Error(`Expected settings without problems but found ${JSON.stringify(problems)}`);
  return settings;
}

/** What a texture gets from rules that all hit it. */
function resolved(...rules: object[]): Treatment {
  const treatments = rules.map((rule) => ({ match: '**', ...rule }));
  return resolveTreatment(settingsOf({ treatments }), 'a/b.png').treatment;
}

const builtIn = resolveTreatment(null, 'a/b.png').treatment;
const kaiser = { name: 'kaiser', params: { alpha: 4, width: 3 } };
const box = { name: 'box', params: {} };

describe('built-in defaults', () => {
  test('of a color texture', () => {
    expect(builtIn).toEqual({
      content: 'color',
      channels: null,
      transfer: 'srgb',
      light: 'linear',
      alpha: { use: 'opacity', cutoff: 0.5, test: '>=', keepCoverage: false, store: 'straight', weight: true },
      fill: 'hidden',
      kernel: { minify: kaiser, magnify: kaiser },
      derive: 'previous',
      wrap: { x: 'clamp-to-edge', y: 'clamp-to-edge' },
      levels: { first: 0, last: null },
      targets: [],
      grid: null,
      depth: 'same',
      outputs: ['png', 'ktx2'],
      name: null,
      ktx2: { supercompress: 'none', format: 'wide' },
      normal: { count: 3, y: 'up', base: 'keep', roughness: null },
      height: { minmax: false },
      png: { base: false },
      colorChunks: 'ignore',
      view: { texelsPerMeter: null, fovY: 60, screenHeight: 1080, blend: 'linear' },
      limits: { thinning: null, halo: null, overBudget: null },
    } satisfies Treatment);
  });

  test.each(['normal', 'height', 'data'])('%s is linear, its alpha data, its kernel box', (content) => {
    const { transfer, alpha, fill, kernel } = resolved({ content });
    expect([transfer, alpha.use, fill, kernel.minify, kernel.magnify]).toEqual(['linear', 'data', 'none', box, box]);
  });

  test('a mask keeps its coverage and is filled', () => {
    const { alpha, fill } = resolved({ alpha: { use: 'mask' } });
    expect([alpha.keepCoverage, fill]).toEqual([true, 'hidden']);
  });

  test.each([
    ['nearest', 'base'],
    ['majority', 'base'],
    ['detail', 'base'],
    ['even', 'base'],
    ['box', 'previous'],
    ['kaiser', 'previous'],
  ])('%s derives from %s', (kernel, derive) => {
    expect(resolved({ kernel }).derive).toBe(derive);
  });

  test.each([
    [{ rg: 'normal', b: 'roughness', a: 'data' }, 'normal', 'linear', 'data', 2],
    [{ rgb: 'color', a: 'data' }, 'color', ['srgb', 'srgb', 'srgb', 'linear'], 'data', 3],
    [{ r: 'color', a: 'height' }, 'color', ['srgb', 'linear'], 'data', 3],
    [{ rgb: 'color' }, 'color', 'srgb', 'opacity', 3],
    [{ rgba: 'color' }, 'color', 'srgb', 'opacity', 3],
    [{ a: 'height', rgb: 'normal' }, 'normal', 'linear', 'data', 3],
    [{ r: 'data', gb: 'color' }, 'data', ['linear', 'srgb', 'srgb', 'linear'], 'data', 3],
  ])('a packed file %j', (channels, content, transfer, use, count) => {
    const treatment = resolved({ channels });
    expect([treatment.content, treatment.transfer, treatment.alpha.use, treatment.normal.count]).toEqual([
      content,
      transfer,
      use,
      count,
    ]);
  });
});

describe('merging', () => {
  test('objects merge key by key, lists and scalars replace', () => {
    const { alpha, outputs, targets } = resolved(
      { alpha: { use: 'mask', cutoff: 0.4 }, outputs: ['png', 'ktx2'], targets: ['2x', '3x'] },
      { alpha: { cutoff: 0.3 }, outputs: ['png'], targets: ['4x'] },
    );
    expect([alpha.use, alpha.cutoff, outputs, targets]).toEqual(['mask', 0.3, ['png'], [{ name: '4x', scale: 4 }]]);
  });

  test('naming a kernel drops the earlier parameters', () => {
    expect(resolved({ kernel: { name: 'keys', a: -1 } }, { kernel: 'keys' }).kernel.minify.params).toEqual({ a: -0.5 });
    const { kernel } = resolved({ kernel: { name: 'kaiser', alpha: 8 } }, { kernel: { minify: 'nearest' } });
    expect(kernel).toEqual({
      minify: { name: 'nearest', params: {} },
      magnify: { name: 'kaiser', params: { alpha: 8, width: 3 } },
    });
  });

  test('one kernel for both directions leaves the direction it cannot do to the content', () => {
    expect(resolved({ kernel: 'majority' }).kernel.magnify).toEqual(kaiser);
    expect(resolved({ kernel: 'epx', levels: 'none', content: 'data' }).kernel.minify).toEqual(box);
  });

  test('an object takes the place of a word, and a word of an object', () => {
    expect(resolved({ levels: { last: 5 } }, { levels: 'none' }).levels).toBe('none');
    expect(resolved({ levels: { last: 5 } }, { levels: 'none' }, { levels: { first: 1 } }).levels).toEqual({
      first: 1,
      last: null,
    });
    expect(resolved({ levels: 'none' }, { levels: { first: null } }).levels).toEqual({ first: 0, last: null });
    expect(
      resolved({ normal: { roughness: 0.5 } }, { normal: { roughness: { path: 'r.png' } } }).normal.roughness,
    ).toEqual({
      path: 'r.png',
      channel: 'g',
    });
    expect(
      resolved({ normal: { roughness: { path: 'r.png' } } }, { normal: { roughness: 0.5 } }).normal.roughness,
    ).toEqual({
      constant: 0.5,
    });
  });

  test('one wrap for both axes, or one each', () => {
    expect(resolved({ wrap: 'repeat' }, { wrap: { y: 'mirror-repeat' } }).wrap).toEqual({
      x: 'repeat',
      y: 'mirror-repeat',
    });
  });

  test('a budget is bytes, in a format that a later rule may change', () => {
    expect(
      resolved({ limits: { 'over-budget': 4096 } }, { limits: { 'over-budget': { format: 'bc7' } } }).limits.overBudget,
    ).toEqual({
      bytes: 4096,
      format: 'bc7',
    });
  });

  test('targets get their names from what they say', () => {
    const { targets } = resolved({
      targets: ['1x', '2.50x', '48x32', { scale: 3 }, { extent: [8, 9] }, { cell: [4, 5], name: 'card' }],
    });
    expect(targets).toEqual([
      { name: '1x', scale: 1 },
      { name: '2.5x', scale: 2.5 },
      { name: '48x32', extent: [48, 32] },
      { name: '3x', scale: 3 },
      { name: '8x9', extent: [8, 9] },
      { name: 'card', cell: [4, 5] },
    ]);
  });

  test('only rules that hit a texture count, later ones last', () => {
    const settings = settingsOf({
      defaults: { wrap: 'repeat' },
      treatments: [
        { match: '**/*_n.png', content: 'normal' },
        { match: ['ui/**', 'font/**'], wrap: 'clamp-to-edge', content: 'data' },
      ],
    });
    const of = (path: string) => resolveTreatment(settings, path).treatment;
    expect([of('a_n.png').content, of('ui/a_n.png').content, of('x/a.png').content]).toEqual([
      'normal',
      'data',
      'color',
    ]);
    expect([of('x/a.png').wrap.x, of('font/a.png').wrap.x]).toEqual(['repeat', 'clamp-to-edge']);
    // Case matters on every system.
    expect(of('UI/a.png').content).toBe('color');
    expect(
      unusedTreatments(settings, ['x/a_n.png']).map(({ code, severity, values, line, column }) => [
        code,
        severity,
        values.rule,
        line,
        column,
      ]),
    ).toEqual([['match-unused', 'warning', 'treatments[1]', 1, 96]]);
  });
});

describe('contradictions that only a texture shows', () => {
  const settings = settingsOf({
    treatments: [
      { match: 'a/**', alpha: { store: 'premultiplied' } },
      { match: 'a/b/**', outputs: ['ktx2'] },
    ],
  });

  test('are refused at the key', async () => {
    expect(await problemOf(() => resolveTreatment(settings, 'a/x.png'))).toMatchObject({
      code: 'premultiplied-png',
      path: '/r/sizeproof.json',
      line: 1,
      column: 41,
    });
  });

  test('and pass where another rule settles them', async () => {
    expect(await problemOf(() => resolveTreatment(settings, 'a/b/x.png'))).toBeNull();
    expect(await problemOf(() => resolveTreatment(settings, 'c/x.png'))).toBeNull();
  });
});

describe('explaining', () => {
  const text =
    '{\n  "defaults": { "wrap": "repeat" },\n  "treatments": [\n    { "match": "**", "alpha": { "cutoff": 0.4 } }\n  ]\n}';
  const rows = explainTexture(resolveTreatment(parseSettings(text, '/r/sizeproof.json').settings, 'a.png'));

  test('names rule and place of each leaf that a rule set', () => {
    const path = '/r/sizeproof.json';
    expect(rows.filter(({ place }) => place !== null)).toEqual([
      { key: 'alpha.cutoff', value: 0.4, rule: 'treatments[0]', place: { path, line: 4, column: 43 } },
      { key: 'wrap.x', value: 'repeat', rule: 'defaults', place: { path, line: 2, column: 25 } },
      { key: 'wrap.y', value: 'repeat', rule: 'defaults', place: { path, line: 2, column: 25 } },
    ]);
    expect(rows.every(({ rule, place }) => (rule === 'built-in') === (place === null))).toBe(true);
  });

  test('keeps the order of the keys, each once', () => {
    const order = walkKeys(treatmentKeys).map(({ path }) => path);
    const places = rows.map(({ key }) => order.indexOf(key));
    expect(places).not.toContain(-1);
    expect(places).toEqual([...new Set(places)].sort((a, b) => a - b));
  });
});

describe('laws', () => {
  const keys = [
    'levels',
    'levels.first',
    'levels.last',
    'alpha',
    'alpha.use',
    'alpha.cutoff',
    'light',
    'normal',
    'normal.roughness',
    'normal.roughness.path',
  ];
  const entries = fc.array(
    fc.record({ key: fc.constantFrom(...keys), value: fc.option(fc.nat(9), { freq: 3 }) }).map(({ key, value }) => ({
      key,
      value,
      at: { line: 1, column: 1 },
      keyAt: { line: 1, column: 1 },
      given: 'alone' as const,
    })),
    { maxLength: 6 },
  );
  const patch = entries.map((each) => patchOf('defaults', each));
  const values = (each: Patch) =>
    Object.fromEntries([...withoutNulls(each)].map(([key, { value }]: [string, Merged]) => [key, value]));

  test('merging is associative', () => {
    fc.assert(
      fc.property(patch, patch, patch, (a, b, c) => {
        expect(values(mergePatches(mergePatches(a, b), c))).toEqual(values(mergePatches(a, mergePatches(b, c))));
      }),
      { numRuns: 3000 },
    );
  });

  test('a patch laid over itself changes nothing', () => {
    fc.assert(
      fc.property(patch, (a) => {
        expect(values(mergePatches(a, a))).toEqual(values(a));
      }),
    );
  });

  const rule = fc.record(
    {
      light: fc.constantFrom('linear', 'code'),
      alpha: fc.record(
        { cutoff: fc.constantFrom(0.1, 0.9), test: fc.constantFrom('>', '>='), weight: fc.boolean() },
        { requiredKeys: [] },
      ),
      kernel: fc.constantFrom('box', { name: 'keys', a: -1 }, { minify: 'detail' }, { magnify: 'monotone' }),
      wrap: fc.constantFrom('repeat', { x: 'mirror-repeat' }),
      levels: fc.constantFrom('none', { last: 3 }, { first: 1 }),
      targets: fc.constantFrom([], ['2x'], ['0.5x', '48x48']),
      normal: fc.constantFrom({ roughness: 0.5 }, { roughness: { path: 'r.png' } }, { y: 'down' }),
      limits: fc.constantFrom({ halo: 3 }, { 'over-budget': 9 }, { 'over-budget': { bytes: 9, format: 'bc1' } }),
    },
    { requiredKeys: [] },
  );

  test('null at every key restores the defaults', () => {
    fc.assert(
      fc.property(rule, (each) => {
        const nulls = Object.fromEntries(Object.keys(each).map((key) => [key, null]));
        expect(resolved(each, nulls)).toEqual(builtIn);
      }),
    );
  });

  test('a rule given twice, or in `defaults`, is the rule given once', () => {
    fc.assert(
      fc.property(rule, (each) => {
        expect(resolved(each, each)).toEqual(resolved(each));
        expect(resolveTreatment(settingsOf({ defaults: each }), 'a/b.png').treatment).toEqual(resolved(each));
      }),
    );
  });

  test('a later rule wins every key that it sets', () => {
    fc.assert(
      fc.property(rule, rule, (a, b) => {
        const both = resolveTreatment(settingsOf({ defaults: a, treatments: [{ match: '**', ...b }] }), 'a/b.png');
        const alone = resolveTreatment(settingsOf({ treatments: [{ match: '**', ...b }] }), 'a/b.png');
        for (const { key, value, rule: setBy } of alone.origins) {
          if (setBy !== 'built-in') expect(both.origins.find((each) => each.key === key)?.value).toEqual(value);
        }
      }),
    );
  });
});
