import { readFileSync, statSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Browser, CDPSession, Page } from 'playwright-core';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { encodePng } from '../../core/codec/png/encode.ts';
import type { StraightRaster } from '../../core/raster/raster.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { top } from '../house/tree.ts';
import { launchBrowser } from './browser.ts';
import { type ProbedHost, startProbedHost } from './probed.ts';
import { newPage, openWorkbench, webviewOf } from './workbench.ts';
import { makeWorkspace } from './workspace.ts';

const SIDE = 2048;
const TILE = 64;

/** Opened and closed this often, against as often before it is first looked at. */
const [FIRST, ALL] = [2, 20];

/** What one proof's source takes decoded, in bytes. */
const SOURCE_BYTES = SIDE * SIDE * 3;

/** What the pages' process may grow by, in bytes: an allocator's own swing, seen as 9 MB either way. Were each source kept,
 *  eighteen would be. */
const PAGES_SWING = 2 * SOURCE_BYTES;

/** The same of the extension host's heap, whose editor keeps some of its own. */
const HEAP_SWING = 4 * 2 ** 20;

/** And of buffers. A proof of this size opens with a print of 128x128: were each kept, eighteen would be. */
const BUFFERS_SWING = ((ALL - FIRST) * 128 * 128 * 3) / 2;

/** Looks at what is left, and how far they are apart, in milliseconds. */
const [LOOKS, LOOK_MS] = [5, 800];

/** Extension hosts that are started for the time of activation, of which the median is written. */
const STARTS = 3;

describe('the packed extension', () => {
  let host: ProbedHost;
  let browser: Browser;
  let page: Page;
  let browserSession: CDPSession;
  let pageSession: CDPSession;
  let folder: string;
  const figures: Record<string, unknown> = {};

  beforeAll(async () => {
    host = await startProbedHost();
    folder = makeWorkspace(join(host.folder, 'ws'));
    writeFileSync(join(folder, 'large.png'), await encodePng(tiled(), deflate));
    browser = await launchBrowser();
    page = await newPage(browser, host);
    await openWorkbench(page, host.url(folder));
    browserSession = await browser.newBrowserCDPSession();
    pageSession = await page.context().newCDPSession(page);
    await pageSession.send('Performance.enable');
  });

  afterAll(async () => {
    await browser?.close();
    await host?.stop();
    const text = JSON.stringify(figures);
    writeFileSync(join(top, 'dist', 'host-figures.json'), `${text}\n`);
    console.log(`Measured in the host: ${text}`);
  });

  test('is not active before it is needed, and says how long that takes', async () => {
    const times: number[] = [];
    for (let i = 0; i < STARTS; i++) {
      if (i > 0) {
        host.forget();
        await openWorkbench(page, host.url(folder));
      }
      times.push((await host.ask('activate', 'sizeproof.sizeproof')) ?? Number.NaN);
    }
    expect(times).not.toContain(Number.NaN);
    const [median] = times.sort((a, b) => a - b).slice(STARTS >> 1);
    Object.assign(figures, { vsixBytes: statSync(host.vsix).size, activationMs: Math.round(median) });
  });

  test(`leaves of a proof of ${SIDE}x${SIDE} no worker and no memory behind, however often it is opened and closed`, async () => {
    for (let i = 0; i < FIRST; i++) await openAndClose();
    const early = await rest();
    for (let i = FIRST; i < ALL; i++) await openAndClose();
    const late = await rest();
    Object.assign(figures, { [`after${FIRST}Proofs`]: early, [`after${ALL}Proofs`]: late });
    expect.soft(late.threads).toBeLessThanOrEqual(early.threads);
    expect.soft(late.documents).toBeLessThanOrEqual(early.documents);
    expect.soft(late.heap - early.heap).toBeLessThan(HEAP_SWING);
    expect.soft(late.buffers - early.buffers).toBeLessThan(BUFFERS_SWING);
    expect.soft(late.pagesBytes - early.pagesBytes).toBeLessThan(PAGES_SWING);
  });

  /** Until the page's own worker has made the print. */
  async function openAndClose(): Promise<void> {
    await host.ask('open', join(folder, 'large.png'));
    const own = 'print-card print-stage[data-painted][data-pixels]:not([data-pixels=""])';
    await webviewOf(page).locator(own).first().waitFor();
    await host.ask('close');
    await page.locator('.tab').first().waitFor({ state: 'detached' });
  }

  /** Workers of proofs' pages: they are made from code that was fetched, at the origin of a webview. The editor has one of its own. */
  async function workers(): Promise<number> {
    const { targetInfos } = await browserSession.send('Target.getTargets', { filter: [{ type: 'worker' }] });
    return targetInfos.filter(({ url }) => /^blob:http:\/\/[^/]+\.w\.localhost/.test(url)).length;
  }

  /** What is held once all that can go is gone: of each figure the least of several looks. The hosts' engine frees buffers in a
   *  thread of its own, and an editor's own work comes and goes; what leaks stays in every look. */
  async function rest() {
    await expect.poll(workers).toBe(0);
    const looks = [await look()];
    while (looks.length < LOOKS) looks.push(await look());
    const least = (name: keyof (typeof looks)[0]) => Math.min(...looks.map((each) => each[name]));
    return {
      pagesBytes: least('pagesBytes'),
      documents: least('documents'),
      threads: least('threads'),
      heap: least('heap'),
      buffers: least('buffers'),
    };
  }

  async function look() {
    await page.requestGC();
    await page.waitForTimeout(LOOK_MS);
    await page.requestGC();
    const { processInfo } = await browserSession.send('SystemInfo.getProcessInfo');
    const renderers = processInfo.filter(({ type }) => type === 'renderer');
    const { metrics } = await pageSession.send('Performance.getMetrics');
    return {
      pagesBytes: renderers.reduce((sum, { id }) => sum + privateBytes(id), 0),
      documents: metrics.find(({ name }) => name === 'Documents')?.value ?? Number.NaN,
      ...(await host.ask('rest')),
    };
  }
});

/** Noise in tiles: quick to encode and to send, and as large as any other once it is decoded. */
function tiled(): StraightRaster {
  const tile = noiseRaster(5, { width: TILE, height: TILE }, 3, 8, 'noise');
  const codes = new Uint8Array(SIDE * SIDE * 3);
  for (let y = 0; y < SIDE; y++) {
    const row = tile.codes.subarray((y % TILE) * TILE * 3, ((y % TILE) + 1) * TILE * 3) as Uint8Array;
    for (let x = 0; x < SIDE; x += TILE) codes.set(row, (y * SIDE + x) * 3);
  }
  return { ...tile, extent: { width: SIDE, height: SIDE }, codes };
}

/** Memory of a process that no other shares; 0 where the system does not tell.  [proc(5), /proc/pid/smaps_rollup] */
function privateBytes(id: number): number {
  if (process.platform !== 'linux') return 0;
  const text = readFileSync(`/proc/${id}/smaps_rollup`, 'utf8');
  return Number(/^Private_Dirty: +(\d+) kB$/m.exec(text)?.[1]) * 1024;
}
