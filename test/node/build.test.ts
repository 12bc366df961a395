import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { temporaryFor } from '../../extension/node/files/temporary.ts';
import { nodePorts } from '../../extension/node/ports/ports.ts';
import { countingDisk, faultyDisk } from './disks.ts';
import { filesBelow, newFolder, putFiles } from './folder.ts';
import { build, check, settingsText, smallPng, told } from './project.ts';

const actions = (report: Awaited<ReturnType<typeof build>>) => report.textures.map((each) => each.action);

function threeTextures(settings: object = {}) {
  return newFolder({
    'sizeproof.json': settingsText(settings),
    'a/leaf.png': smallPng(1),
    'a/moss.png': smallPng(2),
    'b.png': smallPng(3, 5, 3),
  });
}

test('a build writes what its plan says, and check has nothing against it', async () => {
  const folder = threeTextures();
  const plan = await build(folder, { options: { mode: 'plan' } });
  expect(actions(plan)).toEqual(['planned', 'planned', 'planned']);
  expect(fs.existsSync(`${folder}/built`)).toBe(false);
  const report = await build(folder);
  expect(told(report, folder)).toEqual([]);
  expect(report.textures.map(({ outputs }) => outputs)).toEqual(plan.textures.map(({ outputs }) => outputs));
  const written = report.textures.flatMap((each) => [...each.outputs, each.manifest]).sort();
  expect(Object.keys(filesBelow(`${folder}/built`)).map((name) => `${folder}/built/${name}`)).toEqual(written);
  const checked = await check(folder);
  expect(told(checked, folder)).toEqual([]);
  expect(checked.textures.map((each) => each.moved)).toEqual([[], [], []]);
});

test('a second run decodes nothing and writes nothing', async () => {
  const folder = threeTextures();
  await build(folder);
  const calls: string[] = [];
  let inflated = 0;
  const inflate = (...args: Parameters<typeof nodePorts.inflate>) => {
    inflated++;
    return nodePorts.inflate(...args);
  };
  const report = await build(folder, { disk: countingDisk(calls), inflate });
  expect(actions(report)).toEqual(['unchanged', 'unchanged', 'unchanged']);
  expect([calls, inflated]).toEqual([[], 0]);
  fs.writeFileSync(`${folder}/b.png`, smallPng(4, 5, 3));
  await build(folder, { disk: countingDisk(calls), inflate });
  expect(calls.length).toBeGreaterThan(0);
  expect(inflated).toBe(1);
});

test('with a stat index, an unchanged file is not even read', async () => {
  const folder = threeTextures();
  const cacheFolder = newFolder();
  await build(folder, { options: { cacheFolder } });
  const old = Date.now() / 1000 - 60;
  for (const name of Object.keys(filesBelow(folder))) fs.utimesSync(`${folder}/${name}`, old, old);
  await build(folder, { options: { cacheFolder } });
  const read: string[] = [];
  const disk = {
    ...nodeDisk,
    read: (path: string) => {
      read.push(path);
      return nodeDisk.read(path);
    },
  };
  expect(actions(await build(folder, { disk, options: { cacheFolder } }))).toEqual([
    'unchanged',
    'unchanged',
    'unchanged',
  ]);
  expect(read.filter((path) => /\.(png|ktx2)$/.test(path))).toEqual([]);
});

test.each<[string, (folder: string) => void, string[], string[]]>([
  ['source', (folder) => fs.writeFileSync(`${folder}/a/leaf.png`, smallPng(9)), ['source'], ['source']],
  [
    'settings',
    (folder) =>
      fs.writeFileSync(
        `${folder}/sizeproof.json`,
        settingsText({ treatments: [{ match: 'a/leaf.png', kernel: 'box' }] }),
      ),
    ['settings'],
    ['settings'],
  ],
  ['output', (folder) => fs.writeFileSync(`${folder}/built/a/leaf.1.png`, 'x'), ['output'], ['output']],
  ['output', (folder) => fs.rmSync(`${folder}/built/a/leaf.ktx2`), ['output'], ['output']],
  ['output', (folder) => fs.rmSync(`${folder}/built/a/leaf.mips.json`), ['output'], ['new']],
  ['output', (folder) => fs.writeFileSync(`${folder}/built/a/leaf.mips.json`, '{'), ['output'], ['manifest']],
  [
    'output',
    (folder) =>
      fs.writeFileSync(
        `${folder}/built/a/leaf.mips.json`,
        `<<<<<<< ours\n${fs.readFileSync(`${folder}/built/a/leaf.mips.json`)}`,
      ),
    ['output'],
    ['manifest'],
  ],
  [
    'algorithm',
    (folder) => {
      const path = `${folder}/built/a/leaf.mips.json`;
      fs.writeFileSync(path, fs.readFileSync(path, 'utf8').replace('"algorithm": 1,', '"algorithm": 9,'));
    },
    ['algorithm'],
    ['algorithm'],
  ],
])('a touched %s is named, and built again alone, to the same bytes as anew', async (_, touch, moved, reasons) => {
  const folder = threeTextures();
  await build(folder);
  touch(folder);
  const checked = await check(folder);
  expect(checked.textures.map((each) => each.moved)).toEqual([moved, [], []]);
  expect(checked.problems.filter((each) => each.severity === 'error')).toHaveLength(1);
  const report = await build(folder);
  expect(report.textures.map((each) => each.reasons)).toEqual([reasons, [], []]);
  const again = filesBelow(`${folder}/built`);
  fs.rmSync(`${folder}/built`, { recursive: true });
  await build(folder);
  expect(again).toEqual(filesBelow(`${folder}/built`));
});

test('findings are held against the limits of now', async () => {
  const folder = threeTextures();
  await build(folder);
  putFiles(folder, { 'sizeproof.json': settingsText({ defaults: { limits: { 'over-budget': 100 } } }) });
  const expected = ['a/leaf.png', 'a/moss.png'].map((name) => `over-budget ${name}`);
  expect(told(await check(folder), folder).filter((each) => each.startsWith('over'))).toEqual(expected);
  await build(folder);
  expect(told(await check(folder), folder)).toEqual(expected);
});

test('outputs that are not kept in version control can be left out of a check', async () => {
  const folder = threeTextures();
  await build(folder);
  fs.rmSync(`${folder}/built/a/leaf.1.png`);
  expect(told(await check(folder, { look: 'without outputs' }), folder)).toEqual([]);
  fs.writeFileSync(`${folder}/b.png`, smallPng(9));
  expect(told(await check(folder, { look: 'without outputs' }), folder)).toEqual(['stale b.png']);
});

test('line ends of a manifest do not matter', async () => {
  const folder = threeTextures();
  await build(folder);
  const path = `${folder}/built/b.mips.json`;
  fs.writeFileSync(path, fs.readFileSync(path, 'utf8').replaceAll('\n', '\r\n'));
  expect(told(await check(folder), folder)).toEqual([]);
  expect(actions(await build(folder))).toEqual(['unchanged', 'unchanged', 'unchanged']);
});

test('one bad file does not stop the others, and its former outputs stay', async () => {
  const folder = threeTextures();
  await build(folder);
  const before = filesBelow(`${folder}/built`);
  fs.writeFileSync(`${folder}/a/leaf.png`, smallPng(9).subarray(0, 60));
  fs.writeFileSync(`${folder}/b.png`, smallPng(8, 5, 3));
  const report = await build(folder);
  expect(actions(report)).toEqual(['failed', 'unchanged', 'built']);
  expect(told(report, folder)).toEqual(['png-file-truncated a/leaf.png']);
  const after = filesBelow(`${folder}/built`);
  for (const name of Object.keys(before)) if (name.startsWith('a/')) expect(after[name]).toBe(before[name]);
});

test('damage that only decoding finds leaves no half result', async () => {
  const folder = threeTextures();
  const png = Buffer.from(smallPng(9));
  // The last byte of the zlib stream belongs to its checksum; the chunk's CRC must fit it.
  const idat = png.indexOf('IDAT');
  const length = png.readUInt32BE(idat - 4);
  png[idat + 4 + length - 1] ^= 1;
  const { crc32 } = await import('../../core/codec/crc.ts');
  png.writeUInt32BE(crc32(png.subarray(idat, idat + 4 + length)), idat + 4 + length);
  fs.writeFileSync(`${folder}/a/leaf.png`, png);
  const report = await build(folder);
  expect(told(report, folder)).toEqual(['png-corrupt-data a/leaf.png']);
  expect(Object.keys(filesBelow(`${folder}/built`)).filter((name) => name.includes('leaf'))).toEqual([]);
});

test('fewer levels take their outputs away; an edited one is kept and named', async () => {
  const folder = threeTextures();
  await build(folder);
  fs.writeFileSync(`${folder}/built/b.1.png`, 'by hand');
  putFiles(folder, { 'sizeproof.json': settingsText({ defaults: { outputs: ['ktx2'] } }) });
  const report = await build(folder);
  expect(told(report, folder)).toEqual(['output-edited built/b.1.png']);
  expect(Object.keys(filesBelow(`${folder}/built`)).filter((name) => name.endsWith('.png'))).toEqual(['b.1.png']);
  expect(told(await build(folder), folder)).toEqual([]);
});

test('two sources with one manifest stop their root, also when only one is asked for', async () => {
  const folder = threeTextures();
  fs.writeFileSync(`${folder}/a/leaf.tga`, 'never read');
  for (const paths of [['.'], ['a/leaf.png'], ['a/leaf.*']]) {
    const report = await build(folder, { query: { paths } });
    expect(report.problems.map((each) => each.code)).toContain('same-output');
    expect(report.textures.every((each) => each.action === 'failed')).toBe(true);
    expect(fs.existsSync(`${folder}/built`)).toBe(false);
  }
});

test('an output that would replace a source is refused', async () => {
  const folder = newFolder({
    'sizeproof.json': settingsText({ outDir: '.', defaults: { levels: 'none', outputs: ['png'], targets: ['2x'] } }),
    'leaf.png': smallPng(1),
    'leaf.2x.png': smallPng(2),
  });
  const before = filesBelow(folder);
  for (const paths of [['.'], ['leaf.png']]) {
    const report = await build(folder, { query: { paths } });
    expect(told(report, folder)).toEqual(['output-is-source leaf.png']);
    expect(filesBelow(folder)).toEqual(before);
  }
});

test('outputs beside their sources are no sources, and the second run finds them unchanged', async () => {
  const folder = threeTextures({ outDir: '.' });
  expect(actions(await build(folder))).toEqual(['built', 'built', 'built']);
  expect(actions(await build(folder))).toEqual(['unchanged', 'unchanged', 'unchanged']);
  expect(told(await check(folder), folder)).toEqual([]);
});

test('an output folder is not left through a link', async () => {
  const folder = threeTextures();
  const outside = newFolder();
  fs.symlinkSync(outside, `${folder}/built`);
  const report = await build(folder);
  expect(actions(report)).toEqual(['failed', 'failed', 'failed']);
  expect(new Set(report.problems.map((each) => each.code))).toEqual(new Set(['leaves-folder']));
  expect(filesBelow(outside)).toEqual({});
});

test('a manifest of a newer format is left alone', async () => {
  const folder = threeTextures();
  putFiles(folder, { 'built/b.mips.json': '{ "format": 2 }' });
  const report = await build(folder);
  expect(told(report, folder)).toEqual(['manifest-newer built/b.mips.json']);
  expect(fs.readFileSync(`${folder}/built/b.mips.json`, 'utf8')).toBe('{ "format": 2 }');
  expect(told(await check(folder), folder)).toEqual(['manifest-newer built/b.mips.json']);
});

test('a texture over the memory allowed is refused with the bytes', async () => {
  const folder = threeTextures();
  const report = await build(folder, { options: { memoryBytes: 300 } });
  expect(actions(report)).toEqual(['failed', 'failed', 'failed']);
  for (const { code, values } of report.problems) {
    expect(code).toBe('too-much-memory');
    expect(values.limit).toBe(300);
    expect(values.bytes).toBeGreaterThan(300);
  }
  expect(fs.existsSync(`${folder}/built`)).toBe(false);
});

test('a disk that fills up stops one texture after the other, and keeps what was there', async () => {
  const folder = threeTextures();
  await build(folder);
  const before = filesBelow(folder);
  for (const name of ['a/leaf.png', 'a/moss.png', 'b.png']) fs.writeFileSync(`${folder}/${name}`, smallPng(9));
  const disk = faultyDisk((name) => (name === 'write' ? 'full' : null));
  const report = await build(folder, { disk });
  expect(actions(report)).toEqual(['failed', 'failed', 'failed']);
  for (const { code, values } of report.problems) expect([code, Number(values.bytes) > 0]).toEqual(['disk-full', true]);
  for (const [name, text] of Object.entries(filesBelow(folder)))
    if (name.startsWith('built')) expect(text).toBe(before[name]);
});

test('a disk that fills up amid the files of a texture has none of them left', async () => {
  const folder = threeTextures();
  let writes = 0;
  const disk = faultyDisk((name) => (name === 'write' && writes++ % 3 === 2 ? 'full' : null));
  const report = await build(folder, { disk });
  expect(new Set(report.problems.map((each) => each.code))).toEqual(new Set(['disk-full']));
  for (const name of Object.keys(filesBelow(folder))) expect(name).not.toMatch(/\.(tmp|next)$/);
});

test('what is too large is refused before it waits for memory', async () => {
  const folder = threeTextures();
  let asked = 0;
  const report = await build(folder, { options: { memoryBytes: 300 }, admitting: () => asked++ });
  expect([report.problems.length, asked]).toEqual([3, 0]);
});

test('a pointer where an image should be is said to be one', async () => {
  const folder = threeTextures();
  const { sha256 } = await import('../manifest/sample.ts');
  const pointer = (oid: string) => `version https://git-lfs.github.com/spec/v1\noid sha256:${oid}\nsize 4711\n`;
  await build(folder);
  fs.writeFileSync(`${folder}/b.png`, pointer(sha256(smallPng(3, 5, 3))));
  fs.writeFileSync(`${folder}/a/moss.png`, pointer(sha256('another')));
  const checked = await check(folder);
  expect(checked.textures.map((each) => each.moved)).toEqual([[], ['source'], []]);
  expect(told(checked, folder)).toEqual(['not-downloaded a/moss.png', 'stale a/moss.png', 'not-downloaded b.png']);
  expect(told(await build(folder), folder)).toEqual(['not-downloaded a/moss.png', 'not-downloaded b.png']);
});

test('work that is called off leaves nothing half done, and goes on next time', async () => {
  const folder = threeTextures();
  let left = 4;
  const report = await build(folder, { isCancelled: () => left-- < 0 });
  expect(report.cancelled).toBe(true);
  for (const name of Object.keys(filesBelow(folder))) expect(name).not.toMatch(/\.(tmp|next)$/);
  await build(folder);
  expect(told(await check(folder), folder)).toEqual([]);
});

test('what an ended build left is swept, wherever the outputs of a texture go', async () => {
  const folder = threeTextures({ defaults: { name: 'deep/{path}/{name}.{level}' } });
  await build(folder);
  fs.writeFileSync(temporaryFor(`${folder}/built/deep/a/leaf.1.png`), 'half');
  fs.writeFileSync(temporaryFor(`${folder}/built/a/leaf.mips.json`), 'half');
  await build(folder);
  for (const name of Object.keys(filesBelow(folder))) expect(name).not.toMatch(/\.tmp$/);
});
