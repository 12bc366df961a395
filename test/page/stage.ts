import type { Page } from 'playwright-core';

/** What stands on a print's canvas, read from the page: codes of its texels at one texel a device pixel. */
export async function readPrint(page: Page, index = 0): Promise<{ readonly pixels: string; readonly rgb: Uint8Array }> {
  const read = await page.evaluate(async (at) => {
    const row = document.querySelector('proof-page')?.shadowRoot?.querySelector('print-row')?.shadowRoot;
    const card = row?.querySelectorAll('print-card')[at];
    const stage = card?.shadowRoot?.querySelector<HTMLElement>('print-stage');
    const canvas = stage?.shadowRoot?.querySelector<HTMLCanvasElement>('canvas.print');
    if (stage == null || canvas == null) throw new Error('There is no print');
    // A canvas whose box has just changed is empty until it is painted again.
    for (let whole = 0; whole < 3; whole = stage.hasAttribute('data-painted') ? whole + 1 : 0) {
      await new Promise(requestAnimationFrame);
    }
    const { extent } = (stage as unknown as { scene: { extent: { width: number; height: number } } }).scene;
    const { zoom, left, top } = stage.dataset;
    if (zoom !== '1') throw new Error(`The print is shown at ${zoom}:1`);
    const { data } = canvas.getContext('2d')!.getImageData(Number(left), Number(top), extent.width, extent.height);
    let text = '';
    for (const byte of data) text += String.fromCharCode(byte);
    return { rgba: btoa(text), pixels: stage.dataset.pixels ?? '' };
  }, index);
  const rgba = Buffer.from(read.rgba, 'base64');
  return { pixels: read.pixels, rgb: Uint8Array.from(rgba).filter((_, i) => i % 4 !== 3) };
}

/** Where a print's texels lie on the page, in CSS pixels, and how many device pixels it is high and wide. */
export async function boxOfPrint(
  page: Page,
): Promise<{ readonly x: number; readonly y: number; readonly width: number; readonly height: number }> {
  return page.evaluate(() => {
    const row = document.querySelector('proof-page')?.shadowRoot?.querySelector('print-row')?.shadowRoot;
    const stage = row?.querySelector('print-card')?.shadowRoot?.querySelector<HTMLElement>('print-stage');
    if (stage == null) throw new Error('There is no print');
    const { extent } = (stage as unknown as { scene: { extent: { width: number; height: number } } }).scene;
    const box = stage.getBoundingClientRect();
    const zoom = Number(stage.dataset.zoom);
    return {
      x: box.x * devicePixelRatio + Number(stage.dataset.left),
      y: box.y * devicePixelRatio + Number(stage.dataset.top),
      width: extent.width * zoom,
      height: extent.height * zoom,
    };
  });
}

/** Refusals of the page's policy, errors that nobody caught, and long tasks in milliseconds. */
export function troubleOf(
  page: Page,
): Promise<{ readonly violations: readonly string[]; readonly longTasks: readonly number[] }> {
  return page.evaluate(() => {
    const { violations, longTasks } = window as unknown as { violations: string[]; longTasks: number[] };
    return { violations, longTasks };
  });
}
