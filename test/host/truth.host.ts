import { copyFileSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, FrameLocator, Page } from 'playwright-core';
import { PNG } from 'pngjs';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import {
  asBlended,
  asStored,
  differences,
  type Expected,
  type Pixels,
  printOnScreen,
  showLevel,
  showTrueSize,
  waitForPrint,
} from './print.ts';
import { run } from './process.ts';
import { type Host, startHost } from './server.ts';
import { packVsix } from './vsix.ts';
import { explorerRow, newPage, openWorkbench, runCommand, webviewOf } from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

// What is on the screen is what was built. The screen is read from outside the program, and the file by a decoder that is not the
// program's. Each link is broken once, by one byte, and must then be found out.

/** Level that is compared: small enough to stand whole in the window at one texel a pixel. */
const LEVEL = 2;

describe('a print on the screen', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let proof: FrameLocator;
  let folder: string;

  beforeAll(async () => {
    const vsix = await packVsix(join(top, 'dist', 'test', 'host'));
    host = await startHost({ vsix, trust: 'everything' });
    browser = await launchBrowser();
    folder = makeWorkspace(join(host.folder, 'ws'));
    copyFileSync(join(top, 'test', 'demo', 'ground', 'cobbles.png'), join(folder, 'ground.png'));
    await run(process.execPath, [join(host.extension(), 'dist', 'cli.js'), 'build', folder], folder);
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
  });

  const fileOf = (name: string) => join(folder, 'built', `${name}.${LEVEL}.png`);
  const builtOf = (name: string): Pixels => PNG.sync.read(readFileSync(fileOf(name)));

  async function open(name: string): Promise<void> {
    proof = await openProof(page, name);
    await proof.locator('top-bar [data-built="built"]').waitFor();
    await showLevel(page, proof, LEVEL);
  }

  async function wrongPlaces(name: string, expected: Expected): Promise<string[]> {
    const built = builtOf(name);
    return differences(await printOnScreen(page, proof, built), built, expected);
  }

  test('of an opaque texture is the built file in every byte', async () => {
    await open('ground.png');
    await expect.poll(() => wrongPlaces('ground', asStored)).toEqual([]);
  });

  test('is found out where one byte of the built file is another', async () => {
    const bytes = readFileSync(fileOf('ground'));
    const image = PNG.sync.read(bytes);
    image.data[(37 * image.width + 41) * 4 + 1] ^= 1;
    writeFileSync(fileOf('ground'), PNG.sync.write(image));
    try {
      await expect.poll(() => wrongPlaces('ground', asStored)).toEqual([expect.stringMatching(/^41,37 g: /)]);
    } finally {
      writeFileSync(fileOf('ground'), bytes);
    }
  });

  test('is found out where one byte of what the page paints is another', async () => {
    const frame = await proof.locator('proof-page').elementHandle();
    await frame?.evaluate(() => {
      const { prototype } = OffscreenCanvasRenderingContext2D;
      const put = prototype.putImageData;
      (globalThis as unknown as { restore: () => void }).restore = () => {
        prototype.putImageData = put;
      };
      prototype.putImageData = function (image: ImageData, ...rest: [number, number]) {
        if (image.width > 64) image.data[(20 * image.width + 10) * 4 + 2] ^= 1;
        (put as (...all: unknown[]) => void).call(this, image, ...rest);
      };
    });
    const again = async () => {
      await proof.getByRole('application').first().press('+');
      await showTrueSize(page, proof);
    };
    await again();
    await expect.poll(() => wrongPlaces('ground', asStored)).toEqual([expect.stringMatching(/^10,20 b: /)]);
    await frame?.evaluate(() => (globalThis as unknown as { restore: () => void }).restore());
    await again();
    await expect.poll(() => wrongPlaces('ground', asStored)).toEqual([]);
  });

  test('that the host makes while the file is on its way is the built file too, and is found out where one byte is another', async () => {
    const other = await newPage(browser, host);
    try {
      await other.setViewportSize({ width: 1600, height: 1100 });
      await other.addInitScript(holdFile);
      await openWorkbench(other, host.url(folder));
      const opened = await openProof(other, 'ground.png');
      await showTrueSize(other, opened);
      const level = await opened.getByLabel('Level', { exact: true }).inputValue();
      const built: Pixels = PNG.sync.read(readFileSync(join(folder, 'built', `ground.${level}.png`)));
      const wrong = async () => differences(await printOnScreen(other, opened, built), built, asStored);
      await expect.poll(wrong).toEqual([expect.stringMatching(/^3,0 r: /)]);
      const held = await opened.locator('proof-page').elementHandle();
      await held?.evaluate(() => (globalThis as unknown as { release: () => void }).release());
      const count = built.width * built.height * 3;
      await opened.getByText(`differ in 1 of ${count} codes`).waitFor();
      await showTrueSize(other, opened);
      await expect.poll(wrong).toEqual([]);
    } finally {
      await other.context().close();
    }
  });

  test('of a transparent texture is the built file over black and over white, to the nearest code', async () => {
    await open('leaf.png');
    for (const [backdrop, light] of [
      ['black', 0],
      ['white', 1],
    ] as const) {
      await proof.getByLabel('Backdrop').selectOption(backdrop);
      await waitForPrint(proof);
      await expect.poll(() => wrongPlaces('leaf', asBlended(light))).toEqual([]);
    }
  });

  test('by settings that were not built is called stale, and is another', async () => {
    writeFileSync(join(folder, 'sizeproof.json'), '{ "defaults": { "kernel": "box" } }\n');
    await proof.locator('top-bar [data-built="stale"]').waitFor();
    await proof.getByText('stale: settings changed').first().waitFor();
    await showTrueSize(page, proof);
    await expect.poll(() => wrongPlaces('leaf', asBlended(1))).not.toEqual([]);
  });
});

async function openProof(page: Page, name: string): Promise<FrameLocator> {
  await explorerRow(page, name).click();
  await page.locator(`.tab.active[data-resource-name="${name}"]`).waitFor();
  await runCommand(page, 'Sizeproof: Open Proof');
  return webviewOf(page);
}

/** Runs in every frame before its scripts. The host's first print comes with its tenth code changed, and the file's bytes wait for
 *  `release`, so that nothing but that print can be on the screen. */
function holdFile(): void {
  const held: (() => void)[] = [];
  let isHolding = true;
  const add = EventTarget.prototype.addEventListener;
  // The editor writes the document anew, which takes listeners off; what adds them stays.
  EventTarget.prototype.addEventListener = function (type: string, listener: unknown, options?: unknown) {
    const hear = listener as (event: Event) => void;
    const filtered = (event: Event): void => {
      const ok = (event as MessageEvent).data?.reply?.ok;
      const codes = ok?.print?.picture?.codes;
      if (codes !== undefined) codes[9] ^= 1;
      if (isHolding && ok?.image !== undefined && ok.roughness !== undefined) held.push(() => hear(event));
      else hear(event);
    };
    const isOurs = this === window && type === 'message' && typeof listener === 'function';
    add.call(this, type, (isOurs ? filtered : listener) as EventListener, options as boolean);
  };
  (globalThis as unknown as { release: () => void }).release = () => {
    isHolding = false;
    for (const deliver of held) deliver();
  };
}
