import { mkdirSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { type Host, startHost } from './server.ts';
import { packMemlab, packVsix } from './vsix.ts';
import { explorerRow, heard, newPage, openWorkbench, runCommand, webviewOf } from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

const SHOTS = join(top, 'dist', 'test', 'host');

const NO_DISK = 'This folder is on no disk that builds can reach';

describe('in a host without Node, on a folder without a disk', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let seed: string;

  beforeAll(async () => {
    seed = mkdtempSync(join(tmpdir(), 'spm-'));
    const files = makeWorkspace(join(seed, 'files'));
    mkdirSync(join(files, 'deep'));
    writeFileSync(join(files, 'deep', 'sizeproof.json'), '{ "defaults": { "kernal": "box" } }\n');
    const memlab = await packMemlab(files, seed);
    host = await startHost({
      vsix: await packVsix(SHOTS),
      others: [memlab],
      trust: 'everything',
      settings: { 'remote.extensionKind': { 'sizeproof.sizeproof': ['web'] } },
    });
    browser = await launchBrowser();
    page = await newPage(browser, host);
    await openWorkbench(page, host.url('memlab:/'));
    await explorerRow(page, 'icon.png').waitFor();
  });

  afterEach(async ({ task }) => {
    await page?.screenshot({ path: join(SHOTS, `${task.name.replaceAll(/\W+/g, '-')}.png`) });
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
    rmSync(seed, { recursive: true, force: true });
  });

  test('a settings file that is opened wakes it, and its wrong key is a problem', async () => {
    await explorerRow(page, 'deep').click();
    await explorerRow(page, 'sizeproof.json').dblclick();
    await page.locator('.tab.active[data-resource-name="sizeproof.json"]').waitFor();
    await runCommand(page, 'Problems: Focus on Problems View');
    await page.locator('.markers-panel').getByText('"kernal"').first().waitFor();
    await runCommand(page, 'View: Close All Editors');
    await runCommand(page, 'View: Toggle Panel Visibility');
  });

  test('a proof opens, is painted, and says why it cannot be built', async () => {
    await explorerRow(page, 'leaf.png').click();
    await page.locator('.tab.active[data-resource-name="leaf.png"]').waitFor();
    await runCommand(page, 'Sizeproof: Open Proof');
    const proof = webviewOf(page);
    await proof.locator('print-card print-stage[data-painted]').first().waitFor();
    await expect
      .poll(() => proof.locator('print-card print-stage').first().getAttribute('data-pixels'))
      .toMatch(/^[0-9a-f]{64}$/);
    const build = proof.getByRole('button', { name: 'Build', exact: true });
    await expect.poll(() => build.isDisabled()).toBe(true);
    await expect.poll(() => build.getAttribute('title')).toContain(NO_DISK);
  });

  test.each(['Build Textures', 'Check Textures', 'Rebuild from Manifests'])('%s says why not', async (command) => {
    await runCommand(page, `Sizeproof: ${command}`);
    await heard(page, NO_DISK);
    await runCommand(page, 'Notifications: Clear All Notifications');
  });

  test('a kernel is adopted into a new settings file, and saved', async () => {
    const proof = webviewOf(page);
    await proof.getByLabel('Add a print by a kernel').selectOption('mitchell');
    await proof.getByRole('button', { name: 'Adopt for this file only' }).click();
    await page.locator('.tab.dirty[data-resource-name="sizeproof.json"]').waitFor();
    await expect.poll(() => linesOf(page)).toContain('mitchell');
    await runCommand(page, 'File: Save All Files');
    await page.locator('.tab[data-resource-name="sizeproof.json"]:not(.dirty)').waitFor();
  });

  test('an explanation names the line that decided', async () => {
    await explorerRow(page, 'leaf.png').click();
    await runCommand(page, 'Sizeproof: Explain Treatment');
    await expect.poll(() => linesOf(page)).toMatch(/kernel\.minify +\{"name":"mitchell".* treatments\[0\] /);
  });

  test('none of it ran on the server’s Node', () => {
    const logs = readdirSync(join(host.folder, 'data', 'logs'), { recursive: true, encoding: 'utf8' })
      .filter((name) => name.endsWith('remoteexthost.log'))
      .map((name) => readFileSync(join(host.folder, 'data', 'logs', name), 'utf8'))
      .join('');
    expect(logs).toContain('_doActivateExtension sizeproof-test.memlab');
    expect(logs).not.toContain('_doActivateExtension sizeproof.sizeproof');
  });
});

/** What the editors show, their spaces as they were typed. */
async function linesOf(page: Page): Promise<string> {
  const lines = await page.locator('.editor-instance .view-line').allTextContents();
  return lines.join('\n').replaceAll('\u00a0', ' ');
}
