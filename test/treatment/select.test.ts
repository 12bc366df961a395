import { describe, expect, test } from 'vitest';
import { findRoot } from '../../core/treatment/find/root.ts';
import { type Query, selectSources } from '../../core/treatment/find/select.ts';
import { type Item, memoryTree } from '../fixtures/memory-tree.ts';

const image = 'not read here';

async function select(items: Readonly<Record<string, Item>>, paths: readonly string[], more: Partial<Query> = {}) {
  const { roots, problems } = await selectSources(memoryTree(items), { folder: '/', paths, ...more });
  return {
    roots: roots.map(({ folder, textures }) => [folder, ...textures.map(({ path }) => path)]),
    problems: [...problems, ...roots.flatMap((root) => root.problems)].map(({ code }) => code),
  };
}

describe('the root of a folder', () => {
  const rows: readonly (readonly [
    what: string,
    items: Readonly<Record<string, Item>>,
    start: string,
    root: string | null,
    hidden: string | null,
  ])[] = [
    ['its own file', { '/p/a/sizeproof.json': '', '/p/a/x': '' }, '/p/a', '/p/a', null],
    ['a file above', { '/p/sizeproof.json': '', '/p/a/b/x': '' }, '/p/a/b', '/p', null],
    [
      'the nearest of two, the other hidden',
      { '/p/sizeproof.json': '', '/p/a/sizeproof.json': '', '/p/a/b/x': '' },
      '/p/a/b',
      '/p/a',
      '/p/sizeproof.json',
    ],
    ['beside a .git folder', { '/p/sizeproof.json': '', '/p/.git/HEAD': '', '/p/a/x': '' }, '/p/a', '/p', null],
    [
      'beside a .git file, as in a worktree',
      { '/p/sizeproof.json': '', '/p/.git': 'gitdir: x', '/p/a/x': '' },
      '/p/a',
      '/p',
      null,
    ],
    ['none above a .git entry', { '/sizeproof.json': '', '/p/.git/HEAD': '', '/p/a/x': '' }, '/p/a', null, null],
    [
      'none hidden above a .git entry',
      { '/sizeproof.json': '', '/p/.git': '', '/p/a/sizeproof.json': '' },
      '/p/a',
      '/p/a',
      null,
    ],
    [
      'none above a .git in between',
      { '/p/sizeproof.json': '', '/p/a/.git': '', '/p/a/b/x': '' },
      '/p/a/b',
      null,
      null,
    ],
    ['the top', { '/sizeproof.json': '', '/p/a/x': '' }, '/p/a', '/', null],
    ['a folder of that name is none', { '/p/sizeproof.json/x': '', '/p/a/x': '' }, '/p/a', null, null],
    [
      'a link to a settings file counts',
      { '/s/x.json': '', '/p/sizeproof.json': { link: '/s/x.json' }, '/p/a/x': '' },
      '/p/a',
      '/p',
      null,
    ],
    ['a drive', { '/C:/p/sizeproof.json': '', '/C:/p/a/x': '' }, '/C:/p/a', '/C:/p', null],
  ];
  test.each(rows)('%s', async (_, items, start, folder, hidden) => {
    const found = await findRoot(memoryTree(items), start);
    expect([found?.folder ?? null, found?.hidden ?? null]).toEqual([folder, hidden]);
  });
});

const project = {
  '/p/.git/HEAD': '',
  '/p/sizeproof.json': '{"exclude":["docs/**"],"treatments":[{"match":"ui/**","content":"data"}]}',
  '/p/b.png': image,
  '/p/a.TGA': image,
  '/p/notes.txt': '',
  '/p/.thumb.png': image,
  '/p/ui/icon.png': image,
  '/p/ui/deep/er.Png': image,
  '/p/docs/shot.png': image,
  '/p/built/b.1.png': image,
  '/p/node_modules/m/x.png': image,
  '/p/.cache/x.png': image,
};

describe('sources', () => {
  const all = ['/p', 'a.TGA', 'b.png', 'ui/deep/er.Png', 'ui/icon.png'];
  const rows: readonly (readonly [what: string, paths: readonly string[], folder: string, roots: readonly string[]])[] =
    [
      ['a folder', ['/p'], '/', all],
      ['the working folder', ['.'], '/p', all],
      ['a folder above its root', ['.'], '/', all],
      ['a sub-folder', ['ui'], '/p', ['/p', 'ui/deep/er.Png', 'ui/icon.png']],
      ['from a sub-folder', ['..'], '/p/ui', all],
      ['a file', ['icon.png'], '/p/ui', ['/p', 'ui/icon.png']],
      ['a file twice', ['ui/icon.png', '/p/ui', './ui//icon.png'], '/p', ['/p', 'ui/deep/er.Png', 'ui/icon.png']],
      ['a glob', ['*.png'], '/p', ['/p', 'b.png']],
      ['a deep glob', ['**/*.png'], '/p', ['/p', 'b.png', 'ui/icon.png']],
      ['a glob below a folder', ['../ui/*.png'], '/p/docs', ['/p', 'ui/icon.png']],
      ['an absolute glob', ['/p/u*/**'], '/', ['/p', 'ui/deep/er.Png', 'ui/icon.png']],
    ];
  test.each(rows)('%s', async (_, paths, folder, roots) => {
    expect(await select(project, paths, { folder })).toEqual({ roots: [roots], problems: [] });
  });

  test.each([
    ['an excluded file', 'docs/shot.png'],
    ['an excluded folder', 'docs'],
    ['an output folder', 'built'],
    ['a file in an output folder', 'built/b.1.png'],
    ['a dot name', '.thumb.png'],
    ['below a dot name', '.cache'],
    ['node_modules', 'node_modules'],
    ['below node_modules', 'node_modules/m/x.png'],
    ['another extension', 'notes.txt'],
    ['nothing of that name', 'missing'],
    ['a glob that matches nothing', 'ui/*.tga'],
    ['a glob below nothing', 'missing/*.png'],
    ['a glob in another case', 'UI/*.png'],
  ])('%s selects nothing', async (_, path) => {
    const { problems, roots } = await select(project, [path], { folder: '/p' });
    expect([problems, roots.flatMap(([, ...textures]) => textures)]).toEqual([['nothing-selected'], []]);
  });

  test('a bad glob is refused', async () => {
    expect((await select(project, ['ui/[a'], { folder: '/p' })).problems).toEqual(['bad-glob']);
  });

  test('each PATH that selects nothing is named, and the others go on', async () => {
    const { problems } = await selectSources(memoryTree(project), { folder: '/p', paths: ['x', 'ui', 'y*'] });
    expect(problems.map(({ values }) => values.selector)).toEqual(['x', 'y*']);
  });

  test('a file named like a glob is that file', async () => {
    const items = { '/p/a[1].png': image, '/p/a1.png': image };
    expect((await select(items, ['a[1].png'], { folder: '/p' })).roots).toEqual([['/p', 'a[1].png']]);
    expect((await select(items, ['a[12].png'], { folder: '/p' })).roots).toEqual([['/p', 'a1.png']]);
  });

  test('names are listed in NFC and read as they are spelled', async () => {
    const tree = memoryTree({ '/p/a\u0308.png': image });
    const { roots } = await selectSources(tree, { folder: '/p', paths: ['\u00e4.png', '*.png'] });
    expect(roots[0].textures.map(({ path, file }) => [path, file])).toEqual([['\u00e4.png', '/p/a\u0308.png']]);
  });

  test('an --out folder is not searched', async () => {
    const items = { '/p/a.png': image, '/p/other/a.1.png': image };
    expect((await select(items, ['/p'], { out: '/p/other' })).roots).toEqual([['/p', 'a.png']]);
  });

  test('a file system that folds case finds a file under the name that it lists', async () => {
    const tree = memoryTree({ '/p/Leaf.png': image, '/p/a\u0308.png': image });
    const folding = {
      ...tree,
      kind: async (path: string) => (/png$/i.test(path) ? ('file' as const) : tree.kind(path)),
    };
    const { roots } = await selectSources(folding, { folder: '/p', paths: ['LEAF.PNG', '\u00e4.png'] });
    expect(roots[0].textures.map(({ path, file }) => [path, file])).toEqual([
      ['Leaf.png', '/p/Leaf.png'],
      ['\u00e4.png', '/p/a\u0308.png'],
    ]);
  });

  test('folders that cannot be listed are problems, in the order of their names; the others go on', async () => {
    const items = { '/p/a.png': image, '/p/x': { locked: true }, '/p/y': { locked: true } } as const;
    const { roots, problems } = await selectSources(memoryTree(items), { folder: '/', paths: ['/p'] });
    expect(problems.map(({ code, path }) => `${code} ${path}`)).toEqual([
      'folder-unreadable /p/x',
      'folder-unreadable /p/y',
    ]);
    expect(roots.flatMap(({ textures }) => textures.map(({ path }) => path))).toEqual(['a.png']);
  });

  test('sources are not read', async () => {
    const tree = memoryTree(project);
    await selectSources(tree, { folder: '/p', paths: ['.'] });
    expect(tree.calls).toMatchObject({ read: 1 });
  });
});

describe('outputs beside their sources', () => {
  const manifest = (text: string) => ({
    '/p/sizeproof.json': '{"outDir":"."}',
    '/p/a.png': image,
    '/p/a.1.png': image,
    '/p/b.1.png': image,
    '/p/a.mips.json': text,
  });
  const parts = [
    '{"sources":[{"path":"a.png"}],"settings":{"levels":{"first":0}},',
    '"levels":[{"file":{"path":"a.1.png"}}],"targets":[]}',
  ];

  test('are known by their manifest', async () => {
    expect((await select(manifest(parts.join('')), ['/p'])).roots).toEqual([['/p', 'a.png', 'b.1.png']]);
  });

  test('also where a merge has left its marks in it', async () => {
    const text = `${parts[0]}\n<<<<<<< ours\n${parts[1]}\n=======\n"levels":[{"file":{"path":"b.1.png"}}]\n>>>>>>> theirs`;
    expect((await select(manifest(text), ['/p'])).roots).toEqual([['/p', 'a.png']]);
  });

  test('a manifest that is none lists nothing', async () => {
    expect((await select(manifest('{'), ['/p'])).roots).toEqual([['/p', 'a.1.png', 'a.png', 'b.1.png']]);
  });
});

describe('links', () => {
  const items = {
    '/p/sizeproof.json': '{}',
    '/p/real/a.png': image,
    '/p/inside.png': { link: '/p/real/a.png' },
    '/p/outside.png': { link: '/q/b.png' },
    '/p/lost.png': { link: '/p/gone.png' },
    '/p/circle.png': { link: '/p/circle.png' },
    '/p/folder': { link: '/p/real' },
    '/q/b.png': image,
    '/q/way': { link: '/p/real' },
  };

  test('file links inside the root are sources, others and folder links are not', async () => {
    expect(await select(items, ['/p'])).toEqual({ roots: [['/p', 'inside.png', 'real/a.png']], problems: [] });
  });

  test.each(['outside.png', 'lost.png', 'circle.png'])('%s selects nothing by name either', async (path) => {
    expect((await select(items, [path], { folder: '/p' })).problems).toEqual(['nothing-selected']);
  });

  test('a PATH that leads through a link is where it leads', async () => {
    expect((await select(items, ['/q/way/a.png', '/p/folder'])).roots).toEqual([['/p', 'real/a.png']]);
  });
});

describe('several roots', () => {
  const items = {
    '/w/.git/HEAD': '',
    '/w/sizeproof.json': '{"outDir":"out","defaults":{"light":"code"}}',
    '/w/a.png': image,
    '/w/out/a.1.png': image,
    '/w/sub/sizeproof.json': '{"exclude":["x.png"]}',
    '/w/sub/b.png': image,
    '/w/sub/x.png': image,
    '/w/sub/out/c.png': image,
    '/w/sub/built/b.1.png': image,
    '/w/module/.git': 'gitdir: elsewhere',
    '/w/module/d.png': image,
  };

  test('the nearest settings file wins whole, below it and nowhere else', async () => {
    const { roots } = await selectSources(memoryTree(items), { folder: '/w', paths: ['.'] });
    const seen = roots.map(({ folder, file, hidden, textures }) => [
      folder,
      file,
      hidden,
      textures.map(({ path, treatment }) => `${path} ${treatment.light}`),
    ]);
    expect(seen).toEqual([
      ['/w', '/w/sizeproof.json', null, ['a.png code']],
      // A repository within the repository has no settings from outside; the PATH is its root.
      ['/w', null, null, ['module/d.png linear']],
      ['/w/sub', '/w/sub/sizeproof.json', '/w/sizeproof.json', ['b.png linear', 'out/c.png linear']],
    ]);
  });

  test('a broken settings file fails its own root alone', async () => {
    const broken = { ...items, '/w/sizeproof.json': '{"outdir":1}' };
    const { roots, problems } = await selectSources(memoryTree(broken), { folder: '/w', paths: ['.', 'a.png'] });
    expect(problems).toEqual([]);
    expect(
      roots.map(({ folder, textures, problems: own }) => [
        folder,
        textures.length,
        own.map(({ code, path }) => `${code} ${path}`),
      ]),
    ).toEqual([
      ['/w', 0, ['unknown-key /w/sizeproof.json']],
      ['/w', 1, []],
      ['/w/sub', 2, []],
    ]);
  });

  test('a contradiction is told once, and takes its textures out', async () => {
    const text = '{"treatments":[{"match":"a*","alpha":{"store":"premultiplied"}},{"match":"c*","outputs":["ktx2"]}]}';
    const tree = { '/p/sizeproof.json': text, '/p/a.png': image, '/p/a2.png': image, '/p/b.png': image };
    expect(await select(tree, ['/p'])).toEqual({ roots: [['/p', 'b.png']], problems: ['premultiplied-png'] });
  });

  test.each([
    ['not UTF-8', new Uint8Array([0x7b, 0xff, 0x7d]), 'settings-encoding'],
    ['with a byte order mark', '\ufeff{}', undefined],
  ])('a settings file that is %s', async (_, text, code) => {
    expect((await select({ '/p/sizeproof.json': text, '/p/a.png': image }, ['/p'])).problems[0]).toBe(code);
  });

  test('the whole of a root is known from a part', async () => {
    const extents = async (paths: readonly string[]) => {
      const { roots } = await selectSources(memoryTree(items), { folder: '/w', paths });
      return roots.map(({ folder, extent }) => `${folder} ${extent}`);
    };
    expect(await extents(['sub'])).toEqual(['/w/sub whole']);
    expect(await extents(['sub/*.png'])).toEqual(['/w/sub part']);
    expect(await extents(['a.png'])).toEqual(['/w part']);
  });

  test('a settings file that is given replaces the walk', async () => {
    const more = { ...items, '/w/other.json': '{"exclude":["a.png"]}', '/z/far.json': '{"exclude":["a.png"]}' };
    expect((await select(more, ['/w'], { settings: '/w/other.json' })).roots).toEqual([
      ['/w', 'module/d.png', 'out/a.1.png', 'sub/b.png', 'sub/built/b.1.png', 'sub/out/c.png', 'sub/x.png'],
    ]);
    // One from elsewhere has its root where the PATH is.
    expect((await select(more, ['/w/sub'], { settings: '/z/far.json' })).roots).toEqual([
      ['/w/sub', 'b.png', 'out/c.png', 'x.png'],
    ]);
    expect((await select(more, ['/w'], { settings: '/w/gone.json' })).problems).toEqual(['settings-unreadable']);
  });
});

test('a texture is explained alike wherever the work starts', async () => {
  const starts: readonly Partial<Query>[] = [
    { folder: '/p', paths: ['.'] },
    { folder: '/', paths: ['p/ui'] },
    { folder: '/p/ui', paths: ['.'] },
    { folder: '/p/ui/deep', paths: ['../icon.png'] },
    { folder: '/p/docs', paths: ['/p/ui/ic*.png'] },
    { folder: '/', paths: ['p/ui', 'p/b.png'] },
  ];
  const seen = await Promise.all(
    starts.map(async (query) => {
      const { roots } = await selectSources(memoryTree(project), { folder: '/', paths: [], ...query });
      return JSON.stringify([roots[0].folder, roots[0].textures.find(({ path }) => path === 'ui/icon.png')]);
    }),
  );
  expect(new Set(seen).size).toBe(1);
  expect(seen[0]).toContain('"content":"data"');
});
