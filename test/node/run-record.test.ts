import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import type { Disk } from '../../extension/node/files/disk.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { filesBelow, newFolder } from './folder.ts';
import { build, settingsText, smallPng } from './project.ts';

/** Three textures, built some minutes ago and found unchanged since: what the next run knows of them. */
async function settled(settings: object = {}) {
  const folder = newFolder({
    'sizeproof.json': settingsText(settings),
    'a/leaf.png': smallPng(1),
    'a/moss.png': smallPng(2),
    'b.png': smallPng(3, 5, 3),
  });
  const cacheFolder = newFolder();
  await build(folder, { options: { cacheFolder } });
  age(folder, 60);
  await build(folder, { options: { cacheFolder } });
  return { folder, cacheFolder };
}

function age(folder: string, seconds: number) {
  const time = Date.now() / 1000 - seconds;
  for (const name of Object.keys(filesBelow(folder))) fs.utimesSync(`${folder}/${name}`, time, time);
}

/** Builds, and tells what was done about each texture and which files were read. */
async function again(folder: string, cacheFolder: string | null) {
  const read: string[] = [];
  const disk: Disk = {
    ...nodeDisk,
    read: (path) => {
      if (path.startsWith(`${folder}/`)) read.push(path.slice(folder.length + 1));
      return nodeDisk.read(path);
    },
  };
  const report = await build(folder, { disk, options: { cacheFolder } });
  return { actions: report.textures.map((each) => each.action), read, report };
}

test('where nothing changed, the settings are read and nothing else, and all is answered as before', async () => {
  const { folder, cacheFolder } = await settled();
  const slow = await again(folder, null);
  const { actions, read, report } = await again(folder, cacheFolder);
  expect(actions).toEqual(['unchanged', 'unchanged', 'unchanged']);
  expect(read).toEqual(['sizeproof.json']);
  expect(report).toEqual(slow.report);
});

test('what was built and has stayed is known without being read once more', async () => {
  const { folder, cacheFolder } = await settled();
  fs.writeFileSync(`${folder}/b.png`, smallPng(4, 5, 3));
  const old = Date.now() / 1000 - 60;
  fs.utimesSync(`${folder}/b.png`, old, old);
  // As a build of many textures: its first files are old when it ends.
  const lateDisk: Disk = {
    ...nodeDisk,
    async write(path, bytes) {
      await nodeDisk.write(path, bytes);
      fs.utimesSync(path, old, old);
    },
  };
  const report = await build(folder, { disk: lateDisk, options: { cacheFolder } });
  expect(report.textures.map((each) => each.action)).toEqual(['unchanged', 'unchanged', 'built']);
  const { actions, read } = await again(folder, cacheFolder);
  expect(actions).toEqual(['unchanged', 'unchanged', 'unchanged']);
  expect(read).toEqual(['sizeproof.json']);
});

test('what was built this very moment is read by the next run', async () => {
  const { folder, cacheFolder } = await settled();
  fs.writeFileSync(`${folder}/b.png`, smallPng(4, 5, 3));
  await build(folder, { options: { cacheFolder } });
  const { actions, read } = await again(folder, cacheFolder);
  expect(actions).toEqual(['unchanged', 'unchanged', 'unchanged']);
  expect(read).toContain('built/b.mips.json');
  expect(read).not.toContain('built/a/leaf.mips.json');
});

test.each<[string, (folder: string) => void, string[]]>([
  ['source', (folder) => fs.writeFileSync(`${folder}/a/leaf.png`, smallPng(9)), ['source']],
  ['output', (folder) => fs.appendFileSync(`${folder}/built/a/leaf.1.png`, 'x'), ['output']],
  [
    'output of equal size',
    (folder) => {
      const path = `${folder}/built/a/leaf.1.png`;
      const bytes = fs.readFileSync(path);
      bytes[bytes.length - 1] ^= 1;
      fs.writeFileSync(path, bytes);
    },
    ['output'],
  ],
  [
    'output of equal size and time',
    (folder) => {
      const path = `${folder}/built/a/leaf.1.png`;
      const { mtimeMs } = fs.statSync(path);
      fs.writeFileSync(`${folder}/other`, fs.readFileSync(path).reverse());
      fs.utimesSync(`${folder}/other`, mtimeMs / 1000, mtimeMs / 1000);
      fs.renameSync(`${folder}/other`, path);
    },
    ['output'],
  ],
  ['missing output', (folder) => fs.rmSync(`${folder}/built/a/leaf.ktx2`), ['output']],
  ['missing manifest', (folder) => fs.rmSync(`${folder}/built/a/leaf.mips.json`), ['new']],
  ['damaged manifest', (folder) => fs.writeFileSync(`${folder}/built/a/leaf.mips.json`, '{'), ['manifest']],
  [
    'folder in the place of an output',
    (folder) => {
      fs.rmSync(`${folder}/built/a/leaf.ktx2`);
      fs.mkdirSync(`${folder}/built/a/leaf.ktx2`);
    },
    ['output'],
  ],
  [
    'mark of a build that was ended',
    (folder) => fs.copyFileSync(`${folder}/built/a/leaf.mips.json`, `${folder}/built/a/.leaf.mips.json.next`),
    ['interrupted'],
  ],
  [
    'setting',
    (folder) => {
      const rule = { match: 'a/leaf.png', kernel: 'box' };
      fs.writeFileSync(`${folder}/sizeproof.json`, settingsText({ treatments: [rule] }));
    },
    ['settings'],
  ],
])('a changed %s is noticed', async (_, change, reasons) => {
  const { folder, cacheFolder } = await settled();
  change(folder);
  const report = await build(folder, { options: { cacheFolder, mode: 'plan' } });
  expect(report.textures.map((each) => each.reasons)).toEqual([reasons, [], []]);
});

test('a roughness map is a source like another', async () => {
  const { folder, cacheFolder } = await settled({
    treatments: [
      { match: 'a/leaf.png', content: 'normal', normal: { roughness: { path: 'a/moss.png', channel: 'r' } } },
    ],
  });
  expect((await again(folder, cacheFolder)).read).toEqual(['sizeproof.json']);
  fs.writeFileSync(`${folder}/a/moss.png`, smallPng(7));
  const report = await build(folder, { options: { cacheFolder, mode: 'plan' } });
  expect(report.textures.map((each) => each.reasons)).toEqual([['source'], ['source'], []]);
});

test('sources that are known from the record tell where an orphan moved to and what is kept', async () => {
  const { folder, cacheFolder } = await settled();
  fs.rmSync(`${folder}/a/leaf.png`);
  const report = await build(folder, { options: { cacheFolder, orphans: 'prune' } });
  expect(report.pruned).toEqual([`${folder}/built/a/leaf.mips.json`]);
  expect(Object.keys(filesBelow(`${folder}/built`)).filter((name) => name.startsWith('a/leaf'))).toEqual([]);
  expect((await again(folder, cacheFolder)).actions).toEqual(['unchanged', 'unchanged']);
});

test.each<[string, (text: string) => string]>([
  ['no JSON', () => '{'],
  ['another form', (text) => text.replace('record 2', 'record 3')],
  ['another algorithm', (text) => text.replace('"algorithm":', '"algorithm":1')],
  ['a number too few', (text) => text.slice(0, -8)],
  ['half a number', (text) => text.slice(0, -4)],
  ['a name too many', (text) => text.replace('"names":[', '"names":["x",')],
  ['entries of another shape', (text) => text.replace('"of":[0,', '"of":[0,9,')],
  ['sources that are no lists', (text) => text.replace('"sources":[[', '"sources":[0,[')],
  ['nothing', () => 'null'],
])('a record with %s is not believed', async (_, damage) => {
  const { folder, cacheFolder } = await settled();
  const records = fs.readdirSync(cacheFolder).filter((name) => name.endsWith('.run'));
  expect(records).toHaveLength(2);
  for (const name of records) {
    const text = fs.readFileSync(`${cacheFolder}/${name}`, 'latin1');
    expect(damage(text)).not.toBe(text);
    fs.writeFileSync(`${cacheFolder}/${name}`, damage(text), 'latin1');
  }
  const { actions, read } = await again(folder, cacheFolder);
  expect(actions).toEqual(['unchanged', 'unchanged', 'unchanged']);
  expect(read).toContain('built/a/leaf.mips.json');
  expect((await again(folder, cacheFolder)).read).toEqual(['sizeproof.json']);
});

test('nothing learned writes nothing', async () => {
  const { folder, cacheFolder } = await settled();
  const before = fs.readdirSync(cacheFolder).map((name) => fs.statSync(`${cacheFolder}/${name}`).ino);
  await again(folder, cacheFolder);
  expect(fs.readdirSync(cacheFolder).map((name) => fs.statSync(`${cacheFolder}/${name}`).ino)).toEqual(before);
});
