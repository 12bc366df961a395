import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { findCollisions, findOverwrites, foldCase } from '../../core/treatment/find/collisions.ts';
import { manifestPath, type OutputRequest, outputPath, sourcePath } from '../../core/treatment/find/names.ts';
import { problemOf } from '../fixtures/refusal.ts';

const png = { use: 'image', extension: 'png', extent: { width: 64, height: 32 } } as const;
const ktx2 = { ...png, extension: 'ktx2' } as const;

describe('output paths', () => {
  test.each<readonly [texture: string, name: string | null, request: OutputRequest, path: string]>([
    ['ground/mud.png', null, { ...png, level: 3 }, 'ground/mud.3.png'],
    ['ground/mud.png', null, { ...png, level: 0 }, 'ground/mud.0.png'],
    ['mud.tga', null, { ...png, level: 10 }, 'mud.10.png'],
    ['ground/mud.png', null, ktx2, 'ground/mud.ktx2'],
    ['ui/icon.png', null, { ...png, target: '0.75x' }, 'ui/icon.0.75x.png'],
    ['ui/icon.png', null, { ...png, target: '48x48' }, 'ui/icon.48x48.png'],
    ['a/h.png', null, { ...png, use: 'min', level: 2 }, 'a/h.min.2.png'],
    ['a/h.png', null, { ...ktx2, use: 'max' }, 'a/h.max.ktx2'],
    ['a/n.png', null, { ...png, use: 'roughness', level: 1 }, 'a/n.roughness.1.png'],
    ['a/n.png', null, { ...ktx2, use: 'roughness' }, 'a/n.roughness.ktx2'],
    ['a.b/c.d.png', null, { ...png, level: 1 }, 'a.b/c.d.1.png'],
    ['a/b.png', '{path}/{name}_{width}x{height}_{level}', { ...png, level: 1 }, 'a/b_64x32_1.png'],
    ['a/b.png', 'mips{level}/{path}/{name}', { ...png, level: 1 }, 'mips1/a/b.png'],
    ['a/b.png', '{path}/{name}/{level}', ktx2, 'a/b.ktx2'],
    ['b.png', '{path}/{name}.{level}', { ...png, level: 4 }, 'b.4.png'],
    ['a/b.png', '{path}/{name}-{level}-{target}', { ...png, target: '2x' }, 'a/b-2x.png'],
    ['a/b.png', '{path}/{name}-{level}-{target}', { ...png, use: 'min', level: 2 }, 'a/b.min-2.png'],
    ['a/b.png', 'all/{level}', { ...png, use: 'min', level: 2 }, 'all/2.min.png'],
    // A name that looks like a pattern is only a name.
    ['a/{level}.png', null, { ...png, level: 2 }, 'a/{level}.2.png'],
    ['a/$&.png', null, { ...png, level: 2 }, 'a/$&.2.png'],
  ])('%s, %s: %j', (texture, name, request, path) => {
    expect(outputPath(texture, { name }, request)).toBe(path);
  });

  test('manifests stand beside the outputs, whatever `name` says', () => {
    expect(['ground/mud.png', 'mud.tga', 'a/b.c.png'].map(manifestPath)).toEqual([
      'ground/mud.mips.json',
      'mud.mips.json',
      'a/b.c.mips.json',
    ]);
  });

  test('files beside a texture are named by a pattern too', () => {
    expect(sourcePath('{path}/{name}_rough.png', 'a/b.png')).toBe('a/b_rough.png');
    expect(sourcePath('{path}/{name}_rough.png', 'b.png')).toBe('b_rough.png');
    expect(sourcePath('shared/rough.png', 'a/b.png')).toBe('shared/rough.png');
  });

  test('images of one texture never share a path by default', () => {
    const uses = ['image', 'min', 'max', 'roughness'] as const;
    const paths = uses.flatMap((use) => [
      ...Array.from({ length: 15 }, (_, level) => outputPath('a/b.png', { name: null }, { ...png, use, level })),
      ...['2x', '48x48', 'x2'].map((target) => outputPath('a/b.png', { name: null }, { ...png, use, target })),
      outputPath('a/b.png', { name: null }, { ...ktx2, use }),
    ]);
    expect(new Set([...paths, manifestPath('a/b.png')]).size).toBe(paths.length + 1);
  });
});

describe('names that no system may carry', () => {
  // [WinNames]
  test.each([
    'CON.png',
    'con.png',
    'a/PRN.png',
    'AUX.x.png',
    'nul.png',
    'COM1.png',
    'lpt9.png',
    'COM\u00b2.png',
    'CONIN$.png',
    'aux/a.png',
    'com1.textures/a.png',
    'a./b.png',
    'a /b.png',
    'a:b.png',
    'a?b.png',
    'a*b.png',
    'a"b.png',
    'a<b.png',
    'a>b.png',
    'a|b.png',
    'a\\b.png',
    'a\u0001b.png',
    'a\u007fb.png',
    'a\nb.png',
    'a\ud800b.png',
    `${'x'.repeat(240)}.png`,
    `${'\u{1F343}'.repeat(60)}.png`,
  ])('%j', async (texture) => {
    const problem = await problemOf(() => outputPath(texture, { name: null }, { ...png, level: 0 }));
    expect(problem).toMatchObject({ code: 'bad-output-name', path: texture });
    expect((await problemOf(() => manifestPath(texture)))?.code).toBe('bad-output-name');
  });

  test.each([
    'console.png',
    'COM.png',
    'COM10.png',
    'nul1.png',
    'a.CON.png',
    'a;b.png',
    "a'b.png",
    'a#%&.png',
    '\u00e9.png',
  ])('%j is fine', (texture) => {
    expect(() => outputPath(texture, { name: null }, { ...png, level: 0 })).not.toThrow();
  });

  test('240 bytes are the limit', () => {
    expect(outputPath(`${'x'.repeat(234)}.png`, { name: null }, { ...png, level: 0 })).toHaveLength(240);
    expect(() => outputPath(`${'x'.repeat(235)}.png`, { name: null }, { ...png, level: 0 })).toThrow();
  });
});

describe('collisions', () => {
  test('of two sources that differ by extension: the exclude line settles it', () => {
    const problems = findCollisions([
      { texture: 'a/b.png', outputs: ['a/b.0.png', 'a/b.mips.json'] },
      { texture: 'a/b.tga', outputs: ['a/b.0.png', 'a/b.mips.json'] },
    ]);
    expect(problems).toEqual([
      {
        code: 'same-output',
        severity: 'error',
        values: { first: 'a/b.png', second: 'a/b.tga', output: 'a/b.mips.json', line: '"exclude": ["a/b.tga"]' },
        path: 'a/b.tga',
      },
    ]);
  });

  test('of outputs alone: a name line settles it', () => {
    const [problem] = findCollisions([
      { texture: 'a/b.png', outputs: ['all/1.png', 'a/b.mips.json'] },
      { texture: 'a/c.png', outputs: ['all/1.png', 'a/c.mips.json'] },
    ]);
    expect(problem.values.line).toBe('{ "match": "a/c.png", "name": "{path}/{name}-2.{level}.{target}" }');
  });

  test.each([
    ['Leaf.0.png', 'leaf.0.png'],
    ['\u00c4.0.png', '\u00e4.0.png'],
    ['\u00e4.0.png', 'a\u0308.0.png'],
    ['\u03a3.png', '\u03c2.png'],
  ])('%s and %s are one file somewhere', (a, b) => {
    const list = [
      { texture: 'x.png', outputs: [a] },
      { texture: 'y.png', outputs: [b] },
    ];
    expect(findCollisions(list).map(({ code }) => code)).toEqual(['same-output']);
  });

  test('of a texture with itself', () => {
    expect(findCollisions([{ texture: 'a.png', outputs: ['a.2x.png', 'a.2X.png'] }]).map(({ code }) => code)).toEqual([
      'output-twice',
    ]);
  });

  test('outputs beside their sources must not replace any', () => {
    const list = [
      { texture: 'a/b.png', outputs: ['a/b.2x.png'] },
      { texture: 'a/B.2x.png', outputs: ['a/B.2x.2x.png'] },
    ];
    expect(findOverwrites(list, '').map(({ code, path, values }) => [code, path, values.source])).toEqual([
      ['output-is-source', 'a/b.png', 'a/B.2x.png'],
    ]);
    expect(findOverwrites(list, 'built')).toEqual([]);
  });

  test('none where all paths differ', () => {
    fc.assert(
      fc.property(fc.uniqueArray(fc.string({ unit: fc.constantFrom(...'abcxyz09') }), { minLength: 1 }), (names) => {
        expect(findCollisions(names.map((name) => ({ texture: name, outputs: [`${name}.png`] })))).toEqual([]);
      }),
    );
  });

  test('folding case twice is folding it once', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'grapheme' }), (text) => {
        expect(foldCase(foldCase(text))).toBe(foldCase(text));
      }),
    );
  });
});
