import { spawn } from 'node:child_process';
import * as fs from 'node:fs';
import { expect, test } from 'vitest';
import { bundleOnce } from '../node/bundle.ts';
import { filesBelow, newFolder, putFiles } from '../node/folder.ts';
import { build, check, settingsText, smallPng } from '../node/project.ts';

/** Kills in all; a part of them is made by each of a few folders. */
const KILLS = 200;

const settings = [{ outputs: ['png', 'ktx2'] }, { kernel: 'box', outputs: ['png'], targets: ['2x'] }].map((defaults) =>
  settingsText({ defaults }),
);

test(`killed at ${KILLS} random moments, every file is of one build or another, and the next build is whole`, async () => {
  const cli = `${await bundleOnce()}/cli.js`;
  const sources = Object.fromEntries(Array.from({ length: 4 }, (_, at) => [`${at}.png`, smallPng(at, 16)]));
  const wholes: Record<string, string>[] = [];
  for (const text of settings) {
    const folder = newFolder({ ...sources, 'sizeproof.json': text });
    await build(folder);
    wholes.push(filesBelow(`${folder}/built`));
  }
  const folder = newFolder({ ...sources, 'sizeproof.json': settings[0] });
  await build(folder);
  const span = await timeOf(cli, folder, settings[1]);
  let wasMixed = 0;
  for (let kill = 0; kill < KILLS; kill++) {
    putFiles(folder, { 'sizeproof.json': settings[kill % 2] });
    // The start of the process is not of interest; its writing takes the last part.
    await killAfter(cli, folder, span * (0.5 + (kill / KILLS) * 0.6));
    const files = filesBelow(`${folder}/built`);
    for (const [name, bytes] of Object.entries(files)) {
      if (!name.startsWith('.')) expect(wholes.some((whole) => whole[name] === bytes)).toBe(true);
    }
    const shown = JSON.stringify(Object.entries(files).filter(([name]) => !name.startsWith('.')));
    if (!wholes.some((whole) => JSON.stringify(Object.entries(whole)) === shown)) {
      wasMixed++;
      expect((await check(folder)).problems.length).toBeGreaterThan(0);
    }
    if (kill % 10 === 9) {
      await build(folder);
      expect(filesBelow(`${folder}/built`)).toEqual(wholes[kill % 2]);
    }
  }
  // Otherwise the kills came too early or too late to show anything.
  expect(wasMixed).toBeGreaterThan(0);
}, 600_000);

function start(cli: string, folder: string) {
  return spawn(process.execPath, [cli, 'build', '.', '--jobs', '2'], {
    cwd: folder,
    stdio: 'ignore',
    env: { ...process.env, XDG_CACHE_HOME: `${folder}/no/such/cache`.replace('/no', '-no') },
  });
}

async function timeOf(cli: string, folder: string, text: string): Promise<number> {
  putFiles(folder, { 'sizeproof.json': text });
  const begin = performance.now();
  await new Promise((done) => start(cli, folder).on('close', done));
  return performance.now() - begin;
}

async function killAfter(cli: string, folder: string, ms: number): Promise<void> {
  const child = start(cli, folder);
  const timer = setTimeout(() => child.kill('SIGKILL'), ms);
  await new Promise((done) => child.on('close', done));
  clearTimeout(timer);
  fs.rmSync(`${folder}-no`, { recursive: true, force: true });
}
