import type { FrameLocator, Page } from 'playwright-core';
import { PNG } from 'pngjs';

/** RGBA codes as pngjs decodes them. */
export interface Pixels {
  readonly width: number;
  readonly height: number;
  readonly data: Uint8Array;
}

/** Shows a level of the proof at one texel a device pixel. */
export async function showLevel(page: Page, proof: FrameLocator, level: number): Promise<void> {
  const field = proof.getByLabel('Level', { exact: true });
  await field.fill(String(level));
  await field.press('Enter');
  await showTrueSize(page, proof);
}

/** Shows the prints at one texel a device pixel, with no hand on them: it would draw a cursor. */
export async function showTrueSize(page: Page, proof: FrameLocator): Promise<void> {
  await proof.getByRole('application').first().press('1');
  await proof.getByLabel('Level', { exact: true }).focus();
  await page.mouse.move(2, 2);
  await waitForPrint(proof);
}

/** Waits until the first print is whole and painted at one texel a device pixel. */
export function waitForPrint(proof: FrameLocator): Promise<void> {
  return proof.locator('print-card print-stage[data-painted][data-zoom="1"]').first().waitFor();
}

/** The first print as it stands on the screen, read from a picture of the whole window. */
export async function printOnScreen(
  page: Page,
  proof: FrameLocator,
  extent: { readonly width: number; readonly height: number },
): Promise<Pixels> {
  const stage = proof.locator('print-card print-stage').first();
  const box = await stage.boundingBox();
  if (box === null) throw new Error('The print is not in view');
  const { left, top } = await stage.evaluate((element: HTMLElement) => ({
    left: Number(element.dataset.left),
    top: Number(element.dataset.top),
  }));
  // The canvas begins where the browser snapped its box: the nearest whole device pixel.
  const [x, y] = [Math.round(box.x) + left, Math.round(box.y) + top];
  const { width, height } = extent;
  if (left < 0 || top < 0 || left + width > box.width || top + height > box.height) {
    throw new Error(`Expected room for ${width}x${height} texels in ${box.width}x${box.height}`);
  }
  const screen = PNG.sync.read(await page.screenshot());
  const data = new Uint8Array(width * height * 4);
  for (let row = 0; row < height; row++) {
    const at = ((y + row) * screen.width + x) * 4;
    data.set(screen.data.subarray(at, at + width * 4), row * width * 4);
  }
  return { width, height, data };
}

/** What a channel of a texel should be on the screen, and how far from it may be, in codes. */
export type Expected = (codes: Uint8Array, channel: number) => { readonly code: number; readonly within: number };

/** Where a screen does not show a built image, each place in words. */
export function differences(shown: Pixels, built: Pixels, expected: Expected): string[] {
  if (shown.width !== built.width || shown.height !== built.height) {
    return [`${shown.width}x${shown.height} in place of ${built.width}x${built.height}`];
  }
  const found: string[] = [];
  for (let texel = 0; texel < built.width * built.height; texel++) {
    const codes = built.data.subarray(texel * 4, texel * 4 + 4);
    for (let channel = 0; channel < 3; channel++) {
      const { code, within } = expected(codes, channel);
      const seen = shown.data[texel * 4 + channel];
      if (Math.abs(seen - code) <= within) continue;
      const place = `${texel % built.width},${Math.floor(texel / built.width)}`;
      found.push(`${place} ${'rgb'[channel]}: ${seen} in place of ${code}`);
    }
  }
  return found;
}

/** As it is stored. */
export const asStored: Expected = (codes, channel) => ({ code: codes[channel], within: 0 });

/** Blended in linear light over a gray, `light` in 0..1. Where alpha is whole, the code as it is stored; else a table of the page
 *  brings light to a code, which may be one from the nearest. */
export function asBlended(light: number): Expected {
  return (codes, channel) => {
    const alpha = codes[3] / 255;
    if (alpha === 1) return asStored(codes, channel);
    return { code: codeOf(lightOf(codes[channel]) * alpha + light * (1 - alpha)), within: 1 + 1 / 2 };
  };
}

/** Light of an sRGB code in 0..255, and the code in 0..255 of light, not rounded.  [IEC 61966-2-1, clause 5] */
function lightOf(code: number): number {
  const c = code / 255;
  return c <= 0.04045 ? c / 12.92 : ((c + 0.055) / 1.055) ** 2.4;
}

function codeOf(light: number): number {
  return 255 * (light <= 0.0031308 ? light * 12.92 : 1.055 * light ** (1 / 2.4) - 0.055);
}
