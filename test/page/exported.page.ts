import { mkdtempSync, readFileSync, rmSync, writeFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { pathToFileURL } from 'node:url';
import type { Browser, BrowserContext, Page } from 'playwright-core';
import { PNG } from 'pngjs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { decodeImage } from '../../core/codec/decode.ts';
import { openImage } from '../../core/codec/open.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import { type ProofOrder, startPreferences } from '../../core/export/order.ts';
import { proofPage } from '../../core/export/proof-page.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { inflate } from '../../extension/node/ports/inflate.ts';
import { launchBrowser } from '../host/browser.ts';
import { top } from '../house/tree.ts';
import { waitForPrints } from './browser.ts';
import { readPrint, troubleOf } from './stage.ts';

const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
const folder = mkdtempSync(join(tmpdir(), 'sizeproof-exported-'));

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(async () => {
  await browser?.close();
  rmSync(folder, { recursive: true, force: true });
});

function orderOf(path: string, state: unknown, name = path.slice(path.lastIndexOf('/') + 1)): ProofOrder {
  const demo = join(top, 'test/demo');
  const { settings } = parseSettings(readFileSync(join(demo, 'sizeproof.json'), 'utf8'), '/somewhere/sizeproof.json');
  const { treatment, origins } = resolveTreatment(settings, path);
  return {
    name,
    path,
    image: readFileSync(join(demo, path)),
    roughness: null,
    settings: { file: 'sizeproof.json', globs: ['ground/**'], treatment, origins },
    state,
    preferences: startPreferences,
    remark: null,
  };
}

/** Writes an exported page, opens it from its file with no network, and waits for its prints. */
async function openExported(
  order: ProofOrder,
  { prints = 1, scheme = 'dark' }: { readonly prints?: number; readonly scheme?: 'dark' | 'light' } = {},
): Promise<{ readonly page: Page; readonly context: BrowserContext; readonly asked: string[] }> {
  const at = (name: string) => readFileSync(join(top, 'dist/page', name), 'utf8');
  const code = { script: at('page.js'), worker: at('worker.js'), style: at('page.css') };
  const file = join(folder, 'proof.html');
  writeFileSync(file, proofPage(order, { code, language: 'en', words: {} }, newHash));
  return openFile(file, { prints, scheme });
}

async function openFile(
  file: string,
  { prints, scheme = 'dark' }: { readonly prints: number; readonly scheme?: 'dark' | 'light' },
): Promise<{ readonly page: Page; readonly context: BrowserContext; readonly asked: string[] }> {
  const context = await browser.newContext({
    viewport: { width: 1280, height: 900 },
    colorScheme: scheme,
    offline: true,
  });
  const page = await context.newPage();
  const asked: string[] = [];
  page.on('request', (request) => asked.push(request.url()));
  await page.addInitScript(() => {
    const stage = window as unknown as { violations: string[]; longTasks: number[] };
    stage.violations = [];
    stage.longTasks = [];
    document.addEventListener('securitypolicyviolation', (event) => {
      stage.violations.push(`${event.violatedDirective} ${event.blockedURI}`);
    });
  });
  const errors: string[] = [];
  page.on('pageerror', (error) => errors.push(String(error)));
  page.on('console', (message) => {
    if (message.type() === 'error') errors.push(message.text());
  });
  await page.goto(pathToFileURL(file).href);
  await waitForPrints(page, prints);
  expect(errors).toEqual([]);
  return { page, context, asked };
}

const two = [
  { id: 0, kernel: null, change: {} },
  { id: 1, kernel: { name: 'box', params: {} }, change: {} },
];

test('an exported page shows the built level, byte for byte as pngjs reads it, from its file and without a network', async () => {
  const state = { version: 1, zoom: 1, slots: two, selected: 1, sight: { kind: 'level', level: 2 } };
  const order = orderOf('ground/cobbles.png', state);
  const { page, context, asked } = await openExported(order, { prints: 2 });
  const source = (await decodeImage(openImage(order.image, order.name, inflate))) as StraightRaster;
  const { treatment } = order.settings;
  const box = { name: 'box', params: {} };
  const treatments = [treatment, { ...treatment, kernel: { minify: box, magnify: box } }];
  for (const [index, each] of treatments.entries()) {
    const level = buildChain(source, each).images.find((image) => image.level === 2)!;
    const png = PNG.sync.read(Buffer.from(await encodePng(level.raster as StraightRaster, deflate)));
    const print = await readPrint(page, index);
    expect(Buffer.from(print.rgb).equals(png.data.filter((_, i) => i % 4 !== 3))).toBe(true);
  }
  expect((await troubleOf(page)).violations).toEqual([]);
  expect(asked.filter((url) => !/^(file|blob):/.test(url))).toEqual([]);
  expect(await page.getByRole('button', { name: /^(Build|Adopt|Export sheet|Reveal)/ }).count()).toBe(0);
  await context.close();
});

test('what needs no host works: switches, kernels, views, the divider, readings', async () => {
  const { page, context } = await openExported(orderOf('foliage/alder-twig.png', null));
  await page.getByLabel('Keep coverage').uncheck();
  await waitForPrints(page, 2);
  await page.getByRole('combobox', { name: 'View' }).selectOption('difference');
  await page.getByText('0.10').first().waitFor();
  await waitForPrints(page, 2);
  await page.getByRole('application').first().focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => page.getByRole('region', { name: 'Texel', exact: true }).textContent()).toMatch(/\d/);
  expect((await troubleOf(page)).violations).toEqual([]);
  await context.close();
});

test('a copy is saved with what the page shows now; it opens as that, and saves the same copy again', async () => {
  const { page, context } = await openExported(orderOf('ground/cobbles.png', null));
  await page.getByLabel('Beyond the edges').selectOption('clamp-to-edge');
  await waitForPrints(page, 2);
  await page.getByRole('button', { name: 'True size' }).click();
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await sight.focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 3');
  await waitForPrints(page, 2);
  const print = await readPrint(page, 1);
  const saved = await savedCopy(page, 'saved.html');
  const copy = await openFile(saved, { prints: 2 });
  expect(
    await copy.page.getByRole('slider', { name: 'Sight on the size axis' }).getAttribute('aria-valuetext'),
  ).toContain('level 3');
  expect(await readPrint(copy.page, 1)).toEqual(print);
  const again = await savedCopy(copy.page, 'again.html');
  expect(readFileSync(again, 'utf8')).toBe(readFileSync(saved, 'utf8'));
  expect((await troubleOf(copy.page)).violations).toEqual([]);
  await copy.context.close();
  await context.close();
});

/** Presses the button, and answers where the browser put the file. */
async function savedCopy(page: Page, name: string): Promise<string> {
  const [download] = await Promise.all([
    page.waitForEvent('download'),
    page.getByRole('button', { name: 'Save a copy' }).click(),
  ]);
  expect(download.suggestedFilename()).toBe('cobbles.proof.html');
  await download.saveAs(join(folder, name));
  return join(folder, name);
}

test('names that would end their block are shown as they are', async () => {
  const name = '</script><script>alert(1)</script>.png';
  const { page, context } = await openExported(orderOf('ui/lantern.png', null, name));
  expect(await page.getByRole('heading', { level: 1 }).textContent()).toBe(name);
  expect(await page.title()).toBe(name);
  await context.close();
});

test.each(['light', 'dark'] as const)('axe finds nothing where the system is %s', async (scheme) => {
  const { page, context } = await openExported(orderOf('ground/cobbles.png', { version: 1, slots: two, selected: 1 }), {
    prints: 2,
    scheme,
  });
  const session = await context.newCDPSession(page);
  await session.send('Runtime.evaluate', { expression: axe });
  const found = await session.send('Runtime.evaluate', {
    expression: `axe.run(document, { resultTypes: ['violations'] }).then(({ violations }) => JSON.stringify(violations.map(
      ({ id, nodes }) => id + ': ' + nodes[0].target.join(' ') + ' ' + nodes[0].failureSummary)))`,
    awaitPromise: true,
    returnByValue: true,
  });
  expect(JSON.parse(String(found.result.value))).toEqual([]);
  const ground = await page.evaluate(() => getComputedStyle(document.body).backgroundColor);
  expect(ground).toBe(scheme === 'light' ? 'rgb(255, 255, 255)' : 'rgb(31, 31, 31)');
  await page.screenshot({ path: join(top, `dist/shots/exported-${scheme}.png`) });
  await context.close();
});
