import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { Died, dyingDisk, type Ending } from './disks.ts';
import { filesBelow, newFolder, putFiles } from './folder.ts';
import { build, check, settingsText, smallPng } from './project.ts';

const oldSettings = settingsText({ defaults: { outputs: ['png', 'ktx2'] } });
const newSettings = settingsText({ defaults: { kernel: 'box', outputs: ['png'], targets: ['2x'] } });

/** Two textures built with the old settings, and the new ones written. */
async function builtFolder(): Promise<string> {
  const folder = newFolder({ 'sizeproof.json': oldSettings, 'a.png': smallPng(1, 4), 'b.png': smallPng(2, 4) });
  await build(folder);
  putFiles(folder, { 'sizeproof.json': newSettings });
  return folder;
}

const isHidden = (name: string) => name.startsWith('.');

const outputsOf = (files: Record<string, string>, texture: string) =>
  Object.fromEntries(Object.entries(files).filter(([name]) => name.startsWith(`${texture}.`)));

test.each<Ending>(['before', 'half', 'after'])(
  'a build that ends at any call (%s it): each file old or new, check names the mixture, the next build is whole',
  async (ending) => {
    const template = await builtFolder();
    const before = filesBelow(`${template}/built`);
    await build(template);
    const undisturbed = filesBelow(`${template}/built`);
    const mixtures: string[] = [];
    let k = 1;
    for (let ended = true; ended; k++) {
      const folder = await builtFolder();
      ended = await build(folder, { disk: dyingDisk(k, ending) }).then(
        () => false,
        (error) => (error instanceof Died ? true : Promise.reject(error)),
      );
      const files = filesBelow(`${folder}/built`);
      for (const [name, bytes] of Object.entries(files)) {
        if (!isHidden(name)) expect([before[name], undisturbed[name]]).toContain(bytes);
      }
      const checked = await check(folder);
      for (const texture of ['a', 'b']) {
        const now = JSON.stringify(outputsOf(files, texture));
        const isOld = now === JSON.stringify(outputsOf(before, texture));
        const isNew = now === JSON.stringify(outputsOf(undisturbed, texture));
        const said = checked.problems.filter((each) => each.path?.includes(`/${texture}.`)).map((each) => each.code);
        if (!isOld && !isNew) {
          expect(said).toContain('interrupted');
          mixtures.push(`${k} ${texture}`);
        }
        // A whole new build may still carry the mark of its last rename; it is never called fine before that.
        if (!isNew) expect(said.length).toBeGreaterThan(0);
      }
      await build(folder);
      expect(filesBelow(`${folder}/built`)).toEqual(undisturbed);
      expect((await check(folder)).problems).toEqual([]);
    }
    expect(k).toBeGreaterThan(25);
    expect(mixtures.length).toBeGreaterThan(4);
  },
);

test('a first build that ends at any call leaves a folder in which the next one reaches the same', async () => {
  const files = { 'sizeproof.json': settingsText({ outDir: '.' }), 'a.png': smallPng(1, 4) };
  const template = newFolder(files);
  await build(template);
  const undisturbed = filesBelow(template);
  for (let k = 1, ended = true; ended; k++) {
    const folder = newFolder(files);
    ended = await build(folder, { disk: dyingDisk(k, 'after') }).then(
      () => false,
      () => true,
    );
    // Outputs beside their source must not be taken for sources, though no manifest lists them yet.
    expect((await check(folder)).textures.map((each) => each.source)).toEqual([`${folder}/a.png`]);
    await build(folder);
    expect(filesBelow(folder)).toEqual(undisturbed);
  }
});

test('pruning that ends at any call is finished by the next', async () => {
  for (let k = 1, ended = true; ended; k++) {
    const folder = await builtFolder();
    await build(folder);
    fs.rmSync(`${folder}/b.png`);
    ended = await build(folder, { disk: dyingDisk(k, 'after'), options: { orphans: 'prune' } }).then(
      () => false,
      () => true,
    );
    await build(folder, { options: { orphans: 'prune' } });
    expect(Object.keys(filesBelow(`${folder}/built`)).filter((name) => name.includes('b.'))).toEqual([]);
    expect((await check(folder)).problems).toEqual([]);
  }
});
