import { readFileSync, writeFileSync } from 'node:fs';
import { expect, test } from 'vitest';
import { largePng } from '../fixtures/large.ts';
import { newFolder } from '../node/folder.ts';
import { settingsText } from '../node/project.ts';
import { sizeproof } from './cli.ts';

const side = 4096;

/** What is meant is 100 MB; when garbage is collected is the engine's affair, and level 0 would be 67 MB more. */
const CEILING = 120e6;

/** Level 0 of RGBA, in bytes. */
const raster = side * side * 4;

/** Loaded ahead of the program: writes down the most that the process ever held. The system's own count of a child begins with what
 *  its parent held, so that it is not asked for that. */
const told = `
import { readFileSync, writeFileSync } from 'node:fs';
import { isMainThread } from 'node:worker_threads';
if (isMainThread) process.on('exit', () => writeFileSync('peak', /VmHWM:\\s+(\\d+)/.exec(readFileSync('/proc/self/status', 'utf8'))[1]));
`;

// Only Linux keeps the peak where a process can read it.
test.skipIf(process.platform !== 'linux')(
  'a build holds its file and its levels, and neither level 0 nor the inflated image; a container is not held whole',
  async () => {
    const png = largePng(side);
    const levels = await peakOf(png, ['png']);
    const both = await peakOf(png, ['png', 'ktx2']);
    const bare = await peakOf(png, null);
    console.log(
      `${Math.round(levels / 1e6)} MB for levels, ${Math.round(both / 1e6)} MB with a container, less the file; ${Math.round(bare / 1e6)} MB bare`,
    );
    expect(levels - bare).toBeLessThan(CEILING);
    // Its levels are held, level 0 among them, but no copy of them all.
    expect(both - bare).toBeLessThan(CEILING + raster);
  },
  300_000,
);

/** The most resident memory of a build, in bytes, less the source file; of a program that does nothing for no outputs. */
async function peakOf(png: Uint8Array, outputs: readonly string[] | null): Promise<number> {
  const folder = newFolder({ 'a.png': png });
  if (outputs !== null) {
    writeFileSync(
      `${folder}/sizeproof.json`,
      settingsText({ defaults: { kernel: 'lanczos3', fill: 'none', outputs } }),
    );
  }
  const words = outputs === null ? ['--version'] : ['build', 'a.png', '--jobs', '1', '--out', 'out'];
  const nodeOptions = ['--import', `data:text/javascript,${encodeURIComponent(told)}`];
  const ran = await sizeproof(words, { folder, nodeOptions });
  expect(ran).toMatchObject({ code: 0, stderr: '' });
  return Number(readFileSync(`${folder}/peak`, 'utf8')) * 1024 - (outputs === null ? 0 : png.length);
}
