import { mkdirSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { launchBrowser } from '../host/browser.ts';
import { top } from '../house/tree.ts';
import { showPage, waitForPrints } from './browser.ts';
import { recordDemo } from './recorded.ts';
import { troubleOf } from './stage.ts';
import type { ThemeName } from './themes.ts';
import { waitForRest } from './unanswered.ts';

// Pictures for whoever changes the page to look at, in dist/shots; beside each stands a number that the page must show.

const folder = join(top, 'dist/shots');

let browser: Browser;
beforeAll(async () => {
  mkdirSync(folder, { recursive: true });
  browser = await launchBrowser();
});
afterAll(() => browser?.close());

interface Shot {
  readonly name: string;
  readonly texture: string;
  readonly theme: ThemeName;
  readonly state: object;
  /** Kernels beside the settings' own, or changes of it. */
  readonly beside: readonly (string | object)[];
  readonly shows: RegExp;
  readonly width?: number;
  readonly height?: number;
}

const level = (number: number) => ({ sight: { kind: 'level', level: number } });
const target = (name: string) => ({ sight: { kind: 'target', name } });

const shots: readonly Shot[] = [
  {
    name: 'painted-dark',
    texture: 'ground/cobbles.png',
    theme: 'dark',
    state: level(3),
    beside: ['mitchell', 'lanczos3', 'box'],
    shows: /halo 48\.4/,
  },
  {
    name: 'painted-contrast-light',
    texture: 'ground/cobbles.png',
    theme: 'contrast-light',
    state: level(3),
    beside: ['mitchell', 'lanczos3', 'box'],
    shows: /halo 62\.6/,
  },
  {
    name: 'sprite-light',
    texture: 'sprites/wick.png',
    theme: 'light',
    state: target('3x'),
    beside: ['nearest', 'mitchell'],
    shows: /luminance \.182/,
  },
  {
    name: 'mask-dark',
    texture: 'foliage/alder-twig.png',
    theme: 'dark',
    state: { ...level(3), show: 'mask' },
    beside: [{ keepCoverage: false }, 'box'],
    shows: /coverage 29\.3 %/,
  },
  {
    name: 'normal-contrast',
    texture: 'ground/cobbles_normal.png',
    theme: 'contrast',
    state: { ...level(2), show: 'lit' },
    beside: ['mitchell'],
    shows: /normal length \.970/,
  },
  {
    name: 'difference-dark',
    texture: 'ground/cobbles.png',
    theme: 'dark',
    state: { ...level(2), show: 'difference' },
    beside: ['mitchell', { light: 'code' }],
    shows: /luminance \.146 −1\.4 %/,
  },
  {
    name: 'overshoot-light',
    texture: 'ui/lantern.png',
    theme: 'light',
    state: { ...target('48x48'), show: 'overshoot' },
    beside: ['lanczos3'],
    shows: /clipped 22\.9 %/,
  },
  {
    name: 'art-light',
    texture: 'sprites/wick.png',
    theme: 'light',
    state: { ...target('0.75x'), typed: [{ name: '0.75x', scale: 0.75 }], show: 'art' },
    beside: ['nearest', 'mitchell'],
    shows: /columns and rows \d+ left out/,
  },
  {
    name: 'between-contrast-light',
    texture: 'ground/cobbles.png',
    theme: 'contrast-light',
    state: { sight: { kind: 'lod', lod: 2.4 } },
    beside: ['triangle'],
    shows: /luminance/,
  },
  {
    name: 'divider-dark',
    texture: 'ui/lantern.png',
    theme: 'dark',
    state: { ...target('badge'), compare: 'divider', partner: 'source' },
    beside: ['nearest'],
    shows: /luminance/,
  },
  {
    name: 'first-look',
    texture: 'sprites/wick.png',
    theme: 'dark',
    state: target('3x'),
    beside: ['nearest'],
    shows: /luminance/,
    width: 980,
    height: 700,
  },
  {
    name: 'section-light',
    texture: 'ui/lantern.png',
    theme: 'light',
    state: { ...level(1), line: 'drawn', drawn: { from: [0.1, 0.3], to: [0.9, 0.6] } },
    beside: ['lanczos3', 'box'],
    shows: /halo \d/,
    height: 1000,
  },
  {
    name: 'narrow-dark',
    texture: 'foliage/alder-twig.png',
    theme: 'dark',
    state: level(2),
    beside: ['box'],
    shows: /coverage/,
    width: 400,
    height: 1600,
  },
];

test.each(shots)('$name', async ({ name, texture, theme, state, beside, shows, width, height }) => {
  const slots = beside.map((each, i) =>
    typeof each === 'string'
      ? { id: i + 1, kernel: { name: each, params: each === 'mitchell' ? { b: 1 / 3, c: 1 / 3 } : {} }, change: {} }
      : { id: i + 1, kernel: null, change: each },
  );
  const kept = { version: 1, ...state, selected: 0, slots: [{ id: 0, kernel: null, change: {} }, ...slots] };
  const size = { ...(width !== undefined && { width }), ...(height !== undefined && { height }) };
  const { page, context } = await showPage(browser, recordDemo(texture, {}, kept), { theme, ...size });
  await waitForPrints(page, slots.length + 1);
  const figures = async () => {
    const footers = await page.locator('print-card footer').allTextContents();
    return footers.join(' ').replace(/\s+/g, ' ');
  };
  await expect.poll(figures).toMatch(shows);
  await page.locator('section-plot polyline').first().waitFor({ state: 'attached' });
  // Numbers of the other prints come after the first.
  await waitForRest(page);
  await page.screenshot({ path: join(folder, `${name}.png`) });
  expect((await troubleOf(page)).violations).toEqual([]);
  await context.close();
});
