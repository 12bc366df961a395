import type { Browser, Page } from 'playwright-core';
import { PNG } from 'pngjs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { buildChain } from '../../core/chain/chain.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { launchBrowser } from '../host/browser.ts';
import { showPage, waitForPrints } from './browser.ts';
import { record, recordDemo } from './recorded.ts';

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(() => browser?.close());

const noise = noiseRaster(5, { width: 90, height: 60 }, 3, 8, 'noise');
const { treatment } = resolveTreatment(null, 'noise.png');
const box = { name: 'box', params: {} };
const slots = [
  { id: 0, kernel: null, change: {} },
  { id: 1, kernel: box, change: {} },
];
const kept = { version: 1, slots, selected: 1, sight: { kind: 'level', level: 1 } };

/** A texel of the built level as another decoder reads it: pngjs, of the PNG that the build writes. */
async function builtTexel(kernel: 'own' | 'box', at: { level: number; x: number; y: number }): Promise<string> {
  const used = kernel === 'own' ? treatment : { ...treatment, kernel: { minify: box, magnify: box } };
  const { raster } = buildChain(noise, used).images.find(({ level }) => level === at.level)!;
  const png = PNG.sync.read(Buffer.from(await encodePng(raster as StraightRaster, deflate)));
  return [...png.data.subarray((at.y * png.width + at.x) * 4, (at.y * png.width + at.x) * 4 + 3)].join(' ');
}

const codesOf = (page: Page, pin: number) =>
  page.locator(`texel-readings [data-pin="${pin}"] td[data-codes]`).allTextContents();

const copied = (page: Page) =>
  page.evaluate(() => {
    const { asked } = window as unknown as { asked: { call: string; question: { text: string } }[] };
    return asked.filter(({ call }) => call === 'copy').map(({ question }) => question.text);
  });

test('texels are pinned by keyboard and by pointer, stay while the sight moves on, and are let go', async () => {
  const { page, context } = await showPage(browser, record(await encodePng(noise, deflate), 'noise.png', {}, kept));
  await waitForPrints(page, 2);
  const print = page.getByRole('application').first();
  await print.focus();
  // From the middle texel, 22, 15.
  await page.keyboard.press('ArrowRight');
  await page.keyboard.press('p');
  const first = { level: 1, x: 23, y: 15 };
  const expected = [await builtTexel('own', first), await builtTexel('box', first)];
  await expect.poll(() => codesOf(page, 1)).toEqual(expected);
  await page.keyboard.press('Shift+ArrowDown');
  await page.keyboard.press('P');
  const second = { level: 1, x: 23, y: 23 };
  await expect.poll(() => codesOf(page, 2)).toEqual([await builtTexel('own', second), await builtTexel('box', second)]);
  // On another level a pin is what it was.
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await sight.focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 2');
  await waitForPrints(page, 2);
  await expect.poll(() => codesOf(page, 1)).toEqual(expected);
  await expect.poll(() => page.locator('texel-readings [data-pin="1"] tr').first().textContent()).toContain('level 1');
  // By pointer: beside the print nothing is pinned, on it a texel of level 2 is.
  await print.dblclick({ position: { x: 10, y: 10 } });
  await print.dblclick();
  await expect.poll(() => page.locator('texel-readings [data-pin]').count()).toBe(3);
  await page.getByRole('button', { name: 'Let go of pin 1' }).click();
  await expect.poll(() => page.locator('texel-readings [data-pin]').count()).toBe(2);
  const state = () => page.evaluate(() => (window as unknown as { kept: { pins: unknown[] } }).kept.pins);
  await expect.poll(state).toMatchObject([{ image: { level: 1 }, x: 23, y: 23 }, { image: { level: 2 } }]);
  await context.close();
});

test('what is pinned is copied with what is under the cursor, as text and as values', async () => {
  const pins = [{ image: { level: 2 }, x: 3, y: 4 }];
  const file = await encodePng(noise, deflate);
  const { page, context } = await showPage(browser, record(file, 'noise.png', {}, { ...kept, pins }));
  await waitForPrints(page, 2);
  const pinned = { level: 2, x: 3, y: 4 };
  const own = await builtTexel('own', pinned);
  const boxed = await builtTexel('box', pinned);
  await expect.poll(() => codesOf(page, 1)).toEqual([own, boxed]);
  await page.getByRole('button', { name: 'Copy', exact: true }).click();
  await page.getByRole('button', { name: 'Copy CSV of the texels' }).click();
  await expect.poll(async () => (await copied(page)).length).toBe(2);
  const [text, csv] = await copied(page);
  expect(text.split('\n').slice(3, 5)).toEqual([
    'pin 1: texel 3, 4, level 2',
    expect.stringMatching(new RegExp(`^kaiser\t${own}\t`)),
  ]);
  const [head, ...rows] = csv.split('\n').map((row) => row.split(','));
  expect(head.slice(0, 8)).toEqual(['pin', 'image', 'x', 'y', 'print', 'r', 'g', 'b']);
  expect(rows.map((row) => row.length)).toEqual(rows.map(() => head.length));
  expect(rows[3].slice(0, 8)).toEqual(['1', 'level 2', '3', '4', 'box', ...boxed.split(' ')]);
  await context.close();
});

test('weights are copied as values: half a box each', async () => {
  const state = { ...kept, selected: 1 };
  const { page, context } = await showPage(browser, record(await encodePng(noise, deflate), 'noise.png', {}, state));
  await waitForPrints(page, 2);
  await page.getByRole('button', { name: 'Copy CSV of the weights' }).click();
  await expect.poll(async () => (await copied(page)).length).toBe(1);
  // The middle texel of level 1, 22 of 45 by 15 of 30, averages two source texels each way.
  expect((await copied(page))[0].split('\n')).toEqual([
    'axis,texel,weight',
    'x,44,0.5',
    'x,45,0.5',
    'y,30,0.5',
    'y,31,0.5',
  ]);
  await context.close();
});

test('a pinned texel is marked on every print, and a print that is taken off takes its readings along', async () => {
  const pins = [{ image: { level: 3 }, x: 10, y: 20 }];
  const showing = { ...kept, sight: { kind: 'level', level: 3 } };
  const shot = async (state: object) => {
    const { page, context } = await showPage(browser, recordDemo('ground/cobbles.png', {}, state));
    await waitForPrints(page, 2);
    const pixels = await page.evaluate(async () => {
      const row = document.querySelector('proof-page')!.shadowRoot!.querySelector('print-row')!.shadowRoot!;
      return Array.from(row.querySelectorAll('print-card'), (card) => {
        const over = card
          .shadowRoot!.querySelector('print-stage')!
          .shadowRoot!.querySelector<HTMLCanvasElement>('.over')!;
        const { data } = over.getContext('2d')!.getImageData(0, 0, over.width, over.height);
        return data.reduce((count, byte, i) => count + (i % 4 === 3 && byte > 0 ? 1 : 0), 0);
      });
    });
    return { page, context, pixels };
  };
  const bare = await shot(showing);
  expect(bare.pixels).toEqual([0, 0]);
  await bare.context.close();
  const { page, context, pixels } = await shot({ ...showing, pins });
  expect(Math.min(...pixels)).toBeGreaterThan(0);
  await page.getByRole('button', { name: 'Remove the print by box' }).click();
  await expect.poll(async () => (await codesOf(page, 1)).length).toBe(1);
  await context.close();
});

test('a tenth texel is not pinned, in words', async () => {
  const pins = Array.from({ length: 9 }, (_, x) => ({ image: { level: 1 }, x, y: 0 }));
  const file = await encodePng(noise, deflate);
  const { page, context } = await showPage(browser, record(file, 'noise.png', {}, { ...kept, pins }));
  await waitForPrints(page, 2);
  await page.getByRole('button', { name: 'Pin', exact: true }).click();
  await page.getByText('9 texels are pinned; let one go first.').waitFor();
  await expect.poll(() => page.locator('texel-readings [data-pin]').count()).toBe(9);
  await context.close();
});
