import type { Browser, Page } from 'playwright-core';
import { encodePng } from '../../core/codec/png/encode.ts';
import { deflate } from '../../extension/node/deflate.ts';
import { noiseRaster } from '../fixtures/noise.ts';
import { type Showing, showPage, waitForPrints } from './browser.ts';
import { firstPrintOf, type Recording, record } from './recorded.ts';
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

/** Opens a recording and changes kernels on it, in a browser that does nothing else. */
export async function measurePage(browser: Browser, recording: Recording, showing: Showing = {}): Promise<PageSpeed> {
  const { page, context } = await showPage(browser, recording, showing);
  try {
    const [first, own] = await Promise.all([
      timeOf(page, '[data-painted]'),
      timeOf(page, '[data-painted][data-pixels]:not([data-pixels=""])'),
    ]);
    await waitForPrints(page, 2);
    const { longTasks: openTasks } = await quiet(page);
    const times: number[] = [];
    for (const kernel of KERNELS) times.push(await timeKernel(page, kernel));
    const { longTasks } = await quiet(page);
    const sorted = [...times].sort((a, b) => a - b);
    return {
      first,
      own,
      kernel: sorted[sorted.length >> 1],
      openTasks,
      kernelTasks: longTasks.slice(openTasks.length),
    };
  } finally {
    await context.close();
  }
}

/** Milliseconds since the page's start at which the first print matches a selector. */
function timeOf(page: Page, state: string): Promise<number> {
  return page.evaluate(
    (wanted) =>
      new Promise<number>((resolve) => {
        const look = (): void => {
          const row = document.querySelector('proof-page')?.shadowRoot?.querySelector('print-row')?.shadowRoot;
          const stage = row?.querySelector('print-card')?.shadowRoot?.querySelector('print-stage');
          if (stage?.matches(wanted)) resolve(performance.now());
          else requestAnimationFrame(look);
        };
        look();
      }),
    state,
  );
}

/** Chooses a kernel for the second print, and waits for the frame in which the print is painted whole. */
function timeKernel(page: Page, kernel: string): Promise<number> {
  return page.evaluate(
    (name) =>
      new Promise<number>((resolve) => {
        const row = document.querySelector('proof-page')!.shadowRoot!.querySelector('print-row')!.shadowRoot!;
        const card = row.querySelectorAll('print-card')[1].shadowRoot!;
        const list = card.querySelector('select')!;
        const before = card.querySelector<HTMLElement>('print-stage')!.dataset.pixels;
        const start = performance.now();
        list.value = name;
        list.dispatchEvent(new Event('change'));
        const look = (): void => {
          const stage = card.querySelector<HTMLElement>('print-stage')!;
          const isNew = stage.dataset.pixels !== '' && stage.dataset.pixels !== before;
          if (isNew && stage.hasAttribute('data-painted')) resolve(performance.now() - start);
          else requestAnimationFrame(look);
        };
        look();
      }),
    kernel,
  );
}

/** Lets everything that was begun end. */
async function quiet(page: Page) {
  await page.waitForTimeout(1500);
  return troubleOf(page);
}
