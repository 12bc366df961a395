import type { Browser } from 'playwright-core';
import { PNG } from 'pngjs';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { hashPixels } from '../../core/codec/pixels.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import { measureHalo } from '../../core/finding/halo.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { pagePolicy } from '../../extension/app/proof/policy.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { newHash } from '../../extension/node/ports/hash.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { launchBrowser } from '../host/browser.ts';
import { ORIGIN, showPage, waitForPrints } from './browser.ts';
import { record } from './recorded.ts';
import { boxOfPrint, readPrint, troubleOf } from './stage.ts';
import { waitForRest } from './unanswered.ts';

const ratios = [1, 1.25, 1.5, 2];

const { treatment } = resolveTreatment(null, 'noise.png');
const noise = noiseRaster(7, { width: 251, height: 118 }, 3, 8, 'noise');
const state = (more: object) => ({ version: 1, zoom: 1, sight: { kind: 'level', level: 1 }, ...more });

describe.each(ratios)('at %d device pixels a CSS pixel', (ratio) => {
  let browser: Browser;
  beforeAll(async () => {
    browser = await launchBrowser([`--force-device-scale-factor=${ratio}`, '--window-size=1280,1000']);
  });
  afterAll(() => browser?.close());

  test('a print is the build’s level, byte for byte', async () => {
    const file = await encodePng(noise, deflate);
    const slots = [
      { id: 0, kernel: null, change: {} },
      { id: 1, kernel: { name: 'box', params: {} }, change: {} },
    ];
    const { page, context } = await showPage(browser, record(file, 'noise.png', {}, state({ slots })), {
      window: 'own',
    });
    await waitForPrints(page, 2);
    expect(await page.evaluate(() => devicePixelRatio)).toBe(ratio);
    const built = buildChain(noise, treatment).images[1];
    const print = await readPrint(page);
    expect(Buffer.from(print.rgb).equals(Buffer.from((built.raster as StraightRaster).codes))).toBe(true);
    await expect.poll(async () => (await readPrint(page)).pixels).toBe(hashPixels(built.raster, newHash));
    const choice = { name: 'box', params: {} };
    const boxed = buildChain(noise, { ...treatment, kernel: { minify: choice, magnify: choice } }).images[1];
    const other = await readPrint(page, 1);
    expect(Buffer.from(other.rgb).equals(Buffer.from((boxed.raster as StraightRaster).codes))).toBe(true);
    expect((await troubleOf(page)).violations).toEqual([]);
    await context.close();
  });

  test('a checker of single texels is pure on the screen', async () => {
    const extent = { width: 64, height: 48 };
    const codes = new Uint8Array(extent.width * extent.height * 3);
    for (let i = 0; i < codes.length; i++) {
      const texel = Math.floor(i / 3);
      codes[i] = (texel + Math.floor(texel / extent.width)) % 2 === 0 ? 255 : 0;
    }
    const checker: StraightRaster = { kind: 'straight', extent, channels: 3, depth: 8, codes };
    const kept = state({ sight: { kind: 'level', level: 0 } });
    const { page, context } = await showPage(browser, record(await encodePng(checker, deflate), 'c.png', {}, kept), {
      window: 'own',
    });
    await waitForPrints(page);
    await waitForRest(page);
    const box = await boxOfPrint(page);
    const screen = PNG.sync.read(await page.screenshot());
    // The canvas begins where the browser snapped its box: the nearest whole device pixel.
    const [left, top] = [Math.round(box.x), Math.round(box.y)];
    const wrong: string[] = [];
    for (let y = 0; y < box.height; y++) {
      for (let x = 0; x < box.width; x++) {
        const at = ((top + y) * screen.width + left + x) * 4;
        const expected = (x + y) % 2 === 0 ? 255 : 0;
        const found = [screen.data[at], screen.data[at + 1], screen.data[at + 2]];
        if (found.some((code) => code !== expected)) wrong.push(`${x},${y}: ${found}`);
      }
    }
    expect(wrong.slice(0, 5)).toEqual([]);
    await context.close();
  });
});

test('prints are the same where the SIMD engine may not run, and the page says that they take longer', async () => {
  const file = await encodePng(noise, deflate);
  const browser = await launchBrowser();
  const prints: string[] = [];
  const words: (string | null)[] = [];
  for (const policy of [
    pagePolicy(ORIGIN, 'recorded'),
    pagePolicy(ORIGIN, 'recorded').replace(" 'wasm-unsafe-eval'", ''),
  ]) {
    const { page, context } = await showPage(browser, record(file, 'noise.png', {}, state({})), { policy });
    await waitForPrints(page);
    const { pixels, rgb } = await readPrint(page);
    prints.push(`${pixels} ${Buffer.from(rgb).toString('base64')}`);
    words.push(await page.locator('.foot').textContent());
    await context.close();
  }
  expect(prints[0]).toBe(prints[1]);
  expect(words[0]).not.toContain('SIMD');
  expect(words[1]).toContain('The SIMD engine cannot run here');
  await browser.close();
});

test('numbers on the page are core’s, and what the main thread did is printed', async () => {
  const file = await encodePng(noise, deflate);
  const browser = await launchBrowser();
  const { page, context } = await showPage(browser, record(file, 'noise.png', {}, state({})));
  await waitForPrints(page);
  const halo = measureHalo(noise, treatment).find(({ image }) => image === 1)!;
  const [built] = buildChain(noise, treatment).images.filter(({ level }) => level === 1);
  const luminance = built.light!.light / built.light!.weight;
  const footer = page.locator('print-card').first().locator('footer');
  await footer.getByText(halo.worst.toFixed(1), { exact: true }).waitFor();
  await waitForRest(page);
  const text = (await footer.textContent())?.replace(/\s+/g, ' ') ?? '';
  expect(text).toContain(`halo ${halo.worst.toFixed(1)}`);
  expect(text).toContain(`luminance .${luminance.toFixed(3).slice(2)}`);
  const codes = (built.raster as StraightRaster).codes;
  const texel = 29 * 125 + 62;
  const shown = () => page.locator('readings-strip td[data-codes]').first().getAttribute('data-codes');
  await expect.poll(shown).toBe([...codes.slice(texel * 3, texel * 3 + 3)].join(' '));
  const { longTasks } = await troubleOf(page);
  console.log(
    `Tasks of 50 ms and more on the page's main thread: ${longTasks.length}, longest ${Math.max(0, ...longTasks)} ms`,
  );
  await context.close();
});
