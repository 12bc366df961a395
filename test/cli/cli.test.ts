import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { settingsTemplate } from '../../core/treatment/edit/template.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { openProgress } from '../../extension/cli/progress.ts';
import { version } from '../../package.json';
import { writePng } from '../fixtures/rawpng.ts';
import { filesBelow, newFolder, putFiles } from '../node/folder.ts';
import { settingsText, smallPng } from '../node/project.ts';
import { sizeproof } from './cli.ts';

const files = { 'sizeproof.json': '{}', 'a/leaf.png': smallPng(1), 'b.png': smallPng(2, 5, 3) };

test('help and version are printed and are no failure', async () => {
  const folder = newFolder();
  expect(await sizeproof([], { folder })).toMatchObject({ code: 0, stderr: '' });
  expect((await sizeproof(['--help'], { folder })).stdout).toMatch(/sizeproof rebuild/);
  expect((await sizeproof(['--version'], { folder })).stdout).toBe(`${version}\n`);
});

test('a misspelt command line is usage, as one document where JSON was asked for', async () => {
  const folder = newFolder();
  const { code, stdout, stderr } = await sizeproof(['build', '--josn', '--json'], { folder });
  expect(code).toBe(2);
  expect(stderr).toMatch(/^\.:1:1: error unknown-option: There is no option --josn here\. Did you mean --json\?/);
  expect(JSON.parse(stdout)).toMatchObject({
    format: 1,
    command: null,
    summary: { built: 0, unchanged: 0, failed: 0 },
  });
});

test('build, build again, check, touch, check: what is printed', async () => {
  const folder = newFolder(files);
  const first = await sizeproof(['build', '.'], { folder });
  expect(first).toMatchObject({ code: 0, stderr: '' });
  expect(first.stdout).toBe(
    'built a/leaf.png -> built/a/leaf.mips.json and 4 files (new)\n' +
      'built b.png -> built/b.mips.json and 3 files (new)\n2 built, 0 unchanged, 0 failed.\n',
  );
  expect((await sizeproof(['build', '.'], { folder })).stdout).toBe('0 built, 2 unchanged, 0 failed.\n');
  expect(await sizeproof(['build', '.', '--quiet'], { folder })).toMatchObject({ code: 0, stdout: '', stderr: '' });
  expect(await sizeproof(['check', '.'], { folder })).toMatchObject({ code: 0, stderr: '' });
  fs.writeFileSync(`${folder}/built/b.1.png`, 'x');
  const checked = await sizeproof(['check', '.', '--json'], { folder });
  expect(checked.code).toBe(1);
  expect(checked.stderr).toBe(
    'b.png:1:1: error stale: The output (b.1.png) moved since this was built. Build again.\n',
  );
  expect(JSON.parse(checked.stdout)).toMatchObject({
    format: 1,
    command: 'check',
    textures: [
      { source: 'a/leaf.png', moved: [] },
      {
        source: 'b.png',
        moved: ['output'],
        outputs: [
          { path: 'built/b.1.png', state: 'changed' },
          { path: 'built/b.2.png', state: 'same' },
          { path: 'built/b.ktx2', state: 'same' },
        ],
      },
    ],
    orphans: [],
    problems: [{ code: 'stale', path: 'b.png', line: 1, column: 1 }],
    summary: { built: 0, unchanged: 1, failed: 1 },
  });
});

test('a plan says what and why, and writes nothing', async () => {
  const folder = newFolder(files);
  const { code, stdout } = await sizeproof(['build', 'b.png', '--plan'], { folder });
  expect([code, stdout]).toEqual([
    0,
    'would build b.png -> built/b.mips.json and 3 files (new)\n1 would be built, 0 unchanged, 0 failed.\n',
  ]);
  expect(fs.existsSync(`${folder}/built`)).toBe(false);
});

test('the document of a build names sources, reasons and outputs from the working directory', async () => {
  const folder = newFolder(files);
  const { stdout } = await sizeproof(['build', '../b.png', '--json', '--out', '../out'], { folder: `${folder}/a` });
  expect(JSON.parse(stdout)).toMatchObject({
    textures: [
      {
        source: '../b.png',
        manifest: '../out/b.mips.json',
        action: 'built',
        reasons: ['new'],
        outputs: ['../out/b.1.png', '../out/b.2.png', '../out/b.ktx2'],
      },
    ],
    problems: [],
    summary: { built: 1, unchanged: 0, failed: 0 },
  });
});

test('the document of explain is the same from everywhere', async () => {
  const folder = newFolder({ ...files, 'a/sizeproof.json': settingsText({ defaults: { kernel: 'box' } }) });
  const top = await sizeproof(['explain', '.', '--json'], { folder });
  const below = await sizeproof(['explain', folder, '--json'], { folder: `${folder}/a` });
  const [leaf] = JSON.parse(
    (await sizeproof(['explain', 'leaf.png', '--json'], { folder: `${folder}/a` })).stdout,
  ).textures;
  expect(top.code).toBe(0);
  expect(below.stdout).toBe(top.stdout);
  expect(JSON.parse(top.stdout).textures).toContainEqual(leaf);
  expect(leaf).toMatchObject({
    source: 'leaf.png',
    root: `${folder}/a`,
    settings: `${folder}/a/sizeproof.json`,
    hidden: `${folder}/sizeproof.json`,
  });
});

test('explain prints each setting with the rule and the place that set it', async () => {
  const folder = newFolder({ ...files, 'sizeproof.json': '{\n  "defaults": { "kernel": "box" }\n}' });
  const { stdout } = await sizeproof(['explain', 'b.png'], { folder });
  expect(stdout).toMatch(/^b\.png\n {2}settings: sizeproof\.json\n/);
  expect(stdout).toMatch(/kernel\.minify +\{"name":"box","params":\{\}\} {2}\(defaults, sizeproof\.json:2:27\)/);
  expect(stdout).toMatch(/wrap\.x +"clamp-to-edge" {2}\(built-in\)/);
});

test('init writes settings that change nothing, and never over others', async () => {
  expect(parseSettings(settingsTemplate, 's')).toMatchObject({ problems: [], settings: { outDir: 'built' } });
  // The examples must be right too, once their slashes are taken away.
  const examples = settingsTemplate.replace(/^ {4}\/\/ \{/gm, '    {');
  expect(parseSettings(examples, 's').problems).toEqual([]);
  const folder = newFolder();
  const first = await sizeproof(['init'], { folder });
  expect(first.code).toBe(0);
  expect(first.stdout).toMatch(/^wrote sizeproof\.json\n.*\*\.mips\.json text eol=lf linguist-generated\n$/);
  expect(filesBelow(folder)).toEqual({ 'sizeproof.json': settingsTemplate });
  putFiles(folder, { 'sizeproof.json': 'mine' });
  const second = await sizeproof(['init', '--gitattributes'], { folder });
  expect(second).toMatchObject({ code: 2, stderr: expect.stringContaining('settings-exist') });
  expect(filesBelow(folder)).toEqual({
    'sizeproof.json': 'mine',
    '.gitattributes': '*.mips.json text eol=lf linguist-generated\n',
  });
  await sizeproof(['init', '--gitattributes'], { folder });
  expect(fs.readFileSync(`${folder}/.gitattributes`, 'utf8').match(/mips/g)).toHaveLength(1);
});

test('rebuild brings outputs back', async () => {
  const folder = newFolder(files);
  await sizeproof(['build', '.'], { folder });
  const before = filesBelow(`${folder}/built`);
  fs.rmSync(`${folder}/built/b.ktx2`);
  fs.rmSync(`${folder}/sizeproof.json`);
  const { code, stdout } = await sizeproof(['rebuild', 'built'], { folder });
  expect([code, stdout.split('\n').at(-2)]).toEqual([0, '2 built, 0 unchanged, 0 failed.']);
  expect(filesBelow(`${folder}/built`)).toEqual(before);
});

test('1 worker and 4 make the same files', async () => {
  const folder = newFolder(
    Object.fromEntries(Array.from({ length: 9 }, (_, at) => [`${at}.png`, smallPng(at, 16 + at)])),
  );
  for (const jobs of ['1', '4']) await sizeproof(['build', '.', '--out', `out${jobs}`, '--jobs', jobs], { folder });
  expect(Object.keys(filesBelow(`${folder}/out1`)).length).toBeGreaterThan(50);
  expect(filesBelow(`${folder}/out4`)).toEqual(filesBelow(`${folder}/out1`));
});

test('what a run remembers is kept in the cache folder and nowhere else', async () => {
  const folder = newFolder(files);
  const cache = newFolder();
  await sizeproof(['build', '.'], { folder, env: { XDG_CACHE_HOME: cache } });
  const kept = Object.keys(filesBelow(cache));
  expect(kept.length).toBeGreaterThan(0);
  for (const name of kept) expect(name).toMatch(/^sizeproof\/[0-9a-f]{24}\.(txt|json)$/);
  fs.rmSync(cache, { recursive: true });
  expect((await sizeproof(['build', '.'], { folder, env: { XDG_CACHE_HOME: cache } })).stdout).toMatch(/2 unchanged/);
});

/** Textures that take a while together. */
function slowFolder() {
  const sample = (x: number, y: number, channel: number) => (x * 7 + y * 13 + x * y * channel) & 255;
  const png = writePng({ width: 512, height: 512, bitDepth: 8, colorType: 6, sample });
  return newFolder(Object.fromEntries(Array.from({ length: 12 }, (_, at) => [`${at}.png`, png])));
}

test('Ctrl-C ends with 130, tidied, and the next build goes on', async () => {
  const folder = slowFolder();
  const { code, stdout } = await sizeproof(['build', '.', '--jobs', '2'], {
    folder,
    running: (child) => {
      const timer = setInterval(() => {
        if (!fs.existsSync(`${folder}/built`)) return;
        clearInterval(timer);
        child.kill('SIGINT');
      }, 5);
    },
  });
  expect(code).toBe(130);
  expect(stdout).toMatch(/Interrupted; build again to go on\.\n$/);
  for (const name of Object.keys(filesBelow(folder))) expect(name).not.toMatch(/\.(tmp|next)$/);
  expect((await sizeproof(['build', '.'], { folder })).code).toBe(0);
  expect((await sizeproof(['check', '.'], { folder })).code).toBe(0);
});

test('who reads the output may leave before its end, and the build goes on', async () => {
  const folder = newFolder(files);
  const ran = await sizeproof(['build', '.'], { folder, running: (child) => child.stdout?.destroy() });
  expect(ran).toMatchObject({ code: 0, stderr: '' });
  expect((await sizeproof(['check', '.'], { folder })).code).toBe(0);
});

test('watch builds now and on a change, and ends with Ctrl-C', async () => {
  const folder = newFolder(files);
  let heard = '';
  const { code, stderr } = await sizeproof(['build', '.', '--watch'], {
    folder,
    running: (child) => {
      let step = 0;
      child.stdout?.on('data', (text) => {
        heard += text;
        if (step === 0 && /2 built/.test(heard)) {
          step = 1;
          // The watch begins behind the first build; a second one finds what changed between them.
          setTimeout(() => fs.writeFileSync(`${folder}/b.png`, smallPng(7)), 400);
        } else if (step === 1 && /1 built, 1 unchanged/.test(heard)) {
          step = 2;
          child.kill('SIGINT');
        }
      });
    },
  });
  expect([code, stderr]).toEqual([130, '']);
  expect(heard.match(/failed\./g)).toHaveLength(2);
});

test('the bar is drawn on a terminal alone, and taken away at the end', () => {
  const texture = { source: '', manifest: '', action: 'built', reasons: [], outputs: [] } as const;
  const draw = (isTTY: boolean) => {
    let drawn = '';
    const progress = openProgress({ isTTY, columns: 40, write: (text) => (drawn += text) });
    progress.begin(2);
    progress.done(texture);
    progress.done(texture);
    progress.clear();
    return drawn;
  };
  expect(draw(false)).toBe('');
  expect(draw(true)).toContain('1 of 2');
  expect(draw(true).endsWith('\r\u001b[K')).toBe(true);
});
