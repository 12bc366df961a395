import type { Browser, Page } from 'playwright-core';
import { encodePng } from '../../core/codec/png/encode.ts';
import { deflate } from '../../extension/node/ports/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { waitForPrints } from './browser.ts';
import { firstPrintOf, playData, playRecording, type Recording, record } from './recorded.ts';
import { SERVED, servePage } from './served.ts';
import { troubleOf } from './stage.ts';

/** How fast a page is, in milliseconds, and how long it held its thread. */
export interface PageSpeed {
  /** From the page's own start to the print on its canvas: the host's first print, and the page's own. */
  readonly first: number;
  readonly own: number;
  /** From choosing another kernel to its print, the median over some. */
  readonly kernel: number;
  /** Tasks of 50 ms and more on the page's thread, while it opened and while kernels changed. */
  readonly openTasks: readonly number[];
  readonly kernelTasks: readonly number[];
}

/** Kernels that are chosen one after another. */
const KERNELS = ['mitchell', 'lanczos3', 'box', 'catmull-rom', 'triangle', 'lanczos4', 'b-spline', 'gaussian'];

/** A square RGB picture with the host's first print of a level. */
export async function speedRecording(side: number, level: number): Promise<Recording> {
  const file = await encodePng(noiseRaster(5, { width: side, height: side }, 3, 8, 'noise'), deflate);
  const slots = [
    { id: 0, kernel: null, change: {} },
    { id: 1, kernel: { name: 'hermite', params: {} }, change: {} },
  ];
  const recording = record(file, 'noise.png', {}, { version: 1, slots, selected: 1, sight: { kind: 'level', level } });
  return { ...recording, first: await firstPrintOf(recording, { level, target: null }) };
}

/** Opens a recording on the page in a folder and changes kernels on it, in a browser that does nothing else. The file and the host's
 *  first print are at hand when the page asks for them: the way from an editor is not in it. */
export async function measurePage(browser: Browser, recording: Recording, pages: string): Promise<PageSpeed> {
  const served = await servePage(recording, pages);
  const context = await browser.newContext({ viewport: { width: 1280, height: 900 } });
  try {
    const page = await context.newPage();
    await page.addInitScript(playRecording, playData(recording, SERVED));
    await page.addInitScript(watchPrints);
    await page.goto(served.url);
    await page.waitForFunction(() => (window as unknown as Watched).painted.own !== undefined);
    const { first, own } = await page.evaluate(() => (window as unknown as Watched).painted);
    await waitForPrints(page, 2);
    const { longTasks: openTasks } = await quiet(page);
    const times: number[] = [];
    for (const kernel of KERNELS) times.push(await timeKernel(page, kernel));
    const { longTasks } = await quiet(page);
    const sorted = [...times].sort((a, b) => a - b);
    return {
      first: first!,
      own: own!,
      kernel: sorted[sorted.length >> 1],
      openTasks,
      kernelTasks: longTasks.slice(openTasks.length),
    };
  } finally {
    await context.close();
    await served.close();
  }
}

interface Watched {
  painted: { first?: number; own?: number };
}

/** Runs in the page before its script: notes the frames, in milliseconds since the page's start, in which the first print is seen to be
 *  painted, and with a hash, which only the page's own has. */
function watchPrints(): void {
  const painted: Watched['painted'] = {};
  (window as unknown as Watched).painted = painted;
  const look = (): void => {
    const row = document.querySelector('proof-page')?.shadowRoot?.querySelector('print-row')?.shadowRoot;
    const stage = row?.querySelector('print-card')?.shadowRoot?.querySelector<HTMLElement>('print-stage');
    if (stage?.hasAttribute('data-painted')) {
      painted.first ??= performance.now();
      if (stage.dataset.pixels) painted.own ??= performance.now();
    }
    if (painted.own === undefined) requestAnimationFrame(look);
  };
  look();
}

/** Chooses a kernel for the second print, and waits for the frame in which its print is painted whole. */
function timeKernel(page: Page, kernel: string): Promise<number> {
  return page.evaluate(
    (name) =>
      new Promise<number>((resolve) => {
        const row = document.querySelector('proof-page')!.shadowRoot!.querySelector('print-row')!.shadowRoot!;
        const card = row.querySelectorAll('print-card')[1].shadowRoot!;
        const list = card.querySelector('select')!;
        const start = performance.now();
        list.value = name;
        list.dispatchEvent(new Event('change'));
        const look = (): void => {
          const stage = card.querySelector<HTMLElement>('print-stage')!;
          if (stage.dataset.made === name && stage.hasAttribute('data-painted')) resolve(performance.now() - start);
          else requestAnimationFrame(look);
        };
        // What stands there now is the kernel before.
        requestAnimationFrame(look);
      }),
    kernel,
  );
}

/** Lets everything that was begun end. */
async function quiet(page: Page) {
  await page.waitForTimeout(1500);
  return troubleOf(page);
}
