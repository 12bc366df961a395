import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { crc32 } from '../../core/codec/crc.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import { deflate } from '../../extension/node/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { launchBrowser } from '../host/browser.ts';
import { changeTheme, type Showing, showPage, waitForPrints } from './browser.ts';
import { type Recording, record, recordDemo, stale } from './recorded.ts';
import { troubleOf } from './stage.ts';
import type { ThemeName } from './themes.ts';

const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
const themes: readonly ThemeName[] = ['dark', 'light', 'contrast', 'contrast-light'];

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(() => browser?.close());

interface State {
  readonly name: string;
  readonly recording: () => Recording | Promise<Recording>;
  /** Text that shows that the page is in this state. */
  readonly marker: RegExp;
  readonly prints: number;
  readonly showing?: Showing;
}

const two = [
  { id: 0, kernel: null, change: {} },
  { id: 1, kernel: { name: 'lanczos3', params: {} }, change: {} },
];
const kept = (more: object) => ({ version: 1, slots: two, selected: 1, ...more });
const cobbles = (more: object) =>
  recordDemo('ground/cobbles.png', {}, kept({ sight: { kind: 'level', level: 4 }, ...more }));
const pointer = `version https://git-lfs.github.com/spec/v1\noid sha256:${'0'.repeat(64)}\nsize 4567\n`;

const states: readonly State[] = [
  { name: 'color', recording: () => cobbles({}), marker: /cobbles\.png/, prints: 2 },
  {
    name: 'a mask',
    recording: () => recordDemo('foliage/alder-twig.png', {}, kept({ show: 'mask' })),
    marker: /mask at 0\.5/,
    prints: 2,
  },
  {
    name: 'normals lit',
    recording: () => recordDemo('ground/cobbles_normal.png', {}, kept({ show: 'lit' })),
    marker: /Lamp/,
    prints: 2,
  },
  {
    name: 'a sprite',
    recording: () => recordDemo('sprites/wick.png', {}, kept({ sight: { kind: 'target', name: '2x' } })),
    marker: /palette of/,
    prints: 2,
  },
  { name: 'difference', recording: () => cobbles({ show: 'difference' }), marker: /0\.10/, prints: 2 },
  { name: 'overshoot', recording: () => cobbles({ show: 'overshoot' }), marker: /clipped/, prints: 2 },
  { name: 'the divider', recording: () => cobbles({ compare: 'divider' }), marker: /with/, prints: 2 },
  { name: 'swapping', recording: () => cobbles({ compare: 'swap' }), marker: /Hold to swap/, prints: 2 },
  {
    name: 'between levels',
    recording: () => cobbles({ sight: { kind: 'lod', lod: 3.4 } }),
    marker: /cobbles/,
    prints: 2,
  },
  {
    name: 'stale',
    recording: () => recordDemo('ui/lantern.png', { state: stale }),
    marker: /stale: settings changed/,
    prints: 1,
  },
  {
    name: 'untrusted',
    recording: () =>
      recordDemo('ui/lantern.png', {
        abilities: {
          build: 'Building is off in a folder that is not trusted.',
          adopt: 'Not trusted.',
          reveal: 'Not trusted.',
          settings: true,
          export: true,
        },
      }),
    marker: /not trusted/,
    prints: 1,
  },
  {
    name: 'damaged',
    recording: () => record(Buffer.from('89504e470d0a1a0a00', 'hex'), 'a.png'),
    marker: /The file ends at byte/,
    prints: 0,
  },
  {
    name: 'not downloaded',
    recording: () => record(Buffer.from(pointer), 'a.png'),
    marker: /Git LFS pointer/,
    prints: 0,
  },
  {
    name: 'too large',
    recording: async () => {
      const file = Buffer.from(await encodePng(noiseRaster(1, { width: 1, height: 1 }, 3, 8, 'noise'), deflate));
      file.writeUInt32BE(70000, 16);
      file.writeUInt32BE(crc32(file.subarray(12, 29)), 29);
      return record(file, 'a.png');
    },
    marker: /each axis must be/,
    prints: 0,
  },
  {
    name: 'unreadable settings',
    recording: () =>
      recordDemo('ui/lantern.png', {
        settings: {
          file: 'sizeproof.json',
          treatment: null,
          origins: [],
          problems: [{ code: 'settings-unreadable', severity: 'error', values: {} }],
          matching: null,
        },
      }),
    marker: /settings file could not be read/,
    prints: 0,
  },
  { name: 'narrow', recording: () => cobbles({}), marker: /cobbles/, prints: 2, showing: { width: 400, height: 1400 } },
];

test.each(states)('axe finds nothing in any theme: $name', async ({ recording, marker, prints, showing }) => {
  const { page, context } = await showPage(browser, await recording(), showing);
  await page.getByText(marker).first().waitFor();
  if (prints > 0) await waitForPrints(page, prints);
  for (const theme of themes) {
    await changeTheme(page, theme);
    expect({ theme, violations: await violationsOf(page) }).toEqual({ theme, violations: [] });
  }
  expect((await troubleOf(page)).violations).toEqual([]);
  await context.close();
});

test('everything is reached by Tab, named, and shows that it has the focus', async () => {
  const { page, context } = await showPage(browser, await cobbles({}));
  await waitForPrints(page, 2);
  const seen = new Map<string, string>();
  for (let i = 0; i < 80; i++) {
    await page.keyboard.press('Tab');
    const stop = await page.evaluate(() => {
      let element: Element | null = document.activeElement;
      while (element?.shadowRoot?.activeElement) element = element.shadowRoot.activeElement;
      if (element === null || element === document.body) return null;
      const style = getComputedStyle(element);
      const labels = 'labels' in element ? Array.from(element.labels as NodeListOf<HTMLElement>) : [];
      const name = element.getAttribute('aria-label') ?? labels[0]?.textContent ?? element.textContent ?? '';
      return { name: name.trim(), outline: style.outlineStyle, tag: element.tagName };
    });
    if (stop === null) break;
    seen.set(`${stop.tag} ${stop.name.replace(/\s+/g, ' ')}`, stop.outline);
  }
  expect([...seen.keys()].filter((each) => /^\w+ $/.test(each))).toEqual([]);
  expect([...seen].filter(([, outline]) => outline === 'none')).toEqual([]);
  const names = [...seen.keys()].join('\n');
  for (const name of [
    /Build/,
    /Sight on the size axis/,
    /Level/,
    /View/,
    /Print by kaiser/,
    /Print by lanczos3/,
    /Copy CSV/,
    /\+ kernel|Add a print/,
  ]) {
    expect(names).toMatch(name);
  }
  await context.close();
});

test('keys move the sight, the cursor, the zoom and the divider; what is kept is kept', async () => {
  const { page, context } = await showPage(browser, await cobbles({ compare: 'divider' }));
  await waitForPrints(page, 2);
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await sight.focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 5');
  await page.keyboard.press('Shift+ArrowLeft');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 4.95, between levels');
  await page.keyboard.press('Home');
  await page.keyboard.press('End');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 9');
  for (let i = 0; i < 5; i++) await page.keyboard.press('ArrowLeft');
  const print = page.getByRole('application').first();
  await print.focus();
  await page.keyboard.press('ArrowRight');
  await page.keyboard.press('Shift+ArrowDown');
  await expect.poll(() => page.getByRole('region', { name: 'Texel', exact: true }).textContent()).toMatch(/17, 24/);
  await page.keyboard.press('1');
  await expect.poll(() => page.locator('view-bar .zoom').textContent()).toBe('1:1');
  const divider = page.getByRole('slider', { name: 'Divider' }).first();
  await divider.focus();
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => divider.getAttribute('aria-valuenow')).toBe('52');
  const state = () => page.evaluate(() => (window as unknown as { kept: Record<string, unknown> }).kept);
  await expect.poll(state).toMatchObject({ version: 1, zoom: 1, divider: 0.52, sight: { kind: 'level', level: 4 } });
  await context.close();
});

test('a switch on the settings’ print begins a print beside it, which can be adopted', async () => {
  const { page, context } = await showPage(browser, recordDemo('foliage/alder-twig.png'));
  await waitForPrints(page);
  await page.getByLabel('Keep coverage').uncheck();
  await waitForPrints(page, 2);
  await page.getByRole('button', { name: 'Adopt for foliage/**, 12 files' }).click();
  await page.getByText('Put into sizeproof.json, not saved yet.').waitFor();
  const asked = await page.evaluate(
    () => (window as unknown as { asked: { call: string; question: unknown }[] }).asked,
  );
  expect(asked.find(({ call }) => call === 'adopt')?.question).toEqual({
    scope: 'matching',
    settings: { alpha: { keepCoverage: false } },
  });
  await context.close();
});

test('text of twice the size and forced colors leave everything in reach', async () => {
  const { page, context } = await showPage(browser, await cobbles({}), {
    width: 640,
    height: 900,
    forcedColors: 'active',
  });
  await waitForPrints(page, 2);
  const wide = await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
  expect(wide).toBe(0);
  await context.close();
});

async function violationsOf(page: Page): Promise<readonly string[]> {
  // Injected by the browser itself, so that the page's policy stays as it is.
  const session = await page.context().newCDPSession(page);
  await session.send('Runtime.evaluate', { expression: axe });
  const found = await session.send('Runtime.evaluate', {
    expression: `axe.run(document, { resultTypes: ['violations'] }).then(({ violations }) => JSON.stringify(violations.map(
      ({ id, nodes }) => id + ': ' + nodes.slice(0, 3).map(({ target, failureSummary }) => target.join(' ') + ' ' + failureSummary).join(' | '))))`,
    awaitPromise: true,
    returnByValue: true,
  });
  return JSON.parse(String(found.result.value)) as string[];
}
