import { createHash } from 'node:crypto';
import { chmodSync, existsSync, readFileSync, rmSync, symlinkSync, unlinkSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import { expect, test } from 'vitest';
import { Refusal } from '../../core/problem.ts';
import { sortByImpact } from '../../core/review/report.ts';
import { sayVerdict } from '../../core/review/verdict.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { listChanges, readRaw } from '../../extension/node/git/changes.ts';
import { type Range, readRange } from '../../extension/node/git/range.ts';
import { gitEnvironment } from '../../extension/node/git/run.ts';
import { openVersions } from '../../extension/node/git/versions.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { listFiles } from '../../extension/node/review/files.ts';
import { type GlancedEntry, glanceEntries } from '../../extension/node/review/glance.ts';
import { reviewJob } from '../../extension/node/review/job.ts';
import { type Judged, judgedReview } from '../../extension/node/review/judge.ts';
import { listReview, type ReviewList } from '../../extension/node/review/list.ts';
import { reviewEntries } from '../../extension/node/review/run.ts';
import { runReviewJob } from '../../extension/node/workers/review-job.ts';
import { encodePng } from '../demo/paint/png.ts';
import { grain, HARMFUL, makeMixedBranch } from '../fixtures/branch.ts';
import { commit, git, newRepository, testGitEnvironment, write } from '../fixtures/repository.ts';
import { newFolder } from './folder.ts';

Object.assign(process.env, { GIT_CONFIG_GLOBAL: '/dev/null', GIT_CONFIG_NOSYSTEM: '1' });

const running = { cancelled: false };
const one = encodePng(grain(32, 1));
const two = encodePng(grain(32, 2));
const three = encodePng(grain(32, 3));

async function changes(folder: string, range: Range = { kind: 'working' }): Promise<string[]> {
  const { changes: found } = await listChanges(folder, range);
  return found.map(({ status, path, oldPath }) => `${status} ${path}${oldPath === path ? '' : ` < ${oldPath}`}`);
}

async function list(folder: string, range: Range = { kind: 'working' }): Promise<ReviewList> {
  const versions = openVersions(nodeDisk);
  try {
    return await listReview(folder, range, { disk: nodeDisk, versions }, running);
  } finally {
    versions.close();
  }
}

async function glance(folder: string, range?: Range): Promise<GlancedEntry[]> {
  const { entries } = await list(folder, range);
  const versions = openVersions(nodeDisk);
  const found: GlancedEntry[] = [];
  try {
    await glanceEntries(entries, { disk: nodeDisk, versions }, running, (index, each) => {
      found[index] = each;
    });
  } finally {
    versions.close();
  }
  return found;
}

/** Every entry compared in this very thread, the most harmful first. */
async function review(folder: string, range?: Range): Promise<Judged[]> {
  const { entries } = await list(folder, range);
  const versions = openVersions(nodeDisk);
  const judged: Judged[] = [];
  const bench = { ports: nodePorts, cancel: running, versions, admit: async () => undefined };
  const run = async (
    jobs: readonly Parameters<typeof runReviewJob>[0][],
    done: (index: number, outcome: never) => void,
  ) => {
    for (const [index, job] of jobs.entries()) done(index, (await runReviewJob(job, bench)) as never);
  };
  try {
    await reviewEntries(entries, { run: run as never, memoryBytes: 2 ** 28 }, (_, each) =>
      judged.push(judgedReview(each)),
    );
  } finally {
    versions.close();
  }
  return sortByImpact(judged);
}

const saidOf = (judged: readonly Judged[]) => judged.map(({ path, verdict }) => `${path}: ${sayVerdict(verdict)}`);

const codeOf = async (act: Promise<unknown>): Promise<string> => {
  const error = await act.then(
    () => null,
    (thrown) => thrown,
  );
  if (!(error instanceof Refusal)) throw error ?? new Error('Expected a refusal');
  return error.problem.code;
};

test('ranges are read as Git spells them', () => {
  expect(readRange(undefined)).toEqual({ kind: 'working' });
  expect(readRange('v1')).toEqual({ kind: 'commit', commit: 'v1' });
  expect(readRange('a..b')).toEqual({ kind: 'refs', from: 'a', to: 'b' });
  expect(readRange('a..')).toEqual({ kind: 'refs', from: 'a', to: 'HEAD' });
  expect(readRange('main...')).toEqual({ kind: 'branch', base: 'main', tip: 'HEAD' });
  for (const bad of ['--output=x', 'a..-x', '-x...b']) expect(() => readRange(bad)).toThrow(Refusal);
});

test('working tree, index, commit, branch and two commits are five ranges', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': one, 'b.png': two });
  git(folder, 'switch', '--quiet', '--create', 'side');
  const side = commit(folder, { 'c.png': three });
  git(folder, 'switch', '--quiet', 'main');
  const main = commit(folder, { 'b.png': null });
  write(folder, { 'a.png': two });
  git(folder, 'add', 'a.png');
  write(folder, { 'a.png': three, 'new.png': one });
  expect(await changes(folder)).toEqual(['changed a.png', 'added new.png']);
  expect(await changes(folder, { kind: 'index' })).toEqual(['changed a.png']);
  expect(await changes(folder, { kind: 'commit', commit: side })).toEqual(['added c.png']);
  expect(await changes(folder, { kind: 'commit', commit: 'HEAD~1' })).toEqual(['added a.png', 'added b.png']);
  expect(await changes(folder, { kind: 'branch', base: 'main', tip: 'side' })).toEqual(['added c.png']);
  expect(await changes(folder, { kind: 'refs', from: main, to: side })).toEqual(['added b.png', 'added c.png']);
});

test('two unrelated commits are compared as they are, and have no base', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': one });
  git(folder, 'switch', '--quiet', '--orphan', 'other');
  commit(folder, { 'b.png': two });
  expect(await changes(folder, { kind: 'refs', from: 'main', to: 'other' })).toEqual(['removed a.png', 'added b.png']);
  expect(await codeOf(changes(folder, { kind: 'branch', base: 'main', tip: 'other' }))).toBe('git-no-base');
});

test('a repository without a commit, and a detached one', async () => {
  const folder = newFolder();
  newRepository(folder);
  write(folder, { 'a.png': one });
  expect(await changes(folder)).toEqual(['added a.png']);
  expect(await codeOf(changes(folder, { kind: 'commit', commit: 'HEAD' }))).toBe('git-ref');
  const first = commit(folder, {});
  commit(folder, { 'a.png': two });
  git(folder, 'checkout', '--quiet', '--detach', first);
  write(folder, { 'a.png': three });
  expect(await changes(folder)).toEqual(['changed a.png']);
});

test('renames, also edited ones; names with spaces, quotes, line ends and a dash in front', async () => {
  const names = ['-x.png', 'a b.png', 'q"|`.png', 'n\nl.png', 'ä.png'];
  const folder = newFolder();
  newRepository(folder, Object.fromEntries(names.map((name, at) => [name, encodePng(grain(16, at))])));
  commit(folder, { '-x.png': null, 'y.png': encodePng(grain(16, 0)), 'ä.png': one, 'n\nl.png': two });
  expect(await changes(folder, { kind: 'commit', commit: 'HEAD' })).toEqual([
    'changed n\nl.png',
    'renamed y.png < -x.png',
    'changed ä.png',
  ]);
});

test('a link and a folder are no pictures, and the rest goes on', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': one, 'b.png': one, 'c.png': one });
  unlinkSync(join(folder, 'a.png'));
  symlinkSync('b.png', join(folder, 'a.png'));
  commit(folder, { 'c.png': two });
  expect(await changes(folder, { kind: 'commit', commit: 'HEAD' })).toEqual(['retyped a.png', 'changed c.png']);
  const judged = await review(folder, { kind: 'commit', commit: 'HEAD' });
  expect(saidOf(judged)).toEqual([
    expect.stringMatching(/^a\.png: Cannot be compared: after: This is a link, not a file\./),
    expect.stringMatching(/^c\.png: 100 % of the texels/),
  ]);
});

test('a merge conflict is named', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': one });
  git(folder, 'switch', '--quiet', '--create', 'side');
  commit(folder, { 'a.png': two });
  git(folder, 'switch', '--quiet', 'main');
  commit(folder, { 'a.png': three });
  expect(() => git(folder, 'merge', 'side')).toThrow();
  expect((await review(folder)).map(({ problems }) => problems.map(({ code }) => code))).toEqual([['git-unmerged']]);
});

test('an object that is damaged or gone is a line in its place, and the rest goes on', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': one, 'b.png': one, 'c.png': one });
  commit(folder, { 'a.png': two, 'b.png': three, 'c.png': encodePng(grain(32, 4)) });
  const objectOf = (name: string) => {
    const id = git(folder, 'rev-parse', `HEAD:${name}`).trim();
    return join(folder, '.git/objects', id.slice(0, 2), id.slice(2));
  };
  const damaged = objectOf('a.png');
  chmodSync(damaged, 0o644);
  writeFileSync(damaged, readFileSync(damaged).subarray(0, 40));
  rmSync(objectOf('b.png'), { force: true });
  const range: Range = { kind: 'commit', commit: 'HEAD' };
  const judged = await review(folder, range);
  expect(Object.fromEntries(judged.map(({ path, problems }) => [path, problems[0]?.code]))).toEqual({
    'a.png': expect.stringMatching(/^git-object-(damaged|missing)$/),
    'b.png': 'git-object-missing',
    'c.png': undefined,
  });
  expect((await glance(folder, range)).map((each) => each.glance.verdict.kind)).toEqual([
    'unreadable',
    'unreadable',
    'unread',
  ]);
});

test('a HEAD whose commit is gone is damage, not an empty repository', async () => {
  const folder = newFolder();
  newRepository(folder, { 'a.png': one });
  const id = git(folder, 'rev-parse', 'HEAD').trim();
  rmSync(join(folder, '.git/objects', id.slice(0, 2), id.slice(2)), { force: true });
  expect(await codeOf(changes(folder))).toBe('git-failed');
});

test('outside a repository, and without Git', async () => {
  const folder = newFolder();
  expect(await codeOf(changes(folder))).toBe('git-no-repository');
  const path = process.env.PATH;
  process.env.PATH = folder;
  try {
    expect(await codeOf(changes(folder))).toBe('git-missing');
  } finally {
    process.env.PATH = path;
  }
});

test('a shallow clone says what it lacks', async () => {
  const origin = newFolder();
  newRepository(origin, { 'a.png': one });
  git(origin, 'switch', '--quiet', '--create', 'work');
  commit(origin, { 'a.png': two });
  commit(origin, { 'a.png': three });
  const folder = newFolder();
  git(folder, 'clone', '--quiet', '--depth=1', '--no-single-branch', `file://${origin}`, 'clone');
  const clone = join(folder, 'clone');
  expect(await codeOf(changes(clone, { kind: 'commit', commit: 'HEAD' }))).toBe('git-shallow');
  expect(await codeOf(changes(clone, { kind: 'branch', base: 'origin/main', tip: 'HEAD' }))).toBe('git-shallow');
  expect(await codeOf(changes(clone, { kind: 'refs', from: 'HEAD~1', to: 'HEAD' }))).toBe('git-shallow');
  expect(await changes(clone, { kind: 'refs', from: 'origin/main', to: 'HEAD' })).toEqual(['changed a.png']);
});

test('nothing that a repository names is run', async () => {
  const folder = newFolder();
  newRepository(folder, {
    'a.png': one,
    'b.png': two,
    'c.png': one,
    '.gitattributes': '*.png diff=spy filter=spy\nb.png filter=other\n',
  });
  const spies = newFolder();
  const spy = (name: string) => {
    const path = join(spies, name);
    writeFileSync(path, `#!/bin/sh\ntouch '${spies}/${name}.ran'\ncat\n`);
    chmodSync(path, 0o755);
    return path;
  };
  git(folder, 'config', 'diff.spy.textconv', spy('textconv'));
  git(folder, 'config', 'diff.spy.command', spy('command'));
  git(folder, 'config', 'diff.external', spy('external'));
  git(folder, 'config', 'core.fsmonitor', spy('fsmonitor'));
  git(folder, 'config', 'core.pager', spy('pager'));
  git(folder, 'config', 'core.hooksPath', spies);
  git(folder, 'config', 'filter.spy.clean', spy('clean'));
  git(folder, 'config', 'filter.spy.smudge', spy('smudge'));
  git(folder, 'config', 'filter.other.process', spy('process'));
  git(folder, 'config', 'filter.spy.required', 'true');
  spy('post-index-change');
  write(folder, { 'a.png': two, 'b.png': null, 'moved.png': two, 'c.png': one });
  // The spies do run where Git is asked in the plain way.
  expect(() => git(folder, 'status', '--porcelain')).not.toThrow();
  expect(existsSync(join(spies, 'fsmonitor.ran'))).toBe(true);
  expect(existsSync(join(spies, 'clean.ran'))).toBe(true);
  for (const name of ['fsmonitor', 'clean', 'process', 'smudge', 'post-index-change'])
    rmSync(join(spies, `${name}.ran`), { force: true });

  expect(await changes(folder)).toEqual(['changed a.png', 'removed b.png', 'added moved.png']);
  await review(folder);
  await glance(folder, { kind: 'index' });
  const left = [
    'textconv',
    'command',
    'external',
    'fsmonitor',
    'pager',
    'clean',
    'smudge',
    'process',
    'post-index-change',
  ];
  expect(left.filter((name) => existsSync(join(spies, `${name}.ran`)))).toEqual([]);
});

test("the environment keeps the user's settings and drops what leads elsewhere", () => {
  const kept = gitEnvironment({
    PATH: 'p',
    GIT_TRACE: '/x',
    GIT_DIR: '/y',
    GIT_EXTERNAL_DIFF: 'z',
    GIT_CONFIG_GLOBAL: '/c',
  });
  expect(kept).toMatchObject({ PATH: 'p', GIT_CONFIG_GLOBAL: '/c', GIT_OPTIONAL_LOCKS: '0', LC_ALL: 'C' });
  expect(Object.keys(kept)).not.toEqual(expect.arrayContaining(['GIT_TRACE']));
  for (const name of ['GIT_TRACE', 'GIT_DIR', 'GIT_EXTERNAL_DIFF']) expect(kept).not.toHaveProperty(name);
});

test('a line of Git that nobody knows is a failure', () => {
  expect(() => readRaw(Buffer.from('warning: something\0'))).toThrow(Refusal);
});

const pointerTo = (bytes: Uint8Array) => {
  const oid = createHash('sha256').update(bytes).digest('hex');
  const text = `version https://git-lfs.github.com/spec/v1\noid sha256:${oid}\nsize ${bytes.length}\n`;
  return { text, store: `.git/lfs/objects/${oid.slice(0, 2)}/${oid.slice(2, 4)}/${oid}` };
};

test('Git LFS pointers are followed to the local store, checked, or said to be missing', async () => {
  const folder = newFolder();
  const [was, is, gone, wrong] = [one, two, three, encodePng(grain(32, 4))].map(pointerTo);
  newRepository(folder, { 'a.png': was.text, 'b.png': was.text, 'c.png': was.text });
  commit(folder, { 'a.png': is.text, 'b.png': gone.text, 'c.png': wrong.text });
  write(folder, { [was.store]: one, [is.store]: two, [wrong.store]: one });
  const judged = await review(folder, { kind: 'commit', commit: 'HEAD' });
  expect(Object.fromEntries(judged.map(({ path, problems }) => [path, problems[0]?.code]))).toEqual({
    'a.png': undefined,
    'b.png': 'lfs-missing',
    'c.png': 'lfs-damaged',
  });
  expect(judged.every(({ path, failed }) => failed === (path !== 'a.png'))).toBe(true);
  // A checked-out file is the file that its pointer names.
  commit(folder, { 'a.png': was.text, 'b.png': null, 'c.png': null });
  write(folder, { 'a.png': one });
  expect((await glance(folder)).map((each) => each.glance.verdict.kind)).toEqual(['same']);
});

test.each([
  ['relative', 'kept/large', (folder: string) => join(folder, '.git/kept/large')],
  ['absolute', null, () => newFolder()],
])('Git LFS keeps its files where the repository says: %s', async (_, named, at) => {
  const folder = newFolder();
  const [was, is] = [one, two].map(pointerTo);
  newRepository(folder, { 'a.png': was.text });
  commit(folder, { 'a.png': is.text, 'copy.png': is.text });
  const store = at(folder);
  git(folder, 'config', 'lfs.storage', named ?? store);
  for (const [{ store: path }, bytes] of [[was, one] as const, [is, two] as const]) {
    write(store, { [path.slice('.git/lfs/'.length)]: bytes });
  }
  const judged = await review(folder, { kind: 'commit', commit: 'HEAD' });
  expect(judged.flatMap(({ problems }) => problems)).toEqual([]);
  // Two files are followed there, too.
  const { entries } = await listFiles(nodeDisk, folder, ['a.png', 'copy.png']);
  const versions = openVersions(nodeDisk);
  expect(Buffer.from(await versions.content(entries[0].after!.file, 1e6)).equals(Buffer.from(two))).toBe(true);
  versions.close();
});

test('a repository that names its objects by SHA-256 is reviewed like any other', async () => {
  const folder = newFolder();
  git(folder, 'init', '--quiet', '--initial-branch=main', '--object-format=sha256');
  const pointer = pointerTo(two);
  const first = commit(folder, { 'a.png': one, 'b.png': two, 'c.png': pointer.text });
  expect(first).toMatch(/^[0-9a-f]{64}$/);
  expect(await changes(folder, { kind: 'commit', commit: first })).toHaveLength(3);
  write(folder, { 'a.png': three, [pointer.store]: two, 'c.png': two });
  expect(await changes(folder)).toEqual(['changed a.png', 'changed c.png']);
  // A checked-out file is the file that its pointer names.
  expect((await glance(folder)).map((each) => each.glance.verdict.kind)).toEqual(['unread', 'same']);
  expect((await review(folder)).map(({ path }) => path)).toContain('a.png');
  const second = commit(folder, { 'b.png': null, 'd.png': two });
  expect(await changes(folder, { kind: 'commit', commit: second })).toContain('renamed d.png < b.png');
  // A file that became the pointer to itself is the same file, by the repository's own hash.
  write(folder, { 'd.png': pointer.text });
  const verdicts = (await glance(folder)).map((each) => [each.entry.path, each.glance.verdict.kind]);
  expect(verdicts).toContainEqual(['d.png', 'same']);
});

test('submodules are entered: their commits, their files, and those that are not there', async () => {
  const library = newFolder();
  newRepository(library, { 'a.png': one, 'sizeproof.json': '{ "defaults": { "kernel": "box" } }' });
  const folder = newFolder();
  newRepository(folder, { 'own.png': one });
  git(folder, '-c', 'protocol.file.allow=always', 'submodule', '--quiet', 'add', library, 'lib');
  commit(folder, {});
  const inner = join(folder, 'lib');
  commit(inner, { 'a.png': two });
  write(folder, { 'lib/b.png': three });
  expect(await changes(folder)).toEqual(['changed lib/a.png', 'added lib/b.png']);
  const entries = (await list(folder)).entries;
  expect(entries[0].before?.treatment?.kernel.minify.name).toBe('box');
  rmSync(join(folder, 'lib/b.png'));
  commit(folder, {});
  expect(await changes(folder, { kind: 'commit', commit: 'HEAD' })).toEqual(['changed lib/a.png']);
  rmSync(inner, { recursive: true, force: true });
  const { problems } = await listChanges(folder, { kind: 'commit', commit: 'HEAD' });
  expect(problems.map(({ code }) => code)).toEqual(['submodule-missing']);
});

test('of ten mixed changes the two harmful ones come first', async () => {
  const folder = newFolder();
  makeMixedBranch(folder);
  const judged = await review(folder, { kind: 'branch', base: 'main', tip: 'work' });
  expect(judged).toHaveLength(10);
  expect(judged.slice(0, 2).map(({ path }) => path)).toEqual(HARMFUL);
  expect(judged.slice(2).flatMap(({ impact }) => impact.harms)).toEqual([]);
  expect(judged.map(({ verdict }) => verdict.kind)).toEqual([
    ...['alpha', 'resized', 'texels', 'removed', 'added', 'texels', 'same', 'hidden', 'metadata', 'encoded'],
  ]);
});

test('a treatment that changes shows its textures before and after, and no other', async () => {
  const folder = newFolder();
  const settings = (kernel: string) => JSON.stringify({ treatments: [{ match: 'a/**', kernel }] });
  newRepository(folder, { 'sizeproof.json': settings('box'), 'a/x.png': one, 'b/y.png': two, 'built/a/x.1.png': one });
  commit(folder, { 'sizeproof.json': settings('lanczos3') });
  const [entry, ...more] = await review(folder, { kind: 'commit', commit: 'HEAD' });
  expect(more).toEqual([]);
  expect(entry).toMatchObject({ path: 'a/x.png', status: 'treated', verdict: { kind: 'treated' } });
  expect(entry.review?.sizes[0].difference?.texels).toBe(0);
  expect(entry.review?.sizes[1].difference?.texels).toBeGreaterThan(0);
  // Broken settings are said once, in place.
  commit(folder, { 'sizeproof.json': '{ "defaults": { "kernl": "box" } }', 'a/x.png': two });
  const [broken] = await review(folder, { kind: 'commit', commit: 'HEAD' });
  expect(broken.problems.map(({ code }) => code)).toEqual(['unknown-key']);
  expect(broken.verdict.kind).toBe('texels');
});

test('a source that changed without its manifest is stale; outputs and excluded files are counted', async () => {
  const folder = newFolder();
  newRepository(folder, {
    'sizeproof.json': '{ "exclude": ["docs/**"] }',
    'a.png': one,
    'b.png': one,
    'docs/shot.png': one,
    'built/a.mips.json': '{}',
    'built/b.mips.json': '{}',
    'built/b.1.png': one,
  });
  commit(folder, {
    'a.png': two,
    'b.png': two,
    'docs/shot.png': two,
    'built/b.1.png': two,
    'built/b.mips.json': '{ "format": 1 }',
  });
  const found = await list(folder, { kind: 'commit', commit: 'HEAD' });
  expect(found.entries.map(({ path, manifest }) => `${path} ${manifest}`)).toEqual(['a.png stale', 'b.png fresh']);
  expect([found.outputs, found.excluded]).toEqual([1, 1]);
});

test('a job names both versions as plain data', async () => {
  const folder = newFolder();
  makeMixedBranch(folder);
  const { entries } = await list(folder, { kind: 'branch', base: 'main', tip: 'work' });
  const job = reviewJob(entries[0], 5);
  expect(structuredClone(job)).toEqual(job);
  expect(testGitEnvironment().GIT_CONFIG_GLOBAL).toBe('/dev/null');
});
