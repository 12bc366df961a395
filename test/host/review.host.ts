import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { HARMFUL, makeMixedBranch } from '../fixtures/branch.ts';
import { write } from '../fixtures/repository.ts';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { namesOf, rowsOf } from './changed-textures.ts';
import { type Host, startHost } from './server.ts';
import { packVsix } from './vsix.ts';
import { choice, keptBy, newPage, openWorkbench, runCommand, webviewOf } from './workbench.ts';

/** Pictures of the last run, to be looked at. */
const SHOTS = join(top, 'dist', 'test', 'host');

// The editor's own Git extension, and a repository whose branch has ten changes of which two do harm.
describe('a review in a workbench', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let folder: string;

  beforeAll(async () => {
    host = await startHost({ vsix: await packVsix(SHOTS), trust: 'everything' });
    browser = await launchBrowser();
    folder = join(host.folder, 'repo');
    mkdirSync(folder);
    makeMixedBranch(folder);
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
  });

  afterEach(async ({ task }) => {
    await page?.screenshot({ path: join(SHOTS, `review-${task.name.replaceAll(/\W+/g, '-')}.png`) });
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
  });

  test('the two harmful ones of ten stand first', async () => {
    await pickBranch(page, 'work', 'main');
    // Rows that are out of sight are not in the document; the view's message counts them.
    await page.getByText('0 of 10 looked at').waitFor();
    const first = async () => (await namesOf(rowsOf(page))).slice(0, 2).sort();
    await expect.poll(first).toEqual(HARMFUL.map((path) => path.split('/')[1]).sort());
    const fern = rowsOf(page).filter({ hasText: 'fern.png' });
    await expect.poll(() => fern.textContent()).toContain('of the coverage is lost at level 3');
  });

  test('the panel shows each at the level where it hurts', async () => {
    await rowsOf(page).filter({ hasText: 'fern.png' }).click();
    const review = webviewOf(page);
    const sight = review.getByRole('slider', { name: 'Sight on the size axis' });
    await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 3');
    await review.locator('side-card print-stage[data-painted]').nth(2).waitFor();
    await rowsOf(page).filter({ hasText: 'barrel.png' }).click();
    await expect.poll(() => review.locator('review-top h1').textContent()).toBe('props/barrel.png');
    await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 0');
  });

  test('the next texture is a key away', async () => {
    const review = webviewOf(page);
    const shown = await review.locator('review-top [role="status"]').textContent();
    await rowsOf(page).filter({ hasText: 'barrel.png' }).click();
    await page.keyboard.press('Alt+PageDown');
    await expect.poll(() => review.locator('review-top [role="status"]').textContent()).not.toBe(shown);
  });

  test('what was looked at stays so over a reload, and so does the panel', async () => {
    const review = webviewOf(page);
    await review.getByRole('button', { name: 'Looked at' }).click();
    const path = String(await review.locator('review-top h1').textContent());
    await page.getByText('1 of 10 looked at').waitFor();
    // A workbench in a browser writes what it keeps every few seconds, and not when it is left.
    await expect.poll(() => keptBy(page)).toMatch(/"review\.lookedAt":\["/);
    await expect.poll(() => keptBy(page)).toMatch(/mainThreadWebview-sizeproof\.review/);
    await page.reload();
    await page.locator('.monaco-workbench .statusbar').waitFor();
    const after = webviewOf(page);
    await expect.poll(() => after.locator('review-top h1').textContent()).toBe(path);
    await expect.poll(() => after.getByRole('button', { name: 'Looked at' }).getAttribute('aria-pressed')).toBe('true');
  });

  test('the working tree is reviewed from the same list; a file that is no image is said to be none', async () => {
    write(folder, { 'ui/knob.png': 'no image at all', 'ground/moss.png': null });
    await runCommand(page, 'Sizeproof: Review Texture Changes');
    await choice(page, 'Working tree').click();
    await expect.poll(() => namesOf(rowsOf(page))).toHaveLength(2);
    const knob = rowsOf(page).filter({ hasText: 'knob.png' });
    await expect.poll(() => knob.textContent()).toContain('Cannot be compared');
    const review = webviewOf(page);
    await expect.poll(() => review.locator('review-top h1').textContent()).toBe('ui/knob.png');
    await review.getByText('The file begins with the bytes').first().waitFor();
    await page.locator('.tab.active', { hasText: 'Review: knob.png' }).waitFor();
  });
});

async function pickBranch(page: Page, tip: string, base: string): Promise<void> {
  await runCommand(page, 'Sizeproof: Review Texture Changes');
  await choice(page, 'A branch').click();
  await page.locator('.quick-input-widget input[placeholder*="Which branch"]').waitFor();
  await choice(page, tip).click();
  await page.locator('.quick-input-widget input[placeholder*="Since it left"]').waitFor();
  await choice(page, base).click();
}
