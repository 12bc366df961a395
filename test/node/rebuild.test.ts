import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { filesBelow, newFolder, putFiles } from './folder.ts';
import { build, check, rebuild, settingsText, smallPng, told } from './project.ts';

async function builtFolder(settings: object = {}, options: { out?: string } = {}) {
  const folder = newFolder({
    'sizeproof.json': settingsText(settings),
    'a/deep/leaf.png': smallPng(1),
    'b.png': smallPng(2, 5, 3),
  });
  expect(told(await build(folder, { query: options }), folder)).toEqual([]);
  return folder;
}

/** Everything but the manifests gone, and the settings file too. */
function strip(folder: string, out = `${folder}/built`) {
  const whole = filesBelow(out);
  for (const name of Object.keys(whole)) if (!name.endsWith('.mips.json')) fs.rmSync(`${out}/${name}`);
  fs.rmSync(`${folder}/sizeproof.json`, { force: true });
  return whole;
}

test.each([
  ['names by default', {}],
  ['names of their own', { defaults: { name: 'deep/{path}/{name}-{level}{target}', targets: ['2x'] } }],
  ['containers alone', { defaults: { name: 'k/{path}/{name}', outputs: ['ktx2'] } }],
  ['targets alone', { defaults: { levels: 'none', outputs: ['png'], targets: ['2x', '4x4'] } }],
  ['outputs beside their sources', { outDir: '.' }],
  [
    'a roughness map',
    { defaults: { content: 'normal', normal: { roughness: { path: 'b.png' } } }, exclude: ['b.png'] },
  ],
])('%s come back byte for byte, without a settings file', async (_, settings) => {
  const folder = newFolder({
    'sizeproof.json': settingsText(settings),
    'a/deep/leaf.png': smallPng(1),
    'b.png': smallPng(2),
  });
  expect(told(await build(folder), folder)).toEqual([]);
  const out = (settings as { outDir?: string }).outDir === '.' ? folder : `${folder}/built`;
  const before = filesBelow(out);
  delete before['sizeproof.json'];
  for (const name of Object.keys(before)) {
    if (!name.endsWith('.mips.json') && !/^(a\/deep\/leaf|b)\.png$/.test(name)) fs.rmSync(`${out}/${name}`);
  }
  fs.rmSync(`${folder}/sizeproof.json`);
  const report = await rebuild(folder, { paths: [out] });
  expect(told(report, folder)).toEqual([]);
  expect(filesBelow(out)).toEqual(before);
});

test('a missing source and a changed one are named, and nothing is touched', async () => {
  const folder = await builtFolder();
  strip(folder);
  const before = filesBelow(`${folder}/built`);
  fs.rmSync(`${folder}/b.png`);
  fs.writeFileSync(`${folder}/a/deep/leaf.png`, smallPng(7));
  expect(told(await rebuild(folder), folder)).toEqual(['source-moved a/deep/leaf.png', 'source-missing b.png']);
  expect(filesBelow(`${folder}/built`)).toEqual(before);
});

test('moved manifests find their sources below the folder named', async () => {
  const folder = await builtFolder();
  const whole = strip(folder);
  const away = newFolder();
  fs.cpSync(`${folder}/built`, `${away}/manifests`, { recursive: true });
  expect(told(await rebuild(away), away)).toEqual(['source-missing a/deep/leaf.png', 'source-missing b.png']);
  expect(told(await rebuild(away, { sourceRoot: folder }), away)).toEqual([]);
  expect(filesBelow(`${away}/manifests`)).toEqual(whole);
  // The folder may lie anywhere along the recorded path.
  expect(told(await rebuild(away, { paths: ['manifests/a'], sourceRoot: `${folder}/a` }), away)).toEqual([]);
});

test('another revision of the algorithm writes nothing until it is asked for', async () => {
  const folder = await builtFolder();
  const path = `${folder}/built/b.mips.json`;
  const recorded = fs.readFileSync(path, 'utf8');
  fs.writeFileSync(path, recorded.replace('"algorithm": 1,', '"algorithm": 7,'));
  fs.rmSync(`${folder}/built/b.ktx2`);
  expect(told(await rebuild(folder, { paths: ['built/b.mips.json'] }), folder)).toEqual([
    'algorithm-moved built/b.mips.json',
  ]);
  expect(fs.existsSync(`${folder}/built/b.ktx2`)).toBe(false);
  await rebuild(folder, { paths: ['built/b.mips.json'], algorithm: 'new' });
  expect(fs.existsSync(`${folder}/built/b.ktx2`)).toBe(true);
  expect(fs.readFileSync(path, 'utf8')).toBe(recorded);
});

test.each([
  ['{ "format": 2 }', 'manifest-newer'],
  ['{ "format": 1 }', 'manifest-damaged'],
  ['<<<<<<< ours\n', 'manifest-conflict'],
])('a manifest that says %j is refused as %s and kept', async (text, code) => {
  const folder = newFolder({ 'x.mips.json': text });
  expect(told(await rebuild(folder), folder)).toEqual([`${code} x.mips.json`]);
  expect(filesBelow(folder)).toEqual({ 'x.mips.json': text });
});

test('a manifest whose outputs are not those of its settings is refused', async () => {
  const folder = await builtFolder();
  const path = `${folder}/built/b.mips.json`;
  fs.writeFileSync(path, fs.readFileSync(path, 'utf8').replace('"path": "b.1.png"', '"path": "../../b.1.png"'));
  expect(told(await rebuild(folder, { paths: [path] }), folder)).toEqual(['manifest-damaged built/b.mips.json']);
});

test('a path without manifests is named', async () => {
  const folder = newFolder({ 'b.png': smallPng(1) });
  const report = await rebuild(folder, { paths: ['b.png', 'gone'] });
  expect(report.problems.map(({ code, values }) => [code, values.selector])).toEqual([
    ['no-manifest', 'b.png'],
    ['no-manifest', 'gone'],
  ]);
});

/** As if another zlib had written a manifest's compressed files: their hashes and the encoder are not ours. */
function disguise(folder: string, name: string) {
  const path = `${folder}/built/${name}`;
  const text = fs.readFileSync(path, 'utf8');
  const other = text.replace(/"encoder": "[0-9a-f]{64}"/, `"encoder": "${'e'.repeat(64)}"`);
  return {
    path,
    text,
    withHashes: (pattern: RegExp) => other.replace(pattern, (found) => found.replace(/[0-9a-f]{64}/, 'f'.repeat(64))),
  };
}

test('another encoder alone makes nothing stale', async () => {
  const folder = await builtFolder();
  const { path, withHashes } = disguise(folder, 'b.mips.json');
  fs.writeFileSync(path, withHashes(/never/));
  expect(told(await check(folder), folder)).toEqual([]);
  expect((await build(folder)).textures.map((each) => each.action)).toEqual(['unchanged', 'unchanged']);
});

test('a file that another encoder would have written otherwise is the same by its pixels', async () => {
  const folder = await builtFolder({ defaults: { ktx2: { supercompress: 'zlib' } } });
  const { path, withHashes } = disguise(folder, 'b.mips.json');
  const eachFile = /"path": "b\.(?:\d\.png|ktx2)",\s+"sha256": "[0-9a-f]{64}"/g;
  fs.writeFileSync(path, withHashes(eachFile));
  const checked = await check(folder);
  expect(checked.textures.map((each) => each.moved)).toEqual([[], []]);
  expect(new Set(told(checked, folder).map((each) => each.split(' ')[0]))).toEqual(new Set(['re-encoded']));
  expect(checked.textures[1].outputs.every((each) => each.state === 're-encoded')).toBe(true);
  fs.writeFileSync(`${folder}/built/b.1.png`, smallPng(5));
  expect((await check(folder)).textures.map((each) => each.moved)).toEqual([[], ['output']]);
});

test('with the same encoder other bytes are another output, whatever their pixels', async () => {
  const folder = await builtFolder();
  const path = `${folder}/built/b.1.png`;
  const png = fs.readFileSync(path);
  // An empty text chunk before the end changes no pixel.
  const { chunk } = await import('../fixtures/rawpng.ts');
  putFiles(folder, {
    'built/b.1.png': Buffer.concat([png.subarray(0, -12), chunk('tEXt', Buffer.from('a\0b')), png.subarray(-12)]),
  });
  expect((await check(folder)).textures.map((each) => each.moved)).toEqual([[], ['output']]);
});
