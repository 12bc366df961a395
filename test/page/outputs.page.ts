import type { Browser } from 'playwright-core';
import { PNG } from 'pngjs';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { build } from '../fixtures/built.ts';
import { launchBrowser } from '../host/browser.ts';
import { showPage, waitForPrints } from './browser.ts';
import { type Recording, recordDemo } from './recorded.ts';
import { readPrint, troubleOf } from './stage.ts';

// What a build writes beside an image is proofed like the image: its prints are the written files, as pngjs reads them.

let browser: Browser;
beforeAll(async () => {
  browser = await launchBrowser();
});
afterAll(() => browser?.close());

const kept = (level: number, output: string) => ({ version: 1, zoom: 1, sight: { kind: 'level', level }, output });

async function builtOf(recording: Recording) {
  if ('problem' in recording.open) throw new Error('Expected a recording that opens');
  const { path, settings } = recording.open;
  return build(recording.bytes, settings.treatment!, {
    texture: path,
    ...(recording.roughness !== undefined && { roughness: recording.roughness }),
  });
}

/** 8 bits of gray over three channels, as a screen shows them.  [PNG3, Sample depth rescaling] */
function screenCodes(file: Uint8Array): Buffer {
  const png = PNG.sync.read(Buffer.from(file), { skipRescale: true });
  const wide = png.data.BYTES_PER_ELEMENT === 2;
  return Buffer.from(
    Array.from(png.data)
      .filter((_, i) => i % 4 !== 3)
      .map((code) => (wide ? Math.floor((code * 255) / 65535 + 0.5) : code)),
  );
}

test.each([
  ['ground/cobbles_normal.png', 'roughness', 2],
  ['ground/cobbles_normal.png', 'roughness', 1],
  ['terrain/bog.png', 'min', 2],
  ['terrain/bog.png', 'max', 3],
])('the print of %s’s %s at level %i is the file that the build writes, byte for byte', async (path, output, level) => {
  const recording = recordDemo(path, { state: { kind: 'built' } }, kept(level, output));
  const { page, context } = await showPage(browser, { ...recording, isBuilt: true });
  await waitForPrints(page);
  const { files, manifest } = await builtOf(recording);
  const name = path.replace('.png', `.${output}.${level}.png`);
  const file = files.get(name);
  expect([...files.keys()]).toContain(name);
  await expect.poll(async () => Buffer.compare(Buffer.from((await readPrint(page)).rgb), screenCodes(file!))).toBe(0);
  const listed = manifest.levels.find((image) => image.use === output && image.level === level);
  await expect.poll(async () => (await readPrint(page)).pixels).toBe(listed!.pixels);
  await page.getByText('equals the build').waitFor();
  const asked = await page.evaluate(
    () => (window as unknown as { asked: { call: string; question: unknown }[] }).asked,
  );
  expect(asked.filter(({ call }) => call === 'isBuilt').map(({ question }) => question)).toContainEqual({
    use: output,
    level,
    target: null,
    pixels: listed!.pixels,
  });
  expect((await troubleOf(page)).violations).toEqual([]);
  await context.close();
});

test('the output is chosen by name; where a level has none, the image is shown', async () => {
  const { page, context } = await showPage(browser, recordDemo('terrain/bog.png', {}, kept(1, 'image')));
  await waitForPrints(page);
  const hash = async () => (await readPrint(page)).pixels;
  await expect.poll(hash).not.toBe('');
  const heights = await hash();
  await page.getByRole('combobox', { name: 'Output' }).selectOption('greatest heights');
  await page.locator('print-card footer').getByText('mean').waitFor();
  await expect.poll(async () => ['', heights].includes(await hash())).toBe(false);
  const sight = page.getByRole('slider', { name: 'Sight on the size axis' });
  await sight.focus();
  await page.keyboard.press('Home');
  await expect.poll(() => sight.getAttribute('aria-valuetext')).toContain('level 0');
  await expect.poll(() => page.getByRole('combobox', { name: 'Output' }).count()).toBe(0);
  await page.keyboard.press('ArrowRight');
  await expect.poll(() => page.getByRole('combobox', { name: 'Output' }).inputValue()).toBe('max');
  await context.close();
});

test('a roughness map of another extent is one clear problem in place', async () => {
  const recording = recordDemo('ground/cobbles_normal.png', {}, kept(2, 'roughness'));
  const small = recordDemo('ui/lantern.png').bytes;
  const { page, context } = await showPage(browser, { ...recording, roughness: small });
  await page.getByText('Export both at one extent.').waitFor();
  await context.close();
});
