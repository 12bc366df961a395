import { execFileSync } from 'node:child_process';
import { mkdirSync, mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { type ReviewTexture, reviewPage } from '../../core/export/review-page.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { encodePng } from '../demo/paint/png.ts';
import { grain, HARMFUL, halved, makeMixedBranch } from '../fixtures/branch.ts';
import { testGitEnvironment } from '../fixtures/repository.ts';
import { launchBrowser } from '../host/browser.ts';
import { top } from '../house/tree.ts';
import { sideOf, waitForSides } from './review-recorded.ts';

const folder = mkdtempSync(join(tmpdir(), 'sizeproof-review-'));
const shots = join(top, 'dist/shots');
let browser: Browser;
beforeAll(async () => {
  mkdirSync(shots, { recursive: true });
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
  rmSync(folder, { recursive: true, force: true });
});

test('a review as a page compares what it carries, without a network, and goes from texture to texture', async () => {
  const at = (name: string) => readFileSync(join(top, 'dist/page', name), 'utf8');
  const code = { script: at('page.js'), worker: at('worker.js'), style: at('page.css') };
  const texture = (path: string, after: Uint8Array): ReviewTexture => ({
    path,
    oldPath: path,
    status: 'changed',
    verdict: { kind: 'replaced', values: { before: 'a', after: 'b' } },
    impact: { score: 1, harms: [] },
    manifest: 'none',
    problems: [],
    before: sideOf(path, encodePng(grain(64, 1))),
    after: sideOf(path, after),
  });
  const order = {
    beforeLabel: 'one',
    afterLabel: 'other',
    textures: [texture('a.png', encodePng(halved(grain(64, 1)))), texture('b.png', encodePng(grain(64, 2)))],
    preferences: { backdrop: 'checker', swapDwell: 333 } as const,
  };
  const file = join(folder, 'review.html');
  writeFileSync(file, reviewPage(order, { title: 'Review', code, language: 'en', words: {} }, newHash));
  const context = await browser.newContext({ viewport: { width: 1280, height: 900 }, offline: true });
  const page = await context.newPage();
  await page.goto(pathToFileURL(file).href);
  await waitForSides(page);
  expect(await page.locator('review-top h1').textContent()).toBe('a.png');
  await page.getByRole('button', { name: 'b.png' }).click();
  await expect.poll(() => page.locator('review-top h1').textContent()).toBe('b.png');
  await waitForSides(page);
  await context.close();
});

test('what review --html wrote of a branch opens at the harm, at the size where it hurts, and lists what the table lists', async () => {
  const repository = join(folder, 'branch');
  mkdirSync(repository);
  makeMixedBranch(repository);
  const file = join(folder, 'branch.html');
  const cli = join(top, 'dist/cli.js');
  const environment = testGitEnvironment();
  const table = execFileSync(process.execPath, [cli, 'review', 'main...', '--html', file], {
    cwd: repository,
    env: environment,
    encoding: 'utf8',
  });
  const names = [...table.matchAll(/^ *\d+\.\d {2}\w+ +(\S+)/gm)].map(([, name]) => name);
  expect(names.slice(0, 2)).toEqual(HARMFUL);
  const context = await browser.newContext({ viewport: { width: 1280, height: 900 }, offline: true });
  const page = await context.newPage();
  const refused: string[] = [];
  page.on('console', (message) => {
    if (message.type() === 'error') refused.push(message.text());
  });
  await page.goto(pathToFileURL(file).href);
  await waitForSides(page);
  expect(await page.locator('review-top h1').textContent()).toBe(HARMFUL[0]);
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 3');
  await page.screenshot({ path: join(shots, 'review-exported.png') });
  for (const name of names.slice(1)) {
    await page.getByRole('button', { name: 'Next' }).click();
    await expect.poll(() => page.locator('review-top h1').textContent()).toBe(name);
  }
  expect(refused).toEqual([]);
  await context.close();
});
