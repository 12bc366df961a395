import { execFileSync } from 'node:child_process';
import { existsSync, readdirSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, afterEach, beforeAll, describe, expect, test } from 'vitest';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { type Host, startHost } from './server.ts';
import { packVsix } from './vsix.ts';
import {
  acceptPath,
  choice,
  explorerRow,
  heard,
  newPage,
  openWorkbench,
  pickFromExplorer,
  runCommand,
  webviewOf,
} from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

/** Pictures of the last run, to be looked at. */
const SHOTS = join(top, 'dist', 'test', 'host');

/** What a user downloads, in bytes. */
const MOST_BYTES = 2_000_000;

describe('the packed extension in a workbench', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let folder: string;
  let vsix: string;

  beforeAll(async () => {
    vsix = await packVsix(SHOTS);
    host = await startHost({
      vsix,
      trust: 'asked',
      settings: { 'security.workspace.trust.startupPrompt': 'never', 'security.workspace.trust.banner': 'never' },
    });
    browser = await launchBrowser();
    folder = makeWorkspace(join(host.folder, 'ws'));
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
  });

  afterEach(async ({ task }) => {
    await page?.screenshot({ path: join(SHOTS, `${task.name.replaceAll(/\W+/g, '-')}.png`) });
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
  });

  test('holds what it needs and no more', () => {
    const files = readdirSync(host.extension(), { recursive: true, encoding: 'utf8' })
      .filter((name) => statSync(join(host.extension(), name)).isFile())
      .sort();
    expect(files).toEqual([
      '.vsixmanifest',
      'LICENSE.txt',
      'changelog.md',
      'dist/cli.js',
      'dist/engine.wasm',
      'dist/extension.cjs',
      'dist/extension.web.js',
      'dist/l10n/bundle.l10n.json',
      'dist/package.json',
      'dist/page/page.css',
      'dist/page/page.js',
      'dist/page/worker.js',
      'dist/pool.worker.js',
      'extension/walkthrough/build.png',
      'extension/walkthrough/explain.md',
      'extension/walkthrough/proof.png',
      'extension/walkthrough/settings.md',
      'icon.png',
      'package.json',
      'package.nls.json',
      'readme.md',
    ]);
    expect(statSync(vsix).size).toBeLessThan(MOST_BYTES);
  });

  test('an untrusted folder can be checked, and neither built nor reviewed, and it says why', async () => {
    await runCommand(page, 'Sizeproof: Build Textures');
    await heard(page, 'This workspace is not trusted');
    await runCommand(page, 'Notifications: Clear All Notifications');
    await runCommand(page, 'Sizeproof: Review Texture Changes');
    await heard(page, 'This workspace is not trusted, and a review runs Git');
    await runCommand(page, 'Notifications: Clear All Notifications');
    await runCommand(page, 'Sizeproof: Check Textures');
    await heard(page, '0 as built, 2 not');
    expect(readdirSync(folder).sort()).toEqual(['icon.png', 'leaf.png']);
  });

  test('once it is trusted, the explorer builds one texture', async () => {
    await runCommand(page, 'Workspaces: Manage Workspace Trust');
    await page
      .locator('.workspace-trust-editor .monaco-button', { hasText: /^Trust/ })
      .first()
      .click();
    await page.getByText('You trust this folder').waitFor();
    // Newer editors show it over everything else.
    await page.keyboard.press('Escape');
    await runCommand(page, 'Notifications: Clear All Notifications');
    await pickFromExplorer(page, 'icon.png', 'Build Textures');
    await heard(page, '1 built, 0 unchanged, 0 failed');
    expect(readdirSync(join(folder, 'built'))).toContain('icon.mips.json');
  });

  test('the palette opens a proof of the active image, which is painted', async () => {
    await explorerRow(page, 'icon.png').dblclick();
    await page.locator('.tab[data-resource-name="icon.png"]').waitFor();
    await runCommand(page, 'Sizeproof: Open Proof');
    const proof = webviewOf(page);
    await proof.locator('print-card canvas').first().waitFor();
    // It was built before.
    await proof.locator('top-bar [data-built="built"]').waitFor();
  });

  test('a kernel is adopted beside the proof, built from it, and print and manifest agree by hash', async () => {
    const proof = webviewOf(page);
    await proof.getByLabel('Add a print by a kernel').selectOption('mitchell');
    await proof.getByRole('button', { name: 'Adopt for this file only' }).click();
    const settings = page.locator('.tab.dirty[data-resource-name="sizeproof.json"]');
    await settings.waitFor();
    await proof.locator('top-bar [data-built="stale"]').waitFor();
    await proof.getByRole('button', { name: 'Build', exact: true }).click();
    await proof.locator('top-bar [data-built="built"]').waitFor();
    // A build saves what was typed, where nothing else is unsaved.
    await settings.waitFor({ state: 'detached' });
    const manifest = JSON.parse(readFileSync(join(folder, 'built', 'icon.mips.json'), 'utf8'));
    expect(manifest.settings.kernel.minify.name).toBe('mitchell');
    const field = proof.getByLabel('Level', { exact: true });
    await field.fill('1');
    await field.press('Enter');
    const built = manifest.levels.find((each: { level: number }) => each.level === 1);
    await proof.locator(`print-card print-stage[data-pixels="${built.pixels}"]`).first().waitFor();
  });

  test('the page exports what it shows, as the command line writes it, byte for byte', async () => {
    const proof = webviewOf(page);
    await proof.getByRole('button', { name: 'Export sheet' }).click();
    await acceptPath(page, 'icon.proof.png');
    await proof.getByText('Wrote icon.proof.png.').waitFor();
    const exported = readFileSync(join(folder, 'built', 'icon.proof.png'));
    const words = ['proof', 'icon.png', '--sheet', 'built/cli.proof.png', '--kernels', 'mitchell', '--at', '1'];
    execFileSync(process.execPath, [join(top, 'dist', 'cli.js'), ...words], { cwd: folder });
    expect(exported.equals(readFileSync(join(folder, 'built', 'cli.proof.png')))).toBe(true);
  });

  test('so does the explorer, without a page that is open', async () => {
    await runCommand(page, 'View: Close All Editors');
    await pickFromExplorer(page, 'icon.png', 'Export Proof');
    await choice(page, 'Page').click();
    await acceptPath(page, 'icon.proof.html');
    await expect.poll(() => existsSync(join(folder, 'icon.proof.html'))).toBe(true);
    const words = ['proof', 'icon.png', '--html', 'built/cli.proof.html'];
    execFileSync(process.execPath, [join(top, 'dist', 'cli.js'), ...words], { cwd: folder });
    const exported = readFileSync(join(folder, 'icon.proof.html'), 'utf8');
    expect(exported).toBe(readFileSync(join(folder, 'built', 'cli.proof.html'), 'utf8'));
  });

  test('a page that would be larger than 50 MB asks first, and carries the middle where that is chosen', async () => {
    writeFileSync(join(folder, 'large.tga'), plainTga(4096, 4300));
    await pickFromExplorer(page, 'large.tga', 'Export Proof');
    await choice(page, 'Page').click();
    const dialog = page.locator('.monaco-dialog-box');
    await dialog.getByText('The page would carry 53 MB of large.tga.').waitFor();
    await page.screenshot({ path: join(SHOTS, 'export-asks.png') });
    await dialog.getByRole('button', { name: 'Carry Its Middle' }).click();
    await acceptPath(page, 'large.proof.html');
    const file = join(folder, 'large.proof.html');
    await expect.poll(() => existsSync(file)).toBe(true);
    expect(readFileSync(file, 'utf8')).toContain('2048');
    expect(statSync(file).size).toBeLessThan(50e6);
  });

  test('an open proof follows the theme', async () => {
    await explorerRow(page, 'icon.png').dblclick();
    await page.locator('.tab[data-resource-name="icon.png"]').waitFor();
    await runCommand(page, 'Sizeproof: Open Proof');
    const proof = webviewOf(page);
    await proof.locator('print-card canvas').first().waitFor();
    const lightness = async () => {
      const color = await proof.locator('body').evaluate((body) => getComputedStyle(body).backgroundColor);
      const [red] = color.match(/\d+/g) ?? [];
      return Number(red);
    };
    await expect.poll(lightness).toBeLessThan(DARK);
    await runCommand(page, 'Preferences: Toggle between Light/Dark Themes');
    await expect.poll(lightness).toBeGreaterThan(LIGHT);
    await page.screenshot({ path: join(SHOTS, 'theme-light.png') });
    await runCommand(page, 'Preferences: Toggle between Light/Dark Themes');
    await expect.poll(lightness).toBeLessThan(DARK);
  });

  test('a settings file is completed as it is typed', async () => {
    await explorerRow(page, 'sizeproof.json').dblclick();
    await page.locator('.tab.active[data-resource-name="sizeproof.json"]').waitFor();
    await page.locator('.editor-instance .view-lines').last().click();
    await page.keyboard.press('Control+Home');
    await page.keyboard.press('End');
    await page.keyboard.type('\n"');
    const offered = page.locator('.suggest-widget.visible .monaco-list-row');
    await offered.filter({ hasText: 'outDir' }).first().waitFor();
    await page.screenshot({ path: join(SHOTS, 'settings-completed.png') });
    await page.keyboard.press('Escape');
  });
});

/** Red of a page's ground in a dark theme is less than this, and in a light one more; of 255. */
const [DARK, LIGHT] = [80, 200];

/** An uncompressed TGA of one color.  [TGA2, type 2] */
function plainTga(width: number, height: number): Uint8Array {
  const file = new Uint8Array(18 + width * height * 3).fill(90, 18);
  file[2] = 2;
  file.set([width & 255, width >> 8, height & 255, height >> 8, 24, 0x20], 12);
  return file;
}
