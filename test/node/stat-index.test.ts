import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import type { Disk } from '../../extension/node/files/disk.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { cacheFolder, openStatIndex } from '../../extension/node/project/stat-index.ts';
import { sha256 } from '../manifest/sample.ts';
import { faultyDisk } from './disks.ts';
import { filesBelow, newFolder } from './folder.ts';

function readingDisk(read: string[]): Disk {
  return {
    ...nodeDisk,
    read: (path) => {
      read.push(path);
      return nodeDisk.read(path);
    },
  };
}

/** A root with one file that was last changed a minute ago, and what reads of it happened. */
function setUp() {
  const root = newFolder({ 'a leaf.png': 'leaf' });
  const cache = newFolder();
  const path = `${root}/a leaf.png`;
  age(path, 60);
  const read: string[] = [];
  const open = (now?: () => number) => openStatIndex(readingDisk(read), cache, root, now);
  const leafReads = () => read.filter((each) => each === path).length;
  return { cache, path, open, leafReads, read };
}

function age(path: string, seconds: number) {
  const time = Date.now() / 1000 - seconds;
  fs.utimesSync(path, time, time);
}

test('a file is read once, then never until its stat moves', async () => {
  const { path, open, leafReads } = setUp();
  for (let run = 0; run < 3; run++) {
    const index = await open();
    expect(await index.hash(path)).toBe(sha256('leaf'));
    await index.save();
    expect(leafReads()).toBe(1);
  }
  fs.writeFileSync(path, 'LEAF');
  age(path, 50);
  expect(await (await open()).hash(path)).toBe(sha256('LEAF'));
  expect(leafReads()).toBe(2);
});

test('a replaced file of equal size and time is read again, going by its inode', async () => {
  const { path, open, leafReads } = setUp();
  const index = await open();
  await index.hash(path);
  const { mtimeMs } = fs.statSync(path);
  fs.writeFileSync(`${path}.new`, 'LEAF');
  fs.renameSync(`${path}.new`, path);
  fs.utimesSync(path, mtimeMs / 1000, mtimeMs / 1000);
  expect(await index.hash(path)).toBe(sha256('LEAF'));
  expect(leafReads()).toBe(2);
});

test('a file changed less than 2 s before it was hashed is hashed again', async () => {
  const { path, open, leafReads } = setUp();
  const { mtimeMs } = fs.statSync(path);
  const early = await open(() => mtimeMs + 1999);
  await early.hash(path);
  await early.hash(path);
  expect(leafReads()).toBe(2);
  const late = await open(() => mtimeMs + 2000);
  await late.hash(path);
  await late.hash(path);
  expect(leafReads()).toBe(3);
});

test('a missing file has no hash and is forgotten', async () => {
  const { path, open, cache } = setUp();
  const index = await open();
  await index.hash(path);
  fs.rmSync(path);
  expect(await index.hash(path)).toBeNull();
  await index.save();
  expect(Object.values(filesBelow(cache)).join()).not.toContain('leaf.png');
});

test('nothing learned writes nothing', async () => {
  const { path, open, cache } = setUp();
  const first = await open();
  await first.hash(path);
  await first.save();
  const [file] = fs.readdirSync(cache);
  const before = fs.statSync(`${cache}/${file}`);
  const second = await open();
  await second.hash(path);
  await second.save();
  expect(fs.statSync(`${cache}/${file}`).ino).toBe(before.ino);
});

test.each([
  '',
  'other header\n',
  'sizeproof stat index 1\nnonsense\n\0\0\0',
  'sizeproof stat index 1\nx NaN NaN NaN NaN p\n',
])('a damaged index (%j) is ignored and made anew', async (damage) => {
  const { path, open, cache } = setUp();
  const first = await open();
  await first.hash(path);
  await first.save();
  const [file] = fs.readdirSync(cache);
  const whole = fs.readFileSync(`${cache}/${file}`, 'utf8');
  fs.writeFileSync(`${cache}/${file}`, damage);
  const second = await open(() => Number(whole.split(' ')[7]));
  expect(await second.hash(path)).toBe(sha256('leaf'));
  await second.save();
  expect(fs.readFileSync(`${cache}/${file}`, 'utf8')).toBe(whole);
});

test('an index of another form is not believed', async () => {
  const { path, open, cache } = setUp();
  const first = await open();
  await first.hash(path);
  await first.save();
  const [file] = fs.readdirSync(cache);
  const text = fs.readFileSync(`${cache}/${file}`, 'utf8');
  fs.writeFileSync(`${cache}/${file}`, text.replace('index 1', 'index 2').replace(sha256('leaf'), sha256('other')));
  expect(await (await open()).hash(path)).toBe(sha256('leaf'));
});

test('a cache that cannot be written is done without', async () => {
  const { path } = setUp();
  const disk = faultyDisk((name) => (name === 'write' ? 'full' : null));
  const index = await openStatIndex(disk, newFolder(), '/', Date.now);
  expect(await index.hash(path)).toBe(sha256('leaf'));
  await index.save();
  const none = await openStatIndex(nodeDisk, null, '/');
  expect(await none.hash(path)).toBe(sha256('leaf'));
  await none.save();
});

test.each([
  ['linux', { HOME: '/home/a' }, '/home/a/.cache/sizeproof'],
  ['linux', { HOME: '/home/a', XDG_CACHE_HOME: '/fast' }, '/fast/sizeproof'],
  ['darwin', { HOME: '/Users/a' }, '/Users/a/Library/Caches/sizeproof'],
  ['win32', { LOCALAPPDATA: 'C:\\Users\\a\\AppData\\Local' }, 'C:/Users/a/AppData/Local/sizeproof'],
  ['linux', {}, null],
])('on %s with %j the cache is %s', (platform, env, folder) => {
  expect(cacheFolder(env, platform)).toBe(folder);
});
