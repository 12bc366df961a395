import { createHash } from 'node:crypto';
import { copyFileSync, readFileSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, FrameLocator, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { type Host, startHost } from './server.ts';
import { packVsix } from './vsix.ts';
import { choice, explorerRow, newPage, openWorkbench, runCommand, webviewOf } from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

const SHOTS = join(top, 'dist', 'test', 'host');

/** What stands beside a walkthrough's step: how wide its picture is, or text. */
async function mediaOf(page: Page): Promise<string> {
  const media = page.locator('.gettingStartedContainer .getting-started-media');
  const picture = media.locator('img');
  const text = media.locator('iframe.webview.ready');
  await picture.or(text).first().waitFor();
  if ((await text.count()) > 0) return 'text';
  const widths = await picture.evaluateAll((all) => all.map((image) => (image as HTMLImageElement).naturalWidth));
  return `${widths[0]} wide`;
}

describe('as an artist would', () => {
  let host: Host;
  let browser: Browser;
  let page: Page;
  let folder: string;

  beforeAll(async () => {
    host = await startHost({ vsix: await packVsix(SHOTS), trust: 'everything' });
    folder = makeWorkspace(join(host.folder, 'ws'));
    copyFileSync(join(top, 'test', 'demo', 'ground', 'cobbles.png'), join(folder, 'ground.png'));
    const sprite = { match: 'icon.png', levels: 'none', targets: ['0.75x'], outputs: ['png'] };
    writeFileSync(join(folder, 'sizeproof.json'), `${JSON.stringify({ treatments: [sprite] }, null, 2)}\n`);
    browser = await launchBrowser();
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
  });

  test('nearest suits a sprite at 0.75x and no painted texture at level 3; what is adopted is built and agrees by hash', async () => {
    const sprite = await openWith('icon.png', 'Size', '0.75x');
    const [smooth, picked] = await figures(sprite);
    // The smooth kernel leaves the sprite's range of colors; nearest moves its codes, and the page names no halo.
    expect(smooth.halo).toBeGreaterThan(0);
    expect(picked.halo).toBe(0);
    await page.screenshot({ path: join(SHOTS, 'story-sprite.png') });

    const painted = await openWith('ground.png', 'Level', '3');
    const [mean, pick] = await figures(painted);
    // Of 64 texels one is picked, and the light of the others is lost or overdone; the mean keeps it.
    expect(Math.abs(pick.lightChange)).toBeGreaterThan(Math.abs(mean.lightChange));
    await page.screenshot({ path: join(SHOTS, 'story-painted.png') });

    const again = await open('icon.png');
    await again.locator('print-card').nth(1).locator('print-stage').click();
    await again.getByRole('button', { name: 'Adopt for this file only' }).click();
    await page.locator('.tab.dirty[data-resource-name="sizeproof.json"]').waitFor();
    await again.getByRole('button', { name: 'Build', exact: true }).click();
    await again.locator('top-bar [data-built="built"]').waitFor();
    const manifest = JSON.parse(readFileSync(join(folder, 'built', 'icon.mips.json'), 'utf8'));
    expect(manifest.settings.kernel.minify.name).toBe('nearest');
    const [target] = manifest.targets;
    await again.locator(`print-card print-stage[data-pixels="${target.pixels}"]`).first().waitFor();
    const bytes = readFileSync(join(folder, 'built', target.file.path));
    expect(createHash('sha256').update(bytes).digest('hex')).toBe(target.file.sha256);
  });

  test('the walkthrough opens, and each step shows what it speaks of', async () => {
    await runCommand(page, 'Welcome: Open Walkthrough');
    await choice(page, 'Textures at the sizes they are seen at').click();
    const steps = page.locator('.gettingStartedContainer .step-list-container .step-title');
    await steps.first().waitFor();
    // The editor takes pictures to be drawn for 1.5 device pixels a CSS pixel.
    const media = [`${Math.round(896 / 1.5)} wide`, 'text', 'text', `${Math.round(1064 / 1.5)} wide`];
    for (const [i, each] of media.entries()) {
      if (i > 0) await steps.nth(i).click();
      await expect.poll(() => mediaOf(page)).toBe(each);
      await page.screenshot({ path: join(SHOTS, `walkthrough-${i}.png`) });
    }
    expect(await steps.count()).toBe(media.length);
  });

  async function open(name: string): Promise<FrameLocator> {
    await explorerRow(page, name).click();
    await page.locator(`.tab.active[data-resource-name="${name}"]`).first().waitFor();
    await runCommand(page, 'Sizeproof: Open Proof');
    const proof = webviewOf(page);
    await proof.locator('print-card print-stage[data-painted]').first().waitFor();
    return proof;
  }

  /** A proof at a size or a level, with a print by nearest beside that of the settings. */
  async function openWith(name: string, field: string, value: string): Promise<FrameLocator> {
    const proof = await open(name);
    const typed = proof.getByLabel(field, { exact: true });
    await typed.fill(value);
    await typed.press('Enter');
    await proof.getByLabel('Add a print by a kernel').selectOption('nearest');
    await proof.locator('print-card').nth(1).locator('print-stage[data-painted]').waitFor();
    return proof;
  }

  /** What the page says below its first two prints. */
  async function figures(proof: FrameLocator) {
    const footers = proof.locator('print-card footer');
    const texts = async () => (await footers.allTextContents()).map((each) => each.replace(/\s+/g, ' '));
    await expect
      .poll(async () => (await texts()).slice(0, 2))
      .toEqual([expect.stringMatching(/halo .*luminance/), expect.stringMatching(/luminance/)]);
    return (await texts()).slice(0, 2).map((text) => {
      const change = /luminance \S+ ([+−])([\d.]+) ?%/.exec(text);
      return {
        halo: Number(/halo ([\d.]+)/.exec(text)?.[1] ?? 0),
        lightChange: change === null ? 0 : Number(change[2]) * (change[1] === '+' ? 1 : -1),
      };
    });
  }
});
