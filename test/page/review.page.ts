import { mkdirSync, readFileSync } from 'node:fs';
import { createRequire } from 'node:module';
import { join } from 'node:path';
import type { Browser, Page } from 'playwright-core';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { encodePng } from '../demo/paint/png.ts';
import { blades, disc, grain, halved } from '../fixtures/branch.ts';
import { launchBrowser } from '../host/browser.ts';
import { top } from '../house/tree.ts';
import { changeTheme, type Showing } from './browser.ts';
import { type ReviewRecording, recordReview, showReview, sideOf, waitForSides } from './review-recorded.ts';
import { troubleOf } from './stage.ts';
import type { ThemeName } from './themes.ts';

const axe = readFileSync(createRequire(import.meta.url).resolve('axe-core/axe.min.js'), 'utf8');
const folder = join(top, 'dist/shots');

let browser: Browser;
beforeAll(async () => {
  mkdirSync(folder, { recursive: true });
  browser = await launchBrowser();
});
afterAll(() => browser?.close());

const mask = { treatments: [{ match: '**', alpha: { use: 'mask', cutoff: 0.5, keepCoverage: false } }] };

/** Blades that lose two of five texels of their width: gone from level 3 on, where five eighths of a texel still pass. */
function thinned(): ReviewRecording {
  const path = 'foliage/fern.png';
  return recordReview(sideOf(path, encodePng(blades(5)), mask), sideOf(path, encodePng(blades(3)), mask), { path });
}

function shrunk(): ReviewRecording {
  const path = 'props/barrel.png';
  const barrel = grain(128, 1);
  return recordReview(sideOf(path, encodePng(barrel)), sideOf(path, encodePng(halved(barrel))), { path });
}

function spotted(): ReviewRecording {
  const path = 'ground/moss.png';
  const moss = grain(64, 3);
  for (let x = 10; x < 14; x++) moss.codes.set([250, 240, 40], (20 * 64 + x) * 3);
  const targets = { treatments: [{ match: '**', targets: [{ name: 'chip', extent: [24, 24] }] }] };
  return recordReview(sideOf(path, encodePng(grain(64, 3)), targets), sideOf(path, encodePng(moss), targets), { path });
}

function hidden(): ReviewRecording {
  const path = 'sprites/moth.png';
  return recordReview(sideOf(path, encodePng(disc([0, 0, 0]))), sideOf(path, encodePng(disc([90, 0, 0]))), { path });
}

function added(): ReviewRecording {
  const path = 'ui/fresh.png';
  return recordReview({ kind: 'none' }, sideOf(path, encodePng(grain(32, 8))), { path, status: 'added' });
}

function damaged(): ReviewRecording {
  const path = 'ui/knob.png';
  const bytes = encodePng(grain(32, 4));
  return recordReview(sideOf(path, bytes), sideOf(path, bytes.subarray(0, 60)), { path });
}

function notHere(): ReviewRecording {
  const path = 'ui/knob.png';
  const problem = { code: 'lfs-missing', severity: 'error', values: { bytes: 4567 } } as const;
  return recordReview({ kind: 'problem', problem }, sideOf(path, encodePng(grain(32, 4))), { path });
}

interface State {
  readonly name: string;
  readonly recording: () => ReviewRecording;
  readonly marker: RegExp;
  readonly prints: number;
  readonly theme: ThemeName;
  readonly showing?: Showing;
}

const states: readonly State[] = [
  { name: 'thinned', recording: thinned, marker: /of the coverage is lost at level 3/, prints: 3, theme: 'dark' },
  { name: 'shrunk', recording: shrunk, marker: /75 % of the texels are lost/, prints: 3, theme: 'light' },
  { name: 'spotted', recording: spotted, marker: /% of the texels changed/, prints: 3, theme: 'contrast' },
  { name: 'hidden', recording: hidden, marker: /Only color under alpha 0 changed/, prints: 3, theme: 'contrast-light' },
  { name: 'added', recording: added, marker: /No earlier version/, prints: 1, theme: 'dark' },
  { name: 'damaged', recording: damaged, marker: /Cannot be compared/, prints: 1, theme: 'light' },
  { name: 'not here', recording: notHere, marker: /4567/, prints: 1, theme: 'dark' },
  {
    name: 'narrow',
    recording: thinned,
    marker: /of the coverage is lost/,
    prints: 3,
    theme: 'light',
    showing: { width: 400, height: 1500 },
  },
];

test.each(states)('axe finds nothing in any theme, and it is a picture to look at: $name', async (state) => {
  const { page, context } = await showReview(browser, state.recording(), { ...state.showing, theme: state.theme });
  await page.getByText(state.marker).first().waitFor();
  await waitForSides(page, state.prints);
  await page.screenshot({ path: join(folder, `review-${state.name.replaceAll(' ', '-')}.png`) });
  for (const theme of ['dark', 'light', 'contrast', 'contrast-light'] as const) {
    await changeTheme(page, theme);
    expect({ theme, violations: await violationsOf(page) }).toEqual({ theme, violations: [] });
  }
  expect((await troubleOf(page)).violations).toEqual([]);
  const wide = await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth);
  expect(wide).toBe(0);
  await context.close();
});

test('it opens where the change hurts, and reads both versions where they differ most', async () => {
  const { page, context } = await showReview(browser, thinned());
  await waitForSides(page);
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  // Blades of 5 in 16 texels: at level 3 a texel holds 5/8 of a blade, which passes 0.5; of 3 in 16 it holds 3/8, which does not.
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 3, 16 by 16');
  const rows = page.getByRole('region', { name: 'Readings' }).getByRole('row');
  await expect.poll(() => rows.filter({ hasText: 'level 3' }).textContent()).toMatch(/[1-9]\.\d % → 0\.0 %/);
  const texel = page.getByRole('region', { name: 'Texel', exact: true });
  await expect.poll(() => texel.textContent()).toMatch(/where it is worst/);
  await context.close();
});

test('a list that moves while the files are on their way keeps none from being shown', async () => {
  const { page, context } = await showReview(browser, { ...thinned(), moves: 'meanwhile' });
  await waitForSides(page);
  await context.close();
});

test('small edits are seen to end: the curve falls under the threshold where core says so', async () => {
  const { page, context } = await showReview(browser, spotted());
  await waitForSides(page);
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await sight.focus();
  await page.keyboard.press('End');
  await expect
    .poll(() => sight.getAttribute('aria-valuetext'))
    .toMatch(/level 6, 1 by 1 texels, worst difference \.00/);
  await page.keyboard.press('Home');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toMatch(/level 0, 64 by 64 texels/);
  await context.close();
});

test('the next texture, the mark and the proof are asked of the host', async () => {
  const { page, context } = await showReview(browser, hidden());
  await waitForSides(page);
  await page.getByRole('button', { name: 'Next' }).click();
  await page.getByRole('button', { name: 'Looked at' }).click();
  await page.getByRole('button', { name: 'Open proof' }).click();
  const asked = () =>
    page.evaluate(() => (window as unknown as { asked: { call: string; question: unknown }[] }).asked);
  await expect.poll(asked).toEqual(
    expect.arrayContaining([
      { call: 'go', question: { index: 2 } },
      { call: 'look', question: { looked: 'yes' } },
      { call: 'proof', question: null },
    ]),
  );
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
