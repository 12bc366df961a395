import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { filesBelow, newFolder, putFiles } from './folder.ts';
import { build, check, settingsText, smallPng, told } from './project.ts';

const prune = { options: { orphans: 'prune' } } as const;

async function builtFolder(settings: object = {}) {
  const folder = newFolder({
    'sizeproof.json': settingsText(settings),
    'a/leaf.png': smallPng(1),
    'a/deep/moss.png': smallPng(2),
    'b.png': smallPng(3),
  });
  await build(folder);
  return folder;
}

test('an orphan is named, kept by a build, and pruned with its folder when asked', async () => {
  const folder = await builtFolder();
  fs.rmSync(`${folder}/a/deep/moss.png`);
  const checked = await check(folder);
  expect(told(checked, folder)).toEqual(['orphan built/a/deep/moss.mips.json']);
  expect(checked.orphans).toMatchObject([{ source: `${folder}/a/deep/moss.png`, reason: 'gone' }]);
  expect(told(await build(folder), folder)).toEqual([]);
  expect(fs.existsSync(`${folder}/built/a/deep`)).toBe(true);
  const plan = await build(folder, { options: { orphans: 'prune', mode: 'plan' } });
  expect(plan.pruned).toEqual([`${folder}/built/a/deep/moss.mips.json`]);
  expect(fs.existsSync(`${folder}/built/a/deep`)).toBe(true);
  const report = await build(folder, prune);
  expect(report.pruned).toEqual(plan.pruned);
  expect(fs.existsSync(`${folder}/built/a/deep`)).toBe(false);
  expect(fs.existsSync(`${folder}/built/a/leaf.ktx2`)).toBe(true);
  expect(told(await check(folder), folder)).toEqual([]);
});

test('an edited output of an orphan is kept and named', async () => {
  const folder = await builtFolder();
  fs.rmSync(`${folder}/b.png`);
  fs.writeFileSync(`${folder}/built/b.1.png`, 'by hand');
  expect(told(await build(folder, prune), folder)).toEqual(['output-edited built/b.1.png']);
  expect(Object.keys(filesBelow(`${folder}/built`)).filter((name) => name.startsWith('b'))).toEqual(['b.1.png']);
});

test('a moved source is an orphan and a new texture, and check says where it went', async () => {
  const folder = await builtFolder();
  fs.renameSync(`${folder}/b.png`, `${folder}/a/bark.png`);
  const checked = await check(folder);
  expect(told(checked, folder)).toEqual(['not-built a/bark.png', 'orphan-moved built/b.mips.json']);
  expect(checked.orphans).toMatchObject([{ movedTo: `${folder}/a/bark.png` }]);
  await build(folder, prune);
  expect(told(await check(folder), folder)).toEqual([]);
});

test('a source that the settings exclude leaves an orphan', async () => {
  const folder = await builtFolder();
  putFiles(folder, { 'sizeproof.json': settingsText({ exclude: ['b.png'] }) });
  expect(told(await check(folder), folder)).toEqual(['orphan-excluded built/b.mips.json']);
});

test('only what was asked for is judged', async () => {
  const folder = await builtFolder();
  fs.rmSync(`${folder}/b.png`);
  fs.rmSync(`${folder}/a/deep/moss.png`);
  expect(told(await check(folder, { query: { paths: ['a'] } }), folder)).toEqual([
    'orphan built/a/deep/moss.mips.json',
  ]);
  expect(told(await check(folder, { query: { paths: ['a/leaf.png'] } }), folder)).toEqual([]);
  const report = await build(folder, { query: { paths: ['a'] }, ...prune });
  expect(report.pruned).toEqual([`${folder}/built/a/deep/moss.mips.json`]);
  expect(fs.existsSync(`${folder}/built/b.mips.json`)).toBe(true);
});

test('a folder that lost its last texture is still pruned', async () => {
  const folder = await builtFolder();
  for (const name of ['a/leaf.png', 'a/deep/moss.png', 'b.png']) fs.rmSync(`${folder}/${name}`);
  expect((await check(folder)).orphans).toHaveLength(3);
  expect(told(await build(folder, prune), folder)).toEqual([]);
  expect(filesBelow(`${folder}/built`)).toEqual({});
  expect(told(await build(folder, prune), folder)).toEqual(['nothing-selected -']);
});

test('the manifests of a root inside another are its own', async () => {
  const folder = await builtFolder({ outDir: '.' });
  putFiles(folder, { 'inner/sizeproof.json': settingsText({ outDir: '.' }), 'inner/x.png': smallPng(5) });
  await build(folder);
  expect(told(await check(folder), folder)).toEqual([]);
  const report = await build(folder, { query: { paths: ['a', 'b.png'] }, ...prune });
  expect(report.pruned).toEqual([]);
  expect((await build(folder, prune)).pruned).toEqual([]);
});

test('a manifest in the output folder whose source lies elsewhere is nobody of ours', async () => {
  const out = newFolder();
  const folder = await builtFolder();
  await build(folder, { query: { out } });
  const other = newFolder({ 'x.png': smallPng(4) });
  const report = await build(other, { query: { out }, ...prune });
  expect(report.pruned).toEqual([]);
  expect(told(await check(folder, { query: { out } }), folder)).toEqual([]);
});

test.each([
  ['a broken settings file', '{ "outDir": 1 }'],
  [
    'a treatment that contradicts itself',
    settingsText({ treatments: [{ match: 'b.png', alpha: { store: 'premultiplied' } }] }),
  ],
])('nothing is pruned behind %s', async (_, text) => {
  const folder = await builtFolder();
  putFiles(folder, { 'sizeproof.json': text });
  fs.rmSync(`${folder}/a/leaf.png`);
  const before = filesBelow(`${folder}/built`);
  const report = await build(folder, prune);
  expect(report.problems.length).toBeGreaterThan(0);
  expect(report.pruned).toEqual([]);
  expect(Object.keys(filesBelow(`${folder}/built`))).toEqual(Object.keys(before));
  expect((await check(folder)).orphans).toEqual([]);
});

test('a file that a moved source writes again is not removed with the orphan', async () => {
  const folder = await builtFolder({ defaults: { name: '{name}.{level}' } });
  fs.renameSync(`${folder}/a/leaf.png`, `${folder}/leaf.png`);
  const report = await build(folder, prune);
  expect(report.pruned).toEqual([`${folder}/built/a/leaf.mips.json`]);
  expect(told(await check(folder), folder)).toEqual([]);
});

test('a manifest of a folder that had no settings belongs to no root beside it', async () => {
  const folder = newFolder({ 'a/sizeproof.json': '{}', 'a/x.png': smallPng(1), 'b/y.png': smallPng(2) });
  for (const path of ['a', 'b']) await build(folder, { query: { paths: [path], out: 'out' } });
  fs.rmSync(`${folder}/b/y.png`);
  expect((await check(folder, { query: { out: 'out' } })).orphans).toEqual([]);
});

test('nothing is pruned once work is called off', async () => {
  const folder = await builtFolder();
  fs.rmSync(`${folder}/b.png`);
  const report = await build(folder, { ...prune, isCancelled: () => true });
  expect(report).toMatchObject({ cancelled: true, pruned: [] });
  expect(fs.existsSync(`${folder}/built/b.mips.json`)).toBe(true);
});
