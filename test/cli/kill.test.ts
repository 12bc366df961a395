import { spawn } from 'node:child_process';
import { build as bundle } from 'esbuild';
import { expect, test } from 'vitest';
import { folderOfTests } from '../node/bundle.ts';
import { filesBelow, newFolder } from '../node/folder.ts';
import { build, check, settingsText, smallPng } from '../node/project.ts';

const KILLS = 200;

const settings = [{ outputs: ['png', 'ktx2'] }, { kernel: 'box', outputs: ['png'], targets: ['2x'] }];

test(`killed at ${KILLS} random moments, every file is of one build or the other, and the next build is whole`, async () => {
  const program = await bundleEndless();
  const files = {
    ...Object.fromEntries(Array.from({ length: 3 }, (_, at) => [`${at}.png`, smallPng(at, 8)])),
    ...Object.fromEntries(settings.map((defaults, at) => [`${at}.json`, settingsText({ defaults })])),
  };
  const using = settings.map((_, at) => ({ query: { settings: `${at}.json` } }));
  const wholes: Record<string, string>[] = [];
  for (const setting of using) {
    const folder = newFolder(files);
    await build(folder, setting);
    wholes.push(filesBelow(`${folder}/built`));
  }
  const folder = newFolder(files);
  // The machine's own pace: kills fall within two builds, after one that warms up.
  const spanMs = 2 * (await timeOf(program, folder, 6));
  let mixtures = 0;
  for (let kill = 0; kill < KILLS; kill++) {
    await killAfter(program, folder, (((kill * 89) % KILLS) / KILLS) * spanMs);
    const found = Object.entries(filesBelow(`${folder}/built`)).filter(([name]) => !name.startsWith('.'));
    for (const [name, bytes] of found) expect([wholes[0][name], wholes[1][name]]).toContain(bytes);
    if (!wholes.some((whole) => JSON.stringify(Object.entries(whole)) === JSON.stringify(found))) {
      mixtures++;
      for (const setting of using) expect((await check(folder, setting)).problems).not.toEqual([]);
    }
    if (kill % 5 === 0) {
      await build(folder, using[kill % 2]);
      expect(filesBelow(`${folder}/built`)).toEqual(wholes[kill % 2]);
    }
  }
  // Otherwise the moments were badly chosen and show nothing.
  expect(mixtures).toBeGreaterThan(KILLS / 10);
}, 600_000);

async function bundleEndless(): Promise<string> {
  const top = new URL('../../', import.meta.url).pathname;
  const outfile = `${folderOfTests()}/endless.mjs`;
  await bundle({
    entryPoints: [`${top}test/cli/endless.ts`],
    outfile,
    bundle: true,
    platform: 'node',
    mainFields: ['module', 'main'],
    format: 'esm',
    logLevel: 'error',
    banner: { js: "import { createRequire } from 'node:module';\nconst require = createRequire(import.meta.url);" },
  });
  return outfile;
}

/** Milliseconds that one of some builds takes, the first left out. */
function timeOf(program: string, folder: string, builds: number): Promise<number> {
  return new Promise((done, fail) => {
    const child = spawn(process.execPath, [program, folder], { stdio: ['ignore', 'pipe', 'inherit'] });
    let heard = '';
    let begin = 0;
    child.stdout.on('data', (text) => {
      heard += text;
      const count = heard.split('\n').length - 1;
      if (begin === 0) begin = performance.now();
      if (count > builds) child.kill('SIGKILL');
    });
    child.on('error', fail);
    child.on('close', () => done((performance.now() - begin) / builds));
  });
}

function killAfter(program: string, folder: string, ms: number): Promise<void> {
  return new Promise((done, fail) => {
    const child = spawn(process.execPath, [program, folder], { stdio: ['ignore', 'pipe', 'inherit'] });
    child.stdout.once('data', () => setTimeout(() => child.kill('SIGKILL'), ms));
    child.on('error', fail);
    child.on('close', (code, signal) => (signal === 'SIGKILL' ? done() : fail(new Error(`ended by itself: ${code}`))));
  });
}
