import { mkdtempSync, realpathSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Problem } from '../../core/problem.ts';
import { openReviewDoor } from '../../extension/node/review/door.ts';
import { makeMixedBranch } from '../fixtures/branch.ts';
import { commit, git, newRepository } from '../fixtures/repository.ts';
import { bundleOnce } from './bundle.ts';

const never = { isCancellationRequested: false, onCancellationRequested: () => ({ dispose() {} }) };
const door = openReviewDoor(pathToFileURL('/nowhere/pool.worker.js'));
const folder = realpathSync(mkdtempSync(join(tmpdir(), 'sizeproof-door-')));

beforeAll(() => makeMixedBranch(folder));
afterAll(() => rmSync(folder, { recursive: true, force: true }));

test('commits and branches are those that Git itself prints', async () => {
  const commits = await door.commits(folder, null, 10);
  expect(commits.map(({ id }) => id)).toEqual(git(folder, 'log', '--format=%H').trim().split('\n'));
  expect(commits[0]).toMatchObject({ subject: 'x', author: 'A', time: 1577836800 });
  const branches = await door.branches(folder);
  expect(branches.map(({ name, current }) => [name, current]).sort()).toEqual([
    ['main', 'no'],
    ['work', 'yes'],
  ]);
});

test('commits of one file are those that touched it, whatever its name', async () => {
  const odd = realpathSync(mkdtempSync(join(tmpdir(), 'sizeproof-door-')));
  newRepository(odd, { 'a[1]*.png': 'one' });
  const touched = git(odd, 'rev-parse', 'HEAD').trim();
  commit(odd, { 'a1.png': 'other' });
  expect((await door.commits(odd, `${odd}/a[1]*.png`, 10)).map(({ id }) => id)).toEqual([touched]);
  rmSync(odd, { recursive: true, force: true });
});

test('an empty repository has no commits and no branches', async () => {
  const empty = realpathSync(mkdtempSync(join(tmpdir(), 'sizeproof-door-')));
  newRepository(empty);
  expect(await door.commits(empty, null, 10)).toEqual([]);
  expect(await door.branches(empty)).toEqual([]);
  rmSync(empty, { recursive: true, force: true });
});

test('sides of a page are the files of both commits, as long as Git says', async () => {
  const range = { kind: 'branch', base: 'main', tip: 'work' } as const;
  const session = await door.open({ kind: 'range', folder, range }, never);
  const at = session.items.findIndex(({ path }) => path === 'foliage/fern.png');
  const { before, after } = await session.sides(at);
  const sizeOf = (side: typeof before) => {
    if (side.kind !== 'file') throw new Error('Expected a file');
    return side.bytes.byteLength;
  };
  expect(sizeOf(before)).toBe(Number(git(folder, 'cat-file', '-s', 'main:foliage/fern.png')));
  expect(sizeOf(after)).toBe(Number(git(folder, 'cat-file', '-s', 'work:foliage/fern.png')));
  const added = session.items.findIndex(({ path }) => path === 'ui/fresh.png');
  expect((await session.sides(added)).before).toEqual({ kind: 'none' });
  session.close();
});

test('a review holds no more memory than it is allowed', async () => {
  const real = openReviewDoor(pathToFileURL(`${await bundleOnce()}/pool.worker.js`));
  const range = { kind: 'branch', base: 'main', tip: 'work' } as const;
  const session = await real.open({ kind: 'range', folder, range }, never);
  const at = session.items.findIndex(({ path }) => path === 'foliage/fern.png');
  const codesOf = async (memoryBytes: number | null) => {
    const problems: Problem[] = [];
    await session.review([at], { jobs: 1, memoryBytes }, never, (_, known) => problems.push(...known.problems));
    return problems.map(({ code }) => code);
  };
  expect(await codesOf(1000)).toContain('too-much-memory');
  expect(await codesOf(null)).not.toContain('too-much-memory');
  session.close();
});
