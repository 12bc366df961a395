import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { writeManifest } from '../../core/manifest/write.ts';
import { Refusal } from '../../core/problem.ts';
import { type Disk, DiskError } from '../../extension/node/files/disk.ts';
import { openLaydown } from '../../extension/node/files/laydown.ts';
import { nodeDisk } from '../../extension/node/files/node-disk.ts';
import { temporaryFor, temporaryOwner } from '../../extension/node/files/temporary.ts';
import { findTraces, sweep } from '../../extension/node/project/sweep.ts';
import { sampleManifest, sha256 as sha256Of } from '../manifest/sample.ts';
import { countingDisk, Died, dyingDisk, type Ending, faultyDisk } from './disks.ts';
import { filesBelow, newFolder, putFiles } from './folder.ts';

type Files = Readonly<Record<string, string>>;

const old: Files = { 'leaf.0.png': 'old 0', 'leaf.1.png': 'old 1', 'leaf.2.png': 'same', 'leaf.ktx2': 'old ktx' };
const now: Files = { 'leaf.0.png': 'new 0', 'leaf.1.png': 'new 1', 'leaf.2.png': 'same', 'leaf.3.png': 'more' };

const manifestOf = (files: Files) => writeManifest(sampleManifest(files));

const built = (files: Files): Files => ({ ...files, 'leaf.mips.json': manifestOf(files) });

/** One build: sweep, write all, commit; abort on a refusal, as the job does. */
async function lay(disk: Disk, folder: string, files: Files) {
  await sweep(disk, (await findTraces(disk, [folder], 'below')).temporaries);
  const place = { manifestPath: `${folder}/leaf.mips.json`, within: folder };
  const laydown = openLaydown(disk, place, async () => undefined);
  try {
    for (const [name, text] of Object.entries(files)) await laydown.write(`${folder}/${name}`, fileOf(text));
    return await laydown.commit(sampleManifest(files));
  } catch (error) {
    if (error instanceof Refusal) await laydown.abort();
    throw error;
  }
}

function fileOf(text: string) {
  const bytes = Buffer.from(text);
  async function* pieces() {
    for (let at = 0; at < bytes.length; at += PIECE) yield bytes.subarray(at, at + PIECE);
  }
  return { byteCount: bytes.length, pieces: pieces() };
}

const PIECE = 1_000_003;

test('a file too large to be joined is written as it comes, and leaves nothing behind where it stops coming', async () => {
  const folder = newFolder();
  const large = { ...now, 'leaf.0.png': 'large'.repeat(1_000_000) };
  const calls: string[] = [];
  const counted = { ...nodeDisk, write: countingDisk(calls).write };
  await lay(counted, folder, large);
  expect(calls.filter((call) => call.includes('leaf.0.png'))).toEqual([]);
  expect(filesBelow(folder)).toEqual(built(large));
  const laydown = openLaydown(nodeDisk, { manifestPath: `${folder}/leaf.mips.json`, within: folder });
  const { byteCount } = fileOf(large['leaf.0.png']);
  async function* broken() {
    yield new Uint8Array(PIECE);
    throw new RangeError('it stopped coming');
  }
  await expect(laydown.write(`${folder}/leaf.0.png`, { byteCount, pieces: broken() })).rejects.toThrow(
    'stopped coming',
  );
  expect(filesBelow(folder)).toEqual(built(large));
});

const problemOf = (build: Promise<unknown>) =>
  build.then(
    () => expect.fail('Nothing was refused.'),
    (error) => (error instanceof Refusal ? error.problem : Promise.reject(error)),
  );

test('a build takes the place of another: files no longer listed go, the rest is new', async () => {
  const folder = newFolder(built(old));
  const { warnings, files } = await lay(nodeDisk, folder, now);
  expect(warnings).toEqual([]);
  expect(filesBelow(folder)).toEqual(built(now));
  expect(files.map((file) => file.path.slice(folder.length + 1)).sort()).toEqual(Object.keys(built(now)).sort());
  for (const { path, sha256, stat } of files) {
    expect([sha256, stat]).toEqual([sha256Of(fs.readFileSync(path)), await nodeDisk.stat(path)]);
  }
});

test('the .next manifest is there before the first rename, and goes last', async () => {
  const folder = newFolder(built(old));
  const calls: string[] = [];
  await lay(countingDisk(calls), folder, now);
  const steps = calls.map((call) => call.replaceAll(folder, '').replaceAll(/\.[0-9a-z]+-[0-9a-f]{12}\.tmp/g, ''));
  expect(steps).toEqual([
    'write /.leaf.0.png',
    'write /.leaf.1.png',
    'write /.leaf.3.png',
    'write /.leaf.mips.json',
    // All that was written, at once.
    'flush /.leaf.mips.json,/.leaf.0.png,/.leaf.1.png,/.leaf.3.png',
    'rename /.leaf.mips.json',
    `flushFolder `,
    'rename /.leaf.0.png',
    'rename /.leaf.1.png',
    'rename /.leaf.3.png',
    'remove /leaf.ktx2',
    'flushFolder ',
    'rename /.leaf.mips.json.next',
    'flushFolder ',
  ]);
});

const endings: readonly Ending[] = ['before', 'half', 'after'];

test.each(endings)(
  'ended at any call (%s it), every file is old or new, a mixture is marked, and the next build heals it',
  async (ending) => {
    let k = 1;
    for (let ended = true; ended; k++) {
      const folder = newFolder(built(old));
      ended = await lay(dyingDisk(k, ending), folder, now).then(
        () => false,
        (error) => (error instanceof Died ? true : Promise.reject(error)),
      );
      const files = filesBelow(folder);
      for (const [name, text] of Object.entries(files)) {
        if (!name.startsWith('.')) expect([built(old)[name], built(now)[name]]).toContain(text);
      }
      const { interrupted } = await findTraces(nodeDisk, [folder], 'below');
      const shipped = Object.fromEntries(Object.entries(files).filter(([name]) => !name.startsWith('.')));
      const isWhole = [built(old), built(now)].some((whole) => JSON.stringify(whole) === JSON.stringify(shipped));
      if (!isWhole) expect([...interrupted]).toEqual([`${folder}/leaf.mips.json`]);
      await lay(nodeDisk, folder, now);
      expect(filesBelow(folder)).toEqual(built(now));
    }
    expect(k).toBeGreaterThan(12);
  },
);

test('ended at any call, going back to the old settings gives the old build', async () => {
  for (let k = 1, ended = true; ended; k++) {
    const folder = newFolder(built(old));
    ended = await lay(dyingDisk(k, 'after'), folder, now).then(
      () => false,
      () => true,
    );
    await lay(nodeDisk, folder, old);
    expect(filesBelow(folder)).toEqual(built(old));
  }
});

test('equal files are not written again', async () => {
  const folder = newFolder(built(old));
  const calls: string[] = [];
  await lay(countingDisk(calls), folder, old);
  expect(calls.filter((call) => /png|ktx2/.test(call))).toEqual([]);
});

test('an edited file that is no longer listed is kept and named', async () => {
  const folder = newFolder({ ...built(old), 'leaf.ktx2': 'by hand' });
  const { warnings } = await lay(nodeDisk, folder, now);
  expect(warnings).toMatchObject([{ code: 'output-edited', path: `${folder}/leaf.ktx2` }]);
  expect(filesBelow(folder)).toEqual({ ...built(now), 'leaf.ktx2': 'by hand' });
});

test('a full disk is named with the file and its bytes, and nothing is touched', async () => {
  for (let room = 0; room < 4; room++) {
    const folder = newFolder(built(old));
    let writes = 0;
    const disk = faultyDisk((name) => (name === 'write' && writes++ === room ? 'full' : null));
    const name = ['leaf.0.png', 'leaf.1.png', 'leaf.3.png', 'leaf.mips.json'][room];
    const bytes = built(now)[name].length;
    expect(await problemOf(lay(disk, folder, now))).toMatchObject({
      code: 'disk-full',
      path: `${folder}/${name}`,
      values: { bytes: name.endsWith('json') ? Buffer.byteLength(built(now)[name]) : bytes },
    });
    expect(filesBelow(folder)).toEqual(built(old));
  }
});

test('a disk that is full when files are flushed is named, and nothing is touched', async () => {
  const folder = newFolder(built(old));
  const disk: Disk = {
    ...nodeDisk,
    flush: async (paths) => {
      throw new DiskError('full', paths.find((path) => path.includes('leaf.1.png'))!, 'no space is left');
    },
  };
  const bytes = now['leaf.1.png'].length;
  const path = `${folder}/leaf.1.png`;
  expect(await problemOf(lay(disk, folder, now))).toMatchObject({ code: 'disk-full', path, values: { bytes } });
  expect(filesBelow(folder)).toEqual(built(old));
});

test('a refused folder is named, and nothing is touched', async () => {
  const folder = newFolder(built(old));
  const disk = faultyDisk((name) => (name === 'write' ? 'denied' : null));
  expect(await problemOf(lay(disk, folder, now))).toMatchObject({ code: 'output-unwritable' });
  expect(filesBelow(folder)).toEqual(built(old));
});

test('a file in the place of a folder is named', async () => {
  const folder = newFolder({ built: 'a file' });
  const laydown = openLaydown(nodeDisk, { manifestPath: `${folder}/built/a.mips.json`, within: folder });
  expect(await problemOf(laydown.write(`${folder}/built/a.0.png`, fileOf('x')))).toMatchObject({
    code: 'output-unwritable',
    values: { reason: 'a file stands where a folder is needed' },
  });
});

test('folders made for nothing go again', async () => {
  const folder = newFolder();
  const laydown = openLaydown(nodeDisk, { manifestPath: `${folder}/a/b/x.mips.json`, within: folder });
  await laydown.write(`${folder}/a/b/c/x.0.png`, fileOf('x'));
  expect(Object.keys(filesBelow(folder))).toHaveLength(1);
  await laydown.abort();
  expect(fs.readdirSync(folder)).toEqual([]);
});

test('a file held open is tried again for a while', async () => {
  const folder = newFolder(built(old));
  let refusals = 15;
  const disk = faultyDisk((name, path) =>
    name === 'rename' && path.endsWith('leaf.1.png') && refusals-- > 0 ? 'busy' : null,
  );
  await lay(disk, folder, now);
  expect(filesBelow(folder)).toEqual(built(now));
});

test('a file that stays open is named, the mixture is marked, no temporary stays', async () => {
  const folder = newFolder(built(old));
  const disk = faultyDisk((name, path) => (name === 'rename' && path.endsWith('leaf.1.png') ? 'busy' : null));
  expect(await problemOf(lay(disk, folder, now))).toMatchObject({
    code: 'output-busy',
    path: `${folder}/leaf.1.png`,
    values: { seconds: 2 },
  });
  const traces = await findTraces(nodeDisk, [folder], 'below');
  expect([[...traces.interrupted], [...traces.temporaries]]).toEqual([[`${folder}/leaf.mips.json`], []]);
  await lay(nodeDisk, folder, now);
  expect(filesBelow(folder)).toEqual(built(now));
});

test('the first file held open leaves the old build whole and unmarked', async () => {
  const folder = newFolder(built(old));
  const disk = faultyDisk((name, path) => (name === 'rename' && path.endsWith('leaf.0.png') ? 'busy' : null));
  expect(await problemOf(lay(disk, folder, now))).toMatchObject({ code: 'output-busy' });
  expect(filesBelow(folder)).toEqual(built(old));
});

test('a link does not lead an output out of its folder', async () => {
  const outside = newFolder({ 'kept.txt': 'kept' });
  const folder = newFolder();
  fs.symlinkSync(outside, `${folder}/link`);
  const laydown = openLaydown(nodeDisk, { manifestPath: `${folder}/link/deep/x.mips.json`, within: folder });
  expect(await problemOf(laydown.write(`${folder}/link/deep/x.0.png`, fileOf('x')))).toMatchObject({
    code: 'leaves-folder',
    path: `${folder}/link/deep/x.0.png`,
  });
  expect(filesBelow(outside)).toEqual({ 'kept.txt': 'kept' });
});

test('a manifest that lists files outside its folder has none of them removed', async () => {
  const outside = newFolder({ 'kept.txt': 'kept' });
  const folder = newFolder();
  const away = `../${outside.split('/').pop()}/kept.txt`;
  putFiles(folder, { 'leaf.mips.json': writeManifest(sampleManifest({ [away]: 'kept' })) });
  await lay(nodeDisk, folder, now);
  expect(filesBelow(outside)).toEqual({ 'kept.txt': 'kept' });
});

test('temporaries of a running process stay; all others are swept', async () => {
  const running = '/out/.leaf.png.1-0123456789ab.tmp';
  const ended = '/out/.leaf.png.zzzzzz-0123456789ab.tmp';
  const calls: string[] = [];
  const disk = countingDisk(calls, { ...nodeDisk, remove: async () => undefined });
  await sweep(disk, [running, ended, temporaryFor('/out/leaf.png')], (id) => id === 1);
  expect(calls).toHaveLength(2);
  expect(calls[0]).toBe(`remove ${ended}`);
});

test('a temporary name is at most 255 bytes and says who made it', () => {
  for (const name of ['a', 'ä'.repeat(120), '木'.repeat(80), '🌲'.repeat(60), 'x'.repeat(240)]) {
    const temporary = temporaryFor(`/out/${name}`);
    expect(Buffer.byteLength(temporary.slice('/out/'.length))).toBeLessThanOrEqual(255);
    expect(temporaryOwner(temporary.slice('/out/'.length))).toBe(process.pid);
  }
  for (const name of ['.leaf.tmp', 'leaf.png.1-0123456789ab.tmp', '.a.b-c.tmp'])
    expect(temporaryOwner(name)).toBeNull();
});
