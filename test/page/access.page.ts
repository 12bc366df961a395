import { readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { PNG } from 'pngjs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { crc32 } from '../../core/codec/crc.ts';
import { encodePng } from '../../core/codec/png/encode.ts';
import { type HostEvent, PROTOCOL } from '../../core/protocol.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { launchBrowser } from '../host/browser.ts';
import { top } from '../house/tree.ts';
import { changeTheme, type Showing, showPage, waitForPrints } from './browser.ts';
import { firstPrintOf, type Recording, record, recordDemo, stale } from './recorded.ts';
import { boxOfPrint, troubleOf } from './stage.ts';
import type { ThemeName } from './themes.ts';
import { waitForRest } from './unanswered.ts';

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
  /** A field by its name, and the value that shows that the page is in this state. */
  readonly field?: readonly [name: string, value: string];
  /** What the host tells meanwhile. */
  readonly told?: HostEvent;
}

const two = [
  { id: 0, kernel: null, change: {} },
  { id: 1, kernel: { name: 'lanczos3', params: {} }, change: {} },
];
const kept = (more: object) => ({ version: 1, slots: two, selected: 1, ...more });
const cobbles = (more: object) =>
  recordDemo('ground/cobbles.png', {}, kept({ sight: { kind: 'level', level: 4 }, ...more }));
const pointer = `version https://git-lfs.github.com/spec/v1\noid sha256:${'0'.repeat(64)}\nsize 4567\n`;

const viewOf = (path: string, show: string): State => ({
  name: `${path} as ${show}`,
  recording: () => recordDemo(path, {}, kept({ sight: { kind: 'level', level: 2 }, show })),
  marker: /KiB|B$/,
  prints: 2,
  field: ['View', show],
});

const states: readonly State[] = [
  ...['r', 'g', 'b', 'a', 'bare', 'overshoot'].map((show) => viewOf('foliage/alder-twig.png', show)),
  { name: 'loading', recording: async () => ({ ...cobbles({}), held: 'held' }), marker: /Reading the file/, prints: 0 },
  { name: 'empty', recording: () => record(new Uint8Array(0), 'a.png'), marker: /empty/, prints: 0 },
  {
    name: 'prints that do not agree',
    recording: async () => {
      const recording = cobbles({});
      const first = await firstPrintOf(recording, { level: 4, target: null });
      first.picture.codes[7] ^= 4;
      return { ...recording, first };
    },
    marker: /differ in 1 of 3072 codes/,
    prints: 2,
  },
  {
    name: 'a file that is gone',
    recording: () => cobbles({}),
    marker: /no longer there/,
    prints: 2,
    told: { protocol: PROTOCOL, kind: 'source', revision: 2, present: false },
  },
  {
    name: 'built',
    recording: () => ({ ...recordDemo('ui/lantern.png', { state: { kind: 'built' } }), isBuilt: true }),
    marker: /equals the build/,
    prints: 1,
  },
  {
    name: 'built otherwise',
    recording: () => ({ ...recordDemo('ui/lantern.png', { state: { kind: 'built' } }), isBuilt: false }),
    marker: /differs from the build/,
    prints: 1,
  },
  {
    name: 'difference of a channel',
    recording: () => cobbles({ show: 'difference', metric: 'g', against: 'settings' }),
    marker: /±16|16/,
    prints: 2,
    field: ['View', 'difference'],
  },
  { name: 'tiles', recording: () => cobbles({ tiles: true }), marker: /3×3/, prints: 2 },
  {
    name: 'bilinear',
    recording: () => cobbles({ magnify: 'bilinear' }),
    marker: /cobbles/,
    prints: 2,
    field: ['Texels', 'bilinear'],
  },
  {
    name: 'a drawn line',
    recording: () => cobbles({ line: 'drawn' }),
    marker: /▲▼ overshoot/,
    prints: 2,
    field: ['Along', 'drawn'],
  },
  {
    name: 'a kernel that cannot',
    recording: () =>
      recordDemo(
        'ground/cobbles.png',
        {},
        kept({ slots: [two[0], { id: 1, kernel: { name: 'epx', params: {} }, change: {} }] }),
      ),
    marker: /epx only magnifies/,
    prints: 0,
  },
  { name: 'color', recording: () => cobbles({}), marker: /cobbles\.png/, prints: 2 },
  {
    name: 'a mask',
    recording: () => recordDemo('foliage/alder-twig.png', {}, kept({ show: 'mask' })),
    marker: /mask at 0\.5/,
    prints: 2,
  },
  {
    name: 'roughness beside normals',
    recording: () => recordDemo('ground/cobbles_normal.png', {}, kept({ output: 'roughness' })),
    marker: /mean/,
    prints: 2,
    field: ['Output', 'roughness'],
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
  {
    name: 'pixel art',
    recording: () =>
      recordDemo(
        'sprites/wick.png',
        {},
        {
          ...kept({ typed: [{ name: '0.75x', scale: 0.75 }], sight: { kind: 'target', name: '0.75x' }, show: 'art' }),
          slots: [two[0], { id: 1, kernel: { name: 'nearest', params: {} }, change: {} }],
        },
      ),
    marker: /1\/2x and 1x/,
    prints: 2,
    field: ['View', 'art'],
  },
  {
    name: 'pinned texels',
    recording: () =>
      cobbles({
        pins: [
          { image: { level: 4 }, x: 3, y: 4 },
          { image: { level: 2 }, x: 30, y: 40 },
        ],
      }),
    marker: /from cursor/,
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

test.each(states)('axe finds nothing in any theme: $name', async (state) => {
  const { recording, marker, prints, showing, field, told } = state;
  const { page, context } = await showPage(browser, await recording(), showing);
  if (prints > 0) await waitForPrints(page, prints);
  if (told !== undefined) await page.evaluate((event) => window.postMessage(event, '*'), told);
  await page.getByText(marker).first().waitFor();
  if (field !== undefined) {
    const [name, value] = field;
    await expect.poll(() => page.getByRole('combobox', { name, exact: true }).inputValue()).toBe(value);
  }
  if (prints > 0) await waitForRest(page);
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
  await waitForRest(page);
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
    /Pin/,
    /\+ kernel|Add a print/,
  ]) {
    expect(names).toMatch(name);
  }
  await context.close();
});

test('any print is compared with: by the divider, and as difference; one that is taken off gives way to the settings’', async () => {
  const more = [...two, { id: 2, kernel: { name: 'box', params: {} }, change: {} }];
  const { page, context } = await showPage(browser, await cobbles({ slots: more, show: 'difference' }));
  await waitForPrints(page, 3);
  const colors = (index: number) =>
    page.evaluate((at) => {
      const row = document.querySelector('proof-page')!.shadowRoot!.querySelector('print-row')!.shadowRoot!;
      const stage = row.querySelectorAll('print-card')[at].shadowRoot!.querySelector<HTMLElement>('print-stage')!;
      const canvas = stage.shadowRoot!.querySelector<HTMLCanvasElement>('canvas.print')!;
      const { extent } = (stage as unknown as { scene: { extent: { width: number; height: number } } }).scene;
      const { zoom, left, top } = stage.dataset;
      const [width, height] = [extent.width * Number(zoom), extent.height * Number(zoom)];
      const { data } = canvas.getContext('2d')!.getImageData(Number(left), Number(top), width, height);
      return new Set(Array.from({ length: data.length / 4 }, (_, i) => data.slice(i * 4, i * 4 + 3).join())).size;
    }, index);
  await page.getByRole('combobox', { name: 'from', exact: true }).selectOption('box');
  // A print does not differ from itself, and from no other print does it differ nowhere.
  await expect.poll(() => colors(2)).toBe(1);
  await expect.poll(() => colors(1)).toBeGreaterThan(1);
  await page.getByRole('combobox', { name: 'Compare', exact: true }).selectOption('divider');
  const partner = page.getByRole('combobox', { name: 'with', exact: true });
  await partner.selectOption('lanczos3');
  await page.getByRole('button', { name: 'Remove the print by lanczos3' }).click();
  await expect.poll(() => partner.inputValue()).toBe('settings');
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

test('the axis is a table too: what it shows is there as numbers, goes to a level and is copied; densities are typed at once', async () => {
  const { page, context } = await showPage(browser, recordDemo('foliage/alder-twig.png'));
  await waitForPrints(page);
  const toggle = page.getByRole('button', { name: 'Table', exact: true });
  await toggle.focus();
  await page.keyboard.press('Enter');
  expect(await toggle.getAttribute('aria-expanded')).toBe('true');
  const table = page.getByRole('region', { name: 'Table of the size axis' });
  await expect.poll(() => table.locator('.over').count()).toBe(1);
  await page.locator('size-axis .curve[points*=","]').nth(2).waitFor({ state: 'attached' });
  expect(await violationsOf(page)).toEqual([]);
  await page.getByRole('button', { name: 'Copy CSV of the size axis' }).click();
  const copied = () =>
    page.evaluate(() => {
      const { asked } = window as unknown as { asked: { call: string; question: { text: string } }[] };
      return asked.find(({ call }) => call === 'copy')?.question.text ?? '';
    });
  await expect.poll(copied).not.toBe('');
  const [head, base, ...rows] = (await copied()).split('\n').map((row) => row.split(','));
  expect(head.slice(0, 6)).toEqual(['level or target', 'width', 'height', 'bytes', 'meters', 'coverage']);
  expect(base.slice(0, 4)).toEqual(['0', '256', '256', String(256 * 256 * 4)]);
  // Coverage of level 0, counted from the file itself by pngjs: alpha of half or more.
  const { data } = PNG.sync.read(readFileSync(join(top, 'test/demo/foliage/alder-twig.png')));
  const passing = data.filter((code, i) => i % 4 === 3 && code >= 128).length / (256 * 256);
  expect(Math.abs(Number(base[5]) - passing)).toBeLessThan(0.01);
  expect(rows.map((row) => row[row.length - 1])).toEqual(['yes', 'yes', 'yes', 'yes', 'yes', 'no', 'no', 'no']);
  await table.getByRole('button', { name: '5', exact: true }).click();
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 5');
  const size = page.getByRole('textbox', { name: 'Size', exact: true });
  await size.fill('0.75x 1.5x 2x');
  await size.press('Enter');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('target 0.75x, 192 by 192');
  await table.getByRole('button', { name: '1.5x', exact: true }).waitFor();
  await context.close();
});

test('a typed size stands on the axis until it is removed; preferences are followed', async () => {
  const { page, context } = await showPage(browser, recordDemo('foliage/alder-twig.png'));
  await waitForPrints(page);
  const size = page.getByRole('textbox', { name: 'Size', exact: true });
  await size.fill('48');
  await size.press('Enter');
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('target 48x48');
  await page.getByRole('button', { name: 'Remove 48x48' }).click();
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toMatch(/^level [23],/);
  const typed = () => page.evaluate(() => (window as unknown as { kept: { typed: unknown[] } }).kept.typed);
  await expect.poll(typed).toEqual([]);
  const preferences = { backdrop: 'white', fovY: 45, screenHeight: 2160, swapDwell: 500 } as const;
  const event: HostEvent = { protocol: PROTOCOL, kind: 'preferences', revision: 2, preferences };
  await page.evaluate((each) => window.postMessage(each, '*'), event);
  await expect.poll(() => page.getByRole('combobox', { name: 'Backdrop', exact: true }).inputValue()).toBe('white');
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

test('outputs, settings and report are asked of the host, by keyboard too', async () => {
  const { page, context } = await showPage(browser, recordDemo('ui/lantern.png', { state: { kind: 'built' } }));
  await waitForPrints(page);
  for (const name of ['Reveal outputs', 'Open settings', 'Copy report']) {
    const button = page.getByRole('button', { name, exact: true });
    await expect.poll(() => button.isEnabled()).toBe(true);
    await button.focus();
    await page.keyboard.press('Enter');
  }
  await page.getByText('The report is on the clipboard.').waitFor();
  const asked = await page.evaluate(
    () => (window as unknown as { asked: { call: string; question: unknown }[] }).asked,
  );
  const own = asked.filter(({ call }) => ['reveal', 'showSettings', 'report'].includes(call));
  expect(own).toEqual([
    { call: 'reveal', question: null },
    { call: 'showSettings', question: { key: null } },
    { call: 'report', question: null },
  ]);
  await context.close();
});

test.each([
  ['sprites/wick.png', '3x'],
  ['ui/lantern.png', 'badge'],
])(
  'in an editor’s part of a window of 1280 by 800 the first look holds the whole print of %s and its figures',
  async (path, name) => {
    const recording = recordDemo(path, {}, kept({ sight: { kind: 'target', name } }));
    const { page, context } = await showPage(browser, recording, { width: 980, height: 700 });
    await waitForPrints(page, 2);
    const footer = page.locator('print-card footer').first();
    await footer.getByText('luminance').waitFor();
    await waitForRest(page);
    const { y, height } = (await footer.boundingBox())!;
    expect(y + height).toBeLessThanOrEqual(700);
    const stage = (await page.locator('print-stage').first().boundingBox())!;
    const print = await boxOfPrint(page);
    expect(print.y).toBeGreaterThanOrEqual(stage.y);
    expect(print.y + print.height).toBeLessThanOrEqual(stage.y + stage.height);
    await context.close();
  },
);

/** Twice the size: by the text's own size, and as an editor's zoom makes it, which leaves half the room. The narrowest is as an
 *  editor among others. */
test.each([
  { name: 'text of twice the size', width: 1280, fontSize: 26 },
  { name: 'zoomed to twice the size', width: 640, fontSize: 13 },
  { name: '400 pixels wide', width: 400, fontSize: 13 },
  { name: '320 pixels wide', width: 320, fontSize: 13 },
  { name: '400 pixels wide, text of twice the size', width: 400, fontSize: 26 },
  { name: '400 pixels wide in forced colors', width: 400, fontSize: 13, forcedColors: 'active' },
] as const)('nothing is cut off or overlaps: $name', async ({ width, fontSize, ...showing }) => {
  const recording = recordDemo('foliage/alder-twig.png', {}, kept({ sight: { kind: 'level', level: 3 } }));
  const { page, context } = await showPage(browser, recording, { width, height: 900, ...showing });
  await page.evaluate((px) => document.documentElement.style.setProperty('--vscode-font-size', `${px}px`), fontSize);
  await waitForPrints(page, 2);
  // Three curves, drawn: coverage, luminance and halo.
  await page.locator('size-axis .curve[points*=","]').nth(2).waitFor({ state: 'attached' });
  await waitForRest(page);
  const found = await page.evaluate(() => {
    const all: Element[] = [];
    const visit = (root: Document | ShadowRoot): void => {
      for (const element of Array.from(root.querySelectorAll('*'))) {
        all.push(element);
        if (element.shadowRoot !== null) visit(element.shadowRoot);
      }
    };
    visit(document);
    const name = (element: Element) => `${element.localName} "${element.textContent?.trim().slice(0, 30)}"`;
    const cut = all.filter(
      (element) =>
        element.matches('button, select, input, h1, label, .badge') &&
        (element.scrollHeight > element.clientHeight + 1 || element.scrollWidth > element.clientWidth + 1) &&
        getComputedStyle(element).display !== 'inline' &&
        element.clientHeight > 0,
    );
    const beyond = all.filter((element) => {
      const box = element.getBoundingClientRect();
      return element.matches('button, select, input, label') && (box.right > innerWidth + 1 || box.left < -1);
    });
    const texts = all
      .filter((element) => element.matches('size-axis *, text') && element.localName === 'text')
      .map((element) => ({ element, box: element.getBoundingClientRect() }));
    const over = texts.flatMap(({ element, box }, i) =>
      texts.slice(i + 1).flatMap((other) => {
        const apart =
          box.right <= other.box.left + 0.5 ||
          other.box.right <= box.left + 0.5 ||
          box.bottom <= other.box.top + 4 ||
          other.box.bottom <= box.top + 4;
        return apart ? [] : [`${name(element)} and ${name(other.element)}`];
      }),
    );
    // Names of curves against every line that is drawn on the axis.
    const lines = all.filter((element): element is SVGGeometryElement =>
      element.matches('.curve, .limit, .sight line'),
    );
    const across = lines.flatMap((line) => {
      const matrix = line.getScreenCTM()!;
      const points = Array.from({ length: 401 }, (_, i) =>
        line.getPointAtLength((line.getTotalLength() * i) / 400).matrixTransform(matrix),
      );
      return texts
        .filter(({ element, box }) => {
          const inside = points.some(
            ({ x, y }) => x > box.left && x < box.right && y > box.top + 2 && y < box.bottom - 2,
          );
          return element.matches('.name') && inside;
        })
        .map(({ element }) => `${name(line)} across ${name(element)}`);
    });
    const { scrollWidth, clientWidth } = document.documentElement;
    return { across, cut: cut.map(name), beyond: beyond.map(name), over, wide: scrollWidth - clientWidth };
  });
  expect(found).toEqual({ across: [], cut: [], beyond: [], over: [], wide: 0 });
  await context.close();
});

test.each(['reduce', 'no-preference'] as const)('nothing moves by itself: %s', async (reducedMotion) => {
  const { page, context } = await showPage(browser, await cobbles({ compare: 'swap' }), { reducedMotion });
  await waitForPrints(page, 2);
  await waitForRest(page);
  const before = await page.locator('print-row').screenshot();
  const moving = await page.evaluate(() => {
    const found: string[] = [];
    const visit = (root: Document | ShadowRoot): void => {
      for (const element of Array.from(root.querySelectorAll('*'))) {
        const { transitionDuration, animationName } = getComputedStyle(element);
        if (transitionDuration !== '0s' || animationName !== 'none') found.push(element.localName);
        if (element.shadowRoot !== null) visit(element.shadowRoot);
      }
    };
    visit(document);
    return [...found, ...document.getAnimations().map(String)];
  });
  expect(moving).toEqual([]);
  await page.waitForTimeout(1000);
  expect((await page.locator('print-row').screenshot()).equals(before)).toBe(true);
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
