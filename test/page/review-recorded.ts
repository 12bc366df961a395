import { existsSync, readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, BrowserContext, Page } from 'playwright-core';
import { PROTOCOL } from '../../core/protocol.ts';
import type { PairSide, ReviewOpenReply } from '../../core/review/want.ts';
import { resolveTreatment } from '../../core/treatment/resolve.ts';
import { parseSettings } from '../../core/treatment/settings.ts';
import { pagePolicy } from '../../extension/app/proof/policy.ts';
import { top } from '../house/tree.ts';
import { ORIGIN, type Showing } from './browser.ts';
import { themes } from './themes.ts';

/** What a host would answer to a review's page. */
export interface ReviewRecording {
  readonly open: ReviewOpenReply;
  readonly before: PairSide;
  readonly after: PairSide;
  /** Whether the host's list moves while the files are on their way, which it tells. */
  readonly moves?: 'meanwhile';
}

/** One version of a texture by settings as a file spells them. */
export function sideOf(path: string, bytes: Uint8Array, settings: object = {}): PairSide {
  const { settings: read } = parseSettings(JSON.stringify(settings), 'sizeproof.json');
  const { treatment } = resolveTreatment(read, path);
  return { kind: 'file', path, treatment, bytes: new Uint8Array(bytes).buffer };
}

export function recordReview(
  before: PairSide,
  after: PairSide,
  rest: Partial<ReviewOpenReply> & { readonly path: string },
): ReviewRecording {
  const open: ReviewOpenReply = {
    key: 'one',
    oldPath: rest.path,
    status: 'changed',
    beforeLabel: 'HEAD (0123456789)',
    afterLabel: 'working tree',
    index: 1,
    count: 10,
    lookedAt: 3,
    looked: 'no',
    abilities: { look: true, proof: true },
    rows: null,
    manifest: 'none',
    problems: [],
    preferences: { backdrop: 'checker', swapDwell: 333 },
    words: {},
    remark: null,
    ...rest,
  };
  return { open, before, after };
}

/** Opens the built page as a review's, with a recording. Every request is kept in `window.asked`. */
export async function showReview(
  browser: Browser,
  { open, before, after, moves }: ReviewRecording,
  { width = 1280, height = 900, theme = 'dark' }: Showing = {},
): Promise<{ readonly page: Page; readonly context: BrowserContext }> {
  const context = await browser.newContext({ viewport: { width, height } });
  const page = await context.newPage();
  await page.route(`${ORIGIN}/**`, async (route) => {
    const path = new URL(route.request().url()).pathname;
    if (path === '/') {
      const body = `<!doctype html><html lang="en"><head><meta charset="utf-8"><title>Review</title>
<meta http-equiv="Content-Security-Policy" content="${pagePolicy(ORIGIN, 'recorded')}">
<link id="theme" rel="stylesheet" href="/${theme}.css"><link rel="stylesheet" href="/page.css"></head>
<body class="${themes[theme].bodyClass}" data-about="review" data-worker="${ORIGIN}/worker.js"><script nonce="recorded" src="/page.js"></script></body></html>`;
      return route.fulfill({ contentType: 'text/html', body });
    }
    const asked = themes[path.slice(1, -'.css'.length) as keyof typeof themes];
    if (asked !== undefined) return route.fulfill({ contentType: 'text/css', body: asked.css });
    const file = join(top, 'dist/page', path.slice(1));
    if (!existsSync(file)) return route.fulfill({ status: 404, body: '' });
    const contentType = path.endsWith('.css') ? 'text/css' : 'text/javascript';
    return route.fulfill({ contentType, body: readFileSync(file) });
  });
  const packed = (side: PairSide) =>
    side.kind === 'file' ? { ...side, bytes: Buffer.from(side.bytes).toString('base64') } : side;
  await page.addInitScript(playReview, {
    protocol: PROTOCOL,
    open,
    before: packed(before),
    after: packed(after),
    moves: moves !== undefined,
  });
  await page.goto(`${ORIGIN}/`);
  return { page, context };
}

/** Runs in the page before its script, in VS Code's place. */
function playReview(data: { protocol: number; open: object; before: object; after: object; moves: boolean }): void {
  const stage = window as unknown as {
    acquireVsCodeApi: () => unknown;
    asked: { call: string; question: unknown }[];
    kept: unknown;
    violations: string[];
    longTasks: number[];
  };
  Object.assign(stage, { asked: [], violations: [], longTasks: [] });
  document.addEventListener('securitypolicyviolation', (event) => {
    stage.violations.push(`${event.violatedDirective} ${event.blockedURI} ${event.sourceFile}:${event.lineNumber}`);
  });
  const unpacked = (side: object) => {
    const { bytes } = side as { bytes?: string };
    return bytes === undefined ? side : { ...side, bytes: Uint8Array.from(atob(bytes), (c) => c.charCodeAt(0)).buffer };
  };
  const answer = (call: string): object => {
    if (call === 'open') return data.open;
    return call === 'sides' ? { before: unpacked(data.before), after: unpacked(data.after) } : {};
  };
  const held: object[] = [];
  stage.acquireVsCodeApi = () => ({
    postMessage: ({ id, call, question }: { id: number; call: string; question: unknown }) => {
      stage.asked.push({ call, question });
      const reply = { protocol: data.protocol, kind: 'reply', id, revision: 1, reply: { ok: answer(call) } };
      if (call === 'sides' && data.moves) {
        held.push(reply);
        window.postMessage({ protocol: data.protocol, kind: 'texture', revision: 2 }, '*');
        return;
      }
      // What was held comes after the page has heard of the list as it is now.
      for (const each of [reply, ...held.splice(0)]) setTimeout(() => window.postMessage(each, '*'), 0);
    },
    getState: () => stage.kept,
    setState: (state: unknown) => {
      stage.kept = state;
    },
  });
}

/** Waits until every print of a review is painted. */
export async function waitForSides(page: Page, count = 3): Promise<void> {
  await page.waitForFunction((wanted) => {
    const row = document.querySelector('review-page')?.shadowRoot?.querySelector('review-prints')?.shadowRoot;
    const cards = Array.from(row?.querySelectorAll('side-card') ?? []);
    const stages = cards.flatMap((card) => card.shadowRoot?.querySelector('print-stage') ?? []);
    return stages.length >= wanted && stages.every((stage) => stage.hasAttribute('data-painted'));
  }, count);
}
