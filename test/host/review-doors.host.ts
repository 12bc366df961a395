import { createHash } from 'node:crypto';
import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { encodePng } from '../demo/paint/png.ts';
import { grain } from '../fixtures/branch.ts';
import { commit, type Files, git, newRepository, write } from '../fixtures/repository.ts';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { namesOf, rowsOf } from './changed-textures.ts';
import { type Host, startHost } from './server.ts';
import { packVsix } from './vsix.ts';
import {
  choice,
  explorerRow,
  hasCommand,
  newPage,
  openWorkbench,
  pickFromMenu,
  runCommand,
  webviewOf,
} from './workbench.ts';

/** Pictures of the last run, to be looked at. */
const SHOTS = join(top, 'dist', 'test', 'host');

/** A change of so many files as a checkout of another branch brings. */
const MANY = 2000;

/** A picture of its own for each seed: marks go by what both sides hold. */
const picture = (seed: number) => encodePng(grain(32, seed));

// Every way to a review that the editor offers, in one repository: two commits, something staged, a submodule, and files of Git LFS.
describe('reviews are reached', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let folder: string;

  beforeAll(async () => {
    host = await startHost({ vsix: await packVsix(SHOTS), trust: 'everything' });
    browser = await launchBrowser();
    folder = join(host.folder, 'repo');
    makeRepository(join(host.folder, 'lib'), folder);
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
  });

  afterEach(async ({ task }) => {
    await page?.screenshot({ path: join(SHOTS, `doors-${task.name.replaceAll(/\W+/g, '-')}.png`) });
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
  });

  const rowOfChange = (name: string) => page.locator('.scm-view .monaco-list-row').filter({ hasText: name }).first();
  const shown = () => webviewOf(page).locator('review-top h1').textContent();

  test('from the menu of what is staged: the index', async () => {
    await runCommand(page, 'Source Control: Focus on Changes View');
    await pickFromMenu(page, rowOfChange('Staged Changes'), ['Review Texture Changes']);
    await expect.poll(() => namesOf(rowsOf(page))).toEqual(['b.png']);
    await expect.poll(shown).toBe('b.png');
    await page.getByText('to index').first().waitFor();
  });

  test('from the menu of a changed file: that one', async () => {
    await pickFromMenu(page, rowOfChange('a.png'), ['Review Texture Changes']);
    await expect.poll(() => namesOf(rowsOf(page))).toEqual(['a.png']);
    await expect.poll(shown).toBe('a.png');
  });

  test('the working tree, its submodule, and files of Git LFS that are here or missing', async () => {
    await runCommand(page, 'Sizeproof: Review Texture Changes');
    await chooseRepository(page);
    await choice(page, 'Working tree').click();
    await page.getByText('0 of 5 looked at').first().waitFor();
    const review = webviewOf(page);
    await open('lost.png');
    await review.getByText('Git LFS').first().waitFor();
    await open('large.png');
    await expect.poll(shown).toBe('large.png');
    await review.locator('side-card print-stage[data-painted]').nth(2).waitFor();
    await open('own.png');
    await expect.poll(shown).toBe('lib/own.png');
    await review.locator('side-card print-stage[data-painted]').nth(2).waitFor();
  });

  test('next, previous and the mark are keys, in the list and in the panel', async () => {
    const review = webviewOf(page);
    const at = () => review.locator('review-top [role="status"]').textContent();
    const mark = () => review.getByRole('button', { name: 'Looked at' }).getAttribute('aria-pressed');
    const before = await at();
    await page.keyboard.press('Alt+PageDown');
    await expect.poll(at).not.toBe(before);
    await page.keyboard.press('Alt+PageUp');
    await expect.poll(at).toBe(before);
    await page.keyboard.press('Alt+M');
    await page.getByText('1 of 5 looked at').first().waitFor();
    await expect.poll(mark).toBe('true');
    await review.getByRole('button', { name: 'Next' }).focus();
    await page.keyboard.press('Alt+PageDown');
    await expect.poll(at).not.toBe(before);
    await page.keyboard.press('Alt+M');
    await page.getByText('2 of 5 looked at').first().waitFor();
  });

  test('a commit, from a list of those that there are', async () => {
    await runCommand(page, 'Sizeproof: Review Texture Changes');
    await chooseRepository(page);
    await choice(page, 'A commit').click();
    await choice(page, 'second').click();
    await expect.poll(() => namesOf(rowsOf(page))).toEqual(['a.png']);
  });

  test('two files that are selected in the explorer, as before and after', async () => {
    await runCommand(page, 'File: Focus on Files Explorer');
    await explorerRow(page, 'a.png').click();
    await explorerRow(page, 'b.png').click({ modifiers: ['ControlOrMeta'] });
    await pickFromMenu(page, explorerRow(page, 'b.png'), ['Review Two Textures as Before and After']);
    await expect.poll(() => namesOf(rowsOf(page))).toEqual(['b.png']);
    await expect.poll(shown).toBe('b.png');
  });

  test('a commit of one file, from its timeline', async () => {
    await runCommand(page, 'File: Focus on Files Explorer');
    await explorerRow(page, 'a.png').click();
    await page.locator('.tab.active[data-resource-name="a.png"]').first().waitFor();
    await runCommand(page, 'Explorer: Focus on Timeline View');
    const item = page.locator('.timeline-tree-view .monaco-list-row').filter({ hasText: 'second' }).first();
    await pickFromMenu(page, item, ['Review a Commit of This Texture']);
    await choice(page, 'second').click();
    await expect.poll(() => namesOf(rowsOf(page))).toEqual(['a.png']);
    await expect.poll(shown).toBe('a.png');
  });

  test('nowhere without Git', async () => {
    expect(await hasCommand(page, 'Sizeproof: Review Texture Changes')).toBe(true);
    write(folder, { '.vscode/settings.json': '{ "git.enabled": false }' });
    await expect.poll(() => hasCommand(page, 'Sizeproof: Review Texture Changes')).toBe(false);
    await expect.poll(() => rowsOf(page).count()).toBe(0);
  });

  test(`${MANY} changed textures are listed`, async () => {
    const large = join(host.folder, 'large');
    mkdirSync(large);
    const files = (seed: number): Files =>
      Object.fromEntries(
        Array.from({ length: MANY }, (_, i) => [`${i % 20}/texture-${i}.png`, encodePng(grain(8, seed + i))]),
      );
    newRepository(large, files(0));
    write(large, files(MANY));
    await openWorkbench(page, host.url(large));
    await runCommand(page, 'Sizeproof: Review Texture Changes');
    const start = Date.now();
    await choice(page, 'Working tree').click();
    await page.getByText(`0 of ${MANY} looked at`).first().waitFor();
    const listed = Date.now() - start;
    await page.getByText('judged by their headers alone').first().waitFor();
    console.log(`${MANY} changed textures: listed in ${listed} ms, judged by headers in ${Date.now() - start} ms`);
    await rowsOf(page).first().click();
    await webviewOf(page).locator('side-card print-stage[data-painted]').nth(2).waitFor();
  });

  async function open(name: string): Promise<void> {
    // Until all are compared, rows move.
    await page
      .getByText(/of 5 looked at\.$/)
      .first()
      .waitFor();
    await runCommand(page, 'Source Control: Focus on Changed Textures View');
    // The view has room for a few rows alone.
    const focused = rowsOf(page).and(page.locator('.focused'));
    let last = '';
    const walk = async () => {
      const now = (await focused.allTextContents()).join();
      if (!now.includes(name)) await page.keyboard.press(now === last ? 'Home' : 'ArrowDown');
      last = now;
      return now;
    };
    await expect.poll(walk).toContain(name);
    await page.keyboard.press('Enter');
  }
});

/** The first of several, which is the whole; a submodule is another. */
async function chooseRepository(page: Page): Promise<void> {
  const input = page.locator('.quick-input-widget input');
  await page.locator('.quick-input-widget input[placeholder*="In which repository"]').waitFor();
  await choice(page, 'repo').click();
  await input.and(page.locator('[placeholder*="What is to be reviewed"]')).waitFor();
}

function makeRepository(library: string, folder: string): void {
  for (const each of [library, folder]) mkdirSync(each);
  newRepository(library, { 'own.png': picture(1) });
  const [was, is, gone] = [picture(2), picture(3), picture(4)].map(pointerTo);
  newRepository(folder, { 'a.png': picture(5), 'b.png': picture(6), 'large.png': was.text, 'lost.png': was.text });
  git(folder, '-c', 'protocol.file.allow=always', 'submodule', '--quiet', 'add', library, 'lib');
  commit(folder, {});
  commit(folder, { 'a.png': picture(7) });
  git(folder, 'commit', '--quiet', '--amend', '--message', 'second');
  write(folder, { 'b.png': picture(8), [was.store]: picture(2), [is.store]: picture(3) });
  git(folder, 'add', 'b.png');
  const texts = { 'large.png': is.text, 'lost.png': gone.text };
  write(folder, { 'a.png': picture(9), 'lib/own.png': picture(10), ...texts });
}

/** A Git LFS pointer and the place of its file below the repository.  [GitLFS, "The Pointer"] */
function pointerTo(bytes: Uint8Array): { readonly text: string; readonly store: string } {
  const oid = createHash('sha256').update(bytes).digest('hex');
  const text = `version https://git-lfs.github.com/spec/v1\noid sha256:${oid}\nsize ${bytes.length}\n`;
  return { text, store: `.git/lfs/objects/${oid.slice(0, 2)}/${oid.slice(2, 4)}/${oid}` };
}
