import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import type { Disk } from '../../extension/node/files/disk.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { openFolderRecord } from '../../extension/node/project/folder-record.ts';
import { newFolder, putFiles } from './folder.ts';

const files = { 'a/leaf.mips.json': '{}', 'a/leaf.1.png': 'x', 'a/b/moss.mips.json': '{}' };

/** A folder and what it was found to hold, a minute after it was filled. */
async function settled() {
  const folder = newFolder(files);
  const cacheFolder = newFolder();
  const record = await openFolderRecord(nodeDisk, cacheFolder, folder, () => Date.now() + 60_000);
  const traces = await record.look(`${folder}/a`);
  await record.save();
  return { folder, cacheFolder, traces };
}

/** Looks again, and tells which folders were listed for it. */
async function again({ folder, cacheFolder }: { folder: string; cacheFolder: string }) {
  const listed: string[] = [];
  const disk: Disk = {
    ...nodeDisk,
    list: (path) => {
      listed.push(path.slice(folder.length + 1));
      return nodeDisk.list(path);
    },
  };
  const record = await openFolderRecord(disk, cacheFolder, folder);
  const traces = await record.look(`${folder}/a`);
  await record.save();
  return { traces, listed };
}

const found = { manifests: ['leaf.mips.json'], folders: ['b'], interrupted: [], temporaries: [] };

test('a folder in which no entry came or went is not listed again, and is told of as before', async () => {
  const room = await settled();
  expect(room.traces).toEqual(found);
  expect(await again(room)).toEqual({ traces: found, listed: [] });
  fs.appendFileSync(`${room.folder}/a/leaf.1.png`, 'in place');
  expect(await again(room)).toEqual({ traces: found, listed: [] });
});

test.each<[string, (folder: string) => void, object]>([
  [
    'manifest',
    (folder) => putFiles(folder, { 'a/oak.mips.json': '' }),
    { manifests: ['leaf.mips.json', 'oak.mips.json'] },
  ],
  ['mark', (folder) => putFiles(folder, { 'a/.leaf.mips.json.next': '' }), { interrupted: ['leaf.mips.json'] }],
  [
    'temporary file',
    (folder) => putFiles(folder, { 'a/.leaf.1.png.1-0123456789ab.tmp': '' }),
    { temporaries: ['.leaf.1.png.1-0123456789ab.tmp'] },
  ],
  ['folder', (folder) => fs.mkdirSync(`${folder}/a/c`), { folders: ['b', 'c'] }],
  ['missing manifest', (folder) => fs.rmSync(`${folder}/a/leaf.mips.json`), { manifests: [] }],
  [
    'renamed manifest, the time set back',
    (folder) => {
      const { atimeMs, mtimeMs } = fs.statSync(`${folder}/a`);
      fs.renameSync(`${folder}/a/leaf.mips.json`, `${folder}/a/fern.mips.json`);
      fs.utimesSync(`${folder}/a`, atimeMs / 1000, mtimeMs / 1000);
    },
    { manifests: ['fern.mips.json'] },
  ],
  ['missing folder', (folder) => fs.rmSync(`${folder}/a`, { recursive: true }), { manifests: [], folders: [] }],
])('a new %s is found', async (_, change, news) => {
  const room = await settled();
  change(room.folder);
  const { traces, listed } = await again(room);
  expect(listed).toEqual(['a']);
  expect({ ...traces, manifests: [...traces.manifests].sort(), folders: [...traces.folders].sort() }).toEqual({
    ...found,
    ...news,
  });
});

test('a folder that changed a moment before it was listed is listed again', async () => {
  const folder = newFolder(files);
  const room = { folder, cacheFolder: newFolder() };
  expect((await again(room)).listed).toEqual(['a']);
  expect((await again(room)).listed).toEqual(['a']);
});

test('a folder with a mark or a temporary file in it is listed each time', async () => {
  for (const name of ['.leaf.mips.json.next', '.leaf.1.png.1-0123456789ab.tmp']) {
    const folder = newFolder({ ...files, [`a/${name}`]: '' });
    const cacheFolder = newFolder();
    const record = await openFolderRecord(nodeDisk, cacheFolder, folder, () => Date.now() + 60_000);
    const traces = await record.look(`${folder}/a`);
    await record.save();
    expect(traces).not.toEqual(found);
    expect(await again({ folder, cacheFolder })).toEqual({ traces, listed: ['a'] });
  }
});

test('a damaged record is not believed', async () => {
  const room = await settled();
  const [name] = fs.readdirSync(room.cacheFolder);
  const text = fs.readFileSync(`${room.cacheFolder}/${name}`, 'utf8');
  for (const damaged of [
    '{',
    text.replace('record 1', 'record 2'),
    text.replace('["leaf.mips.json"]', '[5]'),
    'null',
  ]) {
    expect(damaged).not.toBe(text);
    fs.writeFileSync(`${room.cacheFolder}/${name}`, damaged);
    expect(await again(room)).toEqual({ traces: found, listed: ['a'] });
  }
});
