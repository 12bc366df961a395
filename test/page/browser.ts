import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, BrowserContext, Page } from 'playwright-core';
import { pagePolicy } from '../../extension/app/proof/policy.ts';
import { top } from '../house/tree.ts';
import { playData, playRecording, type Recording } from './recorded.ts';
import { type ThemeName, themes } from './themes.ts';
import { watchWorkers } from './unanswered.ts';

/** The page's own, which stands for `webview.cspSource`. */
export const ORIGIN = 'http://page.localhost';

export interface Showing {
  /** In place of the policy that the host's page has. */
  readonly policy?: string;
  /** Folder of the built page, in place of the one that ships. */
  readonly pages?: string;
  /** `own` takes the browser's window as it is. */
  readonly window?: 'own';
  readonly width?: number;
  readonly height?: number;
  readonly theme?: ThemeName;
  readonly reducedMotion?: 'reduce' | 'no-preference';
  readonly forcedColors?: 'active' | 'none';
}

/** Opens the built page with a recording and waits for nothing. Close the context when done. */
export async function showPage(
  browser: Browser,
  recording: Recording,
  showing: Showing = {},
): Promise<{ readonly page: Page; readonly context: BrowserContext }> {
  const { width = 1280, height = 900, theme = 'dark', pages = join(top, 'dist/page') } = showing;
  const context = await browser.newContext({
    // A browser of another device scale has a window of its own; emulating the scale would not snap boxes as it does.
    viewport: showing.window === 'own' ? null : { width, height },
    reducedMotion: showing.reducedMotion ?? 'no-preference',
    forcedColors: showing.forcedColors ?? 'none',
  });
  const page = await context.newPage();
  await page.route(`${ORIGIN}/**`, async (route) => {
    const path = new URL(route.request().url()).pathname;
    if (path === '/') {
      const policy = showing.policy ?? pagePolicy(ORIGIN, 'recorded');
      const body = `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>Proof</title>
<meta http-equiv="Content-Security-Policy" content="${policy}">
<link id="theme" rel="stylesheet" href="/${theme}.css"><link rel="stylesheet" href="/page.css"></head>
<body class="${themes[theme].bodyClass}" data-worker="${ORIGIN}/worker.js"><script nonce="recorded" src="/page.js"></script></body></html>`;
      return route.fulfill({ contentType: 'text/html', body });
    }
    if (path === '/recorded.bytes') {
      return route.fulfill({ contentType: 'application/octet-stream', body: Buffer.from(recording.bytes) });
    }
    if (path === '/recorded.roughness') {
      return route.fulfill({ contentType: 'application/octet-stream', body: Buffer.from(recording.roughness!) });
    }
    const asked = themes[path.slice(1, -'.css'.length) as ThemeName];
    if (asked !== undefined) return route.fulfill({ contentType: 'text/css', body: asked.css });
    const file = join(pages, path.slice(1));
    if (!existsSync(file)) return route.fulfill({ status: 404, body: '' });
    const contentType = path.endsWith('.css') ? 'text/css' : 'text/javascript';
    return route.fulfill({ contentType, body: readFileSync(file) });
  });
  await page.addInitScript(playRecording, playData(recording));
  await page.addInitScript(watchWorkers);
  await page.goto(`${ORIGIN}/`);
  return { page, context };
}

/** Changes the theme of a page as the editor does, under the page's eyes. */
export async function changeTheme(page: Page, theme: ThemeName): Promise<void> {
  await page.evaluate(
    ({ name, bodyClass }) =>
      new Promise((resolve) => {
        const link = document.querySelector<HTMLLinkElement>('#theme')!;
        document.body.className = bodyClass;
        // A sheet that is there already is not loaded again.
        if (link.href.endsWith(`/${name}.css`)) return resolve(null);
        link.onload = resolve;
        link.href = `/${name}.css`;
      }),
    { name: theme, bodyClass: themes[theme].bodyClass },
  );
}

/** Waits until every print on the page is painted, whole and as asked for. */
export async function waitForPrints(page: Page, count = 1): Promise<void> {
  await page.waitForFunction((wanted) => {
    const row = document.querySelector('proof-page')?.shadowRoot?.querySelector('print-row')?.shadowRoot;
    const cards = Array.from(row?.querySelectorAll('print-card') ?? []);
    const stages = cards.map((card) => card.shadowRoot?.querySelector('print-stage'));
    return stages.length >= wanted && stages.every((stage) => stage?.hasAttribute('data-painted'));
  }, count);
}
