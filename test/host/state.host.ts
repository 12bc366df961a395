import { writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, FrameLocator, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { hashPixels } from '../../core/codec/pixels.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { type Host, startHost } from './server.ts';
import { packVsix } from './vsix.ts';
import { explorerRow, newPage, openWorkbench, reloadWindow, runCommand, webviewOf } from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

const SHOTS = join(top, 'dist', 'test', 'host');
const NAME = 'changing.png';
const LEVEL = 1;

/** What a proof is told to show, and must show again. */
const CHOSEN = { level: String(LEVEL), kernels: ['mitchell'], view: 'g', zoom: '2' };

describe('an open proof', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let folder: string;
  const before = noiseRaster(21, { width: 96, height: 64 }, 3, 8, 'noise');
  const after = noiseRaster(22, { width: 96, height: 64 }, 3, 8, 'noise');

  beforeAll(async () => {
    host = await startHost({ vsix: await packVsix(SHOTS), trust: 'everything' });
    folder = makeWorkspace(join(host.folder, 'ws'));
    await write(before);
    browser = await launchBrowser();
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
    const proof = await open(NAME);
    const level = proof.getByLabel('Level', { exact: true });
    await level.fill(CHOSEN.level);
    await level.press('Enter');
    await proof.getByLabel('Add a print by a kernel').selectOption(CHOSEN.kernels[0]);
    await viewOf(proof).selectOption(CHOSEN.view);
    await proof.getByRole('application').first().press('1');
    await proof.getByRole('application').first().press('+');
    await printOf(proof, before);
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
  });

  test('shows what it showed when it comes back from behind another editor', async () => {
    await expect.poll(() => shownBy(webviewOf(page))).toEqual(CHOSEN);
    const address = await addressOf(page);
    await explorerRow(page, 'icon.png').click();
    await page.locator('.tab.active[data-resource-name="icon.png"]').waitFor();
    // It is gone, not only out of sight.
    await expect.poll(() => page.frames().some((frame) => frame.url() === address)).toBe(false);
    await page.locator(`.tab[data-resource-name="${NAME}"]`).last().click();
    const proof = webviewOf(page);
    await printOf(proof, before);
    await expect.poll(() => shownBy(proof)).toEqual(CHOSEN);
  });

  test('and after its window was loaded anew', async () => {
    await reloadWindow(page);
    const proof = webviewOf(page);
    await printOf(proof, before);
    await expect.poll(() => shownBy(proof)).toEqual(CHOSEN);
    await page.screenshot({ path: join(SHOTS, 'state-reloaded.png') });
  });

  test('shows the file anew when it changes on the disk', async () => {
    const proof = webviewOf(page);
    await write(after);
    await printOf(proof, after);
    await expect.poll(() => shownBy(proof)).toEqual(CHOSEN);
  });

  test('shows a file that was exchanged while the proof was behind another editor', async () => {
    await page.locator('.tab[data-resource-name="icon.png"]').click();
    await page.locator('.tab.active[data-resource-name="icon.png"]').waitFor();
    await write(before);
    await page.locator(`.tab[data-resource-name="${NAME}"]`).last().click();
    await printOf(webviewOf(page), before);
  });

  async function write(raster: StraightRaster): Promise<void> {
    writeFileSync(join(folder, NAME), await encodePng(raster, deflate));
  }

  async function open(name: string): Promise<FrameLocator> {
    await explorerRow(page, name).click();
    await page.locator(`.tab.active[data-resource-name="${name}"]`).first().waitFor();
    await runCommand(page, 'Sizeproof: Open Proof');
    const proof = webviewOf(page);
    await proof.locator('print-card print-stage[data-painted]').first().waitFor();
    return proof;
  }
});

/** Waits for the print of a raster's level by the built-in settings, by its hash. */
async function printOf(proof: FrameLocator, raster: StraightRaster): Promise<void> {
  const level = buildChain(raster, resolveTreatment(null, NAME).treatment).images[LEVEL].raster;
  const hash = hashPixels(level, newHash);
  await proof.locator(`print-card print-stage[data-painted][data-pixels="${hash}"]`).first().waitFor();
}

const viewOf = (proof: FrameLocator) => proof.locator('view-bar').getByRole('combobox', { name: 'View' });

async function shownBy(proof: FrameLocator): Promise<typeof CHOSEN> {
  const lists = proof.getByLabel('Kernel of this print');
  return {
    level: await proof.getByLabel('Level', { exact: true }).inputValue(),
    kernels: await lists.evaluateAll((all) => all.map((each) => (each as HTMLSelectElement).value)),
    view: await viewOf(proof).inputValue(),
    zoom: (await proof.locator('print-stage').first().getAttribute('data-zoom')) ?? '',
  };
}

/** Of the frame that the proof's page is in. */
async function addressOf(page: Page): Promise<string> {
  const frame = page.frames().find((each) => each.url().includes('.w.localhost') && each.url().includes('fake.html'));
  if (frame === undefined)
    throw new Error(
      `No page among ${page
        .frames()
        .map((each) => each.url())
        .join(', ')}`,
    );
  return frame.url();
}
