import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { hashPixels } from '../../core/codec/pixels.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { launchBrowser } from '../host/browser.ts';
import { showPage, waitForPrints } from './browser.ts';
import { firstPrintOf, type Recording, record } from './recorded.ts';
import { readPrint } from './stage.ts';
import { waitForRest } from './unanswered.ts';

// The host's worker makes the first print, the page's own makes it again: both must agree, and the page says so if they do not.

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(() => browser?.close());

const noise = noiseRaster(11, { width: 200, height: 150 }, 3, 8, 'noise');
const { treatment } = resolveTreatment(null, 'noise.tga');
const level1 = buildChain(noise, treatment).images[1].raster as StraightRaster;
const kept = { version: 1, zoom: 1, sight: { kind: 'level', level: 1 } };
const opening = { level: 1, target: null };

/** An uncompressed TGA: whatever byte of it is changed, it can be read.  [TGA2, type 2] */
function encodeTga({ extent, codes }: StraightRaster): Uint8Array {
  const head = new Uint8Array(18);
  head[2] = 2;
  head.set([extent.width & 255, extent.width >> 8, extent.height & 255, extent.height >> 8, 24, 0x20], 12);
  const file = new Uint8Array(18 + codes.length);
  file.set(head);
  for (let at = 0; at < codes.length; at += 3) file.set([codes[at + 2], codes[at + 1], codes[at]], 18 + at);
  return file;
}

async function recorded(rest: Partial<Recording> = {}): Promise<Recording> {
  const recording = record(encodeTga(noise), 'noise.tga', {}, kept);
  return { ...recording, first: await firstPrintOf(recording, opening), ...rest };
}

const banner = '[data-state="disagrees"]';

test('the host’s print is on the screen before the file is here; the page’s own follows and agrees', async () => {
  const { page, context } = await showPage(browser, await recorded({ held: 'held' }));
  await waitForPrints(page);
  const first = await readPrint(page);
  expect(Buffer.from(first.rgb).equals(Buffer.from(level1.codes))).toBe(true);
  // A hash is what the page found itself, and it has found none yet.
  expect(first.pixels).toBe('');
  await page.evaluate(() => (window as unknown as { release(): void }).release());
  await expect.poll(async () => (await readPrint(page)).pixels).toBe(hashPixels(level1, newHash));
  expect(Buffer.from((await readPrint(page)).rgb).equals(Buffer.from(level1.codes))).toBe(true);
  await waitForRest(page);
  expect(await page.locator(banner).count()).toBe(0);
  await context.close();
});

test('one byte of the host’s print that differs is said, and the page’s own print stays', async () => {
  const recording = await recorded();
  recording.first!.picture.codes[1234] ^= 1;
  const { page, context } = await showPage(browser, recording);
  await page.locator(banner).getByText(`differ in 1 of ${level1.codes.length} codes`).waitFor();
  const { pixels } = await readPrint(page);
  expect(pixels).toBe(hashPixels(level1, newHash));
  await context.close();
});

test('one byte of the file that differs is said', async () => {
  const recording = await recorded();
  recording.bytes[18 + 3 * 9000] ^= 128;
  const { page, context } = await showPage(browser, recording);
  await page.locator(banner).waitFor();
  await context.close();
});

test('in a PNG such a byte is damage', async () => {
  const file = await encodePng(noise, deflate);
  const recording = record(file, 'noise.png', {}, kept);
  const first = await firstPrintOf(recording, opening);
  const bytes = file.slice();
  bytes[bytes.length >> 1] ^= 1;
  const { page, context } = await showPage(browser, { ...recording, first, bytes });
  await page.locator('main[data-state="damaged"]').waitFor();
  await context.close();
});

test('a print of an older file says nothing about a newer one', async () => {
  const recording = await recorded({ bytesRevision: 2 });
  recording.bytes[18 + 3 * 9000] ^= 128;
  const { page, context } = await showPage(browser, recording);
  await waitForPrints(page);
  await expect.poll(async () => (await readPrint(page)).pixels).not.toBe('');
  await waitForRest(page);
  expect(await page.locator(banner).count()).toBe(0);
  await context.close();
});

test.each([
  [true, 'equals the build'],
  [false, 'differs from the build'],
])('the page asks whether its hash is the build’s: %s', async (isBuilt, words) => {
  const recording = record(encodeTga(noise), 'noise.tga', { state: { kind: 'built' } }, kept);
  const { page, context } = await showPage(browser, { ...recording, isBuilt });
  await page.locator('print-card footer').getByText(words).waitFor();
  const asked = await page.evaluate(
    () => (window as unknown as { asked: { call: string; question: unknown }[] }).asked,
  );
  expect(asked.filter(({ call }) => call === 'isBuilt').map(({ question }) => question)).toEqual([
    { use: 'image', level: 1, target: null, pixels: hashPixels(level1, newHash) },
  ]);
  await context.close();
});
