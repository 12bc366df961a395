import { readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { encodePng } from '../demo/paint/png.ts';
import { blades, grain, HARMFUL, halved, makeMixedBranch } from '../fixtures/branch.ts';
import { commit, newRepository, testGitEnvironment } from '../fixtures/repository.ts';
import { top } from '../house/tree.ts';
import { newFolder, putFiles } from '../node/folder.ts';
import { type Ran, sizeproof } from './cli.ts';

const env = Object.fromEntries(Object.entries(testGitEnvironment()).filter(([name]) => name.startsWith('GIT_')));

function run(folder: string, ...words: readonly string[]): Promise<Ran> {
  return sizeproof(['review', ...words], { folder, env: env as Record<string, string> });
}

test('a branch of ten changes: the harmful ones first, in the table, the document and the Markdown', async () => {
  const folder = newFolder();
  makeMixedBranch(folder);
  const report = join(newFolder(), 'new/report.md');
  const { code, stdout, stderr } = await run(folder, 'main...', '--markdown', report);
  expect([code, stderr]).toEqual([0, '']);
  const textures = [...stdout.matchAll(/^ *\d+\.\d {2}\w+ +(.+)$/gm)].map(([, name]) => name);
  expect(textures).toHaveLength(10);
  expect(textures.slice(0, 2)).toEqual(HARMFUL);
  expect(stdout).toMatch(/harm: 100 % of the coverage is lost at level \d/);
  expect(stdout).toMatch(/10 textures changed, 2 with harm, 0 over a limit or unreadable\.\n$/);

  // README's example, but for the sizes of files, which another zlib writes otherwise.
  const [, ...lines] = stdout.split('\n');
  const example = lines
    .slice(0, 5)
    .join('\n')
    .replace(/; file .*$/, '');
  expect(readFileSync(join(top, 'README.md'), 'utf8')).toContain(`\`\`\`\n${example}\n\`\`\``);

  const json = JSON.parse((await run(folder, 'main...', '--json')).stdout);
  expect(json.textures.map((each: { path: string }) => each.path).slice(0, 2)).toEqual(HARMFUL);
  expect(json).toMatchObject({ format: 1, command: 'review', outputs: 0, excluded: 0, summary: { failed: 0 } });
  expect(json.textures[1]).toMatchObject({
    status: 'changed',
    harms: [{ name: 'texels-lost', severity: 0.75 }],
    verdict: { kind: 'resized' },
    before: { extent: { width: 128, height: 128 } },
    after: { extent: { width: 64, height: 64 } },
  });

  const page = join(newFolder(), 'report.html');
  expect(await run(folder, 'main...', '--html', page, '--quiet')).toMatchObject({ code: 0, stdout: '', stderr: '' });
  const html = readFileSync(page, 'utf8');
  // The page itself is opened in a browser by the tests of the page.
  const carried = JSON.parse(/<script[^>]* id="review"[^>]*>(.*?)<\/script>/s.exec(html)![1]);
  expect(carried.textures.map((each: { path: string }) => each.path)).toEqual(
    textures.map((name) => name.replace(/ \(was .*\)$/, '')),
  );
  expect(carried.textures[0].impact.harms[0]).toMatchObject({ name: 'coverage-lost' });
  expect(html).toContain('id="before-0"');
  expect(html).not.toMatch(/(src|href)="?(https?:)?\/\//);

  const rows = readFileSync(report, 'utf8').match(/^\| \d.*$/gm) ?? [];
  expect(
    rows.map((row) =>
      row
        .split(' | ')[1]
        .replace(/ \(\w+\)$/, '')
        .replaceAll('\\', ''),
    ),
  ).toEqual(textures);
});

test.each<[string, object, number, string]>([
  ['coverage', { coverageLoss: 0.2 }, 1, 'review-coverage'],
  ['coverage that may go', { coverageLoss: 1 }, 0, ''],
  ['texels', { texelLoss: 0.5 }, 1, 'review-texels'],
  ['texels that may go', { texelLoss: 0.75 }, 0, ''],
  ['memory', { memoryGrowth: 1000 }, 1, 'review-memory'],
  ['the file', { fileGrowth: 0.5 }, 1, 'review-file'],
  ['the file that may grow', { fileGrowth: 100 }, 0, ''],
  ['light', { lightChange: 0.1 }, 1, 'review-light'],
  ['any harm', { harm: 'fail' }, 1, 'review-harm'],
  ['no limit', {}, 0, ''],
])('the exit code follows limits of %s', async (_, limits, expected, problem) => {
  const folder = newFolder();
  const settings = {
    treatments: [
      { match: '**', review: limits },
      { match: 'fern.png', alpha: { use: 'mask', keepCoverage: false } },
    ],
  };
  const dim = grain(64, 5);
  newRepository(folder, {
    'sizeproof.json': JSON.stringify(settings),
    'fern.png': encodePng(blades(5)),
    'barrel.png': encodePng(grain(64, 1)),
    'sign.png': encodePng(halved(grain(64, 2))),
    'wall.png': encodePng(dim),
  });
  dim.codes.forEach((value, at) => {
    dim.codes[at] = value >> 1;
  });
  commit(folder, {
    'fern.png': encodePng(blades(3)),
    'barrel.png': encodePng(halved(grain(64, 1))),
    'sign.png': encodePng(grain(64, 2)),
    'wall.png': encodePng(dim),
  });
  const { code, stderr } = await run(folder, 'HEAD', '--quiet');
  expect(code).toBe(expected);
  const codes = [...new Set([...stderr.matchAll(/: error ([\w-]+):/g)].map(([, found]) => found))];
  expect(codes).toEqual(problem === '' ? [] : [problem]);
});

test('two files are compared without a repository', async () => {
  const folder = newFolder({ 'a.png': encodePng(grain(32, 1)), 'b.png': encodePng(grain(32, 2)) });
  const { code, stdout } = await run(folder, '--files', 'a.png', 'b.png');
  expect(code).toBe(0);
  expect(stdout).toMatch(/b\.png \(was a\.png\)\n.*100 % of the texels changed/);
  const gone = await run(folder, '--files', 'a.png', 'no.png');
  expect([gone.code, gone.stderr]).toEqual([3, expect.stringMatching(/^no\.png:1:1: error source-unreadable:/)]);
});

test('bad sides are lines in their places', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': encodePng(grain(32, 1)), 'b.png': encodePng(grain(32, 2)) });
  const good = encodePng(grain(32, 3));
  commit(folder, { 'a.png': good.slice(0, -9), 'b.png': encodePng(grain(32, 4)), 'c.png': 'no image' });
  const { code, stdout, stderr } = await run(folder, 'HEAD');
  expect(code).toBe(3);
  expect(stderr).toMatch(/^a\.png:1:1: error png-file-truncated:/m);
  expect(stderr).toMatch(/^c\.png:1:1: error png-signature:/m);
  expect(stdout).toMatch(/b\.png\n.*texels changed/);
  // What was damaged before and is put right is no error.
  commit(folder, { 'a.png': good, 'c.png': null });
  const after = await run(folder, 'HEAD');
  expect([after.code, after.stderr]).toEqual([0, expect.stringMatching(/^a\.png:1:1: warning png-file-truncated:/)]);
});

test.each<[string[], number, RegExp]>([
  [['--', '-x'], 2, /git-ref-dash/],
  [['nowhere'], 2, /git-ref: There is no commit nowhere/],
  [['a', 'b'], 2, /option-value: Expected one range at most/],
  [['--files', 'a'], 2, /option-value: Expected two files/],
  [['--staged', 'a'], 2, /option-value: Expected no range/],
])('%j is refused', async (words, expected, said) => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': encodePng(grain(8, 1)) });
  const { code, stderr } = await run(folder, ...words);
  expect([code, stderr]).toEqual([expected, expect.stringMatching(said)]);
});

test('outside a repository it is said, and in one without changes too', async () => {
  const folder = newFolder({ 'a.png': encodePng(grain(8, 1)) });
  expect(await run(folder)).toMatchObject({ code: 2, stderr: expect.stringMatching(/git-no-repository/) });
  newRepository(folder);
  commit(folder, {});
  expect(await run(folder)).toMatchObject({ code: 0, stdout: expect.stringMatching(/\n0 textures changed,/) });
  writeFileSync(join(folder, 'a.png'), encodePng(grain(8, 2)));
  putFiles(folder, { 'b.png': encodePng(grain(8, 3)) });
  const { stdout } = await run(folder, '--headers');
  expect(stdout).toMatch(/HEAD \([0-9a-f]{10}\) to working tree/);
  expect(stdout).toMatch(/added +b\.png[\s\S]*changed +a\.png/);
});
