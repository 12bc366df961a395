import type { Browser, FrameLocator, Locator, Page } from 'playwright-core';
import type { Host } from './server.ts';

/** A page on a host, each webview at an origin of its own, as in the product. */
export async function newPage(browser: Browser, host: Host): Promise<Page> {
  const context = await browser.newContext({ viewport: { width: 1280, height: 800 } });
  const page = await context.newPage();
  await page.addInitScript((port) => {
    if (location.hostname !== 'w.localhost' || top !== window) return;
    new MutationObserver((_, observer) => {
      const element = document.getElementById('vscode-workbench-web-configuration');
      if (element?.dataset.settings === undefined) return;
      observer.disconnect();
      const configuration = JSON.parse(element.dataset.settings);
      const endpoint = configuration.webviewEndpoint.replace(/^\//, '');
      configuration.webviewEndpoint = `http://{{uuid}}.w.localhost:${port}/${endpoint}`;
      element.dataset.settings = JSON.stringify(configuration);
    }).observe(document, { childList: true, subtree: true });
  }, host.port);
  return page;
}

export async function openWorkbench(page: Page, url: string): Promise<void> {
  await page.goto(url);
  await page.locator('.monaco-workbench .statusbar').waitFor({ timeout: 90_000 });
}

/** Waits for each step of a try. A loading editor may take the focus away, hence several. */
const STEP_MS = 3_000;
const TRIES = 20;

/** Runs a command from the palette. Its list is made when it opens: commands of extensions that load later are not in it. */
export async function runCommand(page: Page, label: string): Promise<void> {
  const input = page.locator('.quick-input-widget input.input');
  for (let tries = 1; ; tries++) {
    try {
      await page.keyboard.press('F1');
      await input.waitFor({ timeout: STEP_MS });
      await input.fill(`>${label}`, { timeout: STEP_MS });
      await choice(page, label).click({ timeout: STEP_MS });
      return;
    } catch (error) {
      if (tries >= TRIES) throw error;
      await page.keyboard.press('Escape');
      await page.locator('.part.titlebar').click({ position: { x: 200, y: 10 } });
    }
  }
}

/** The first entry of an open list of choices that has a text. */
export function choice(page: Page, text: string): Locator {
  return page.locator('.quick-input-list .monaco-list-row').filter({ hasText: text }).first();
}

/** A notification that holds a text. */
export function toast(page: Page, text: string): Locator {
  return page.locator('.notifications-toasts .notification-list-item-message').filter({ hasText: text }).first();
}

/** A row of the explorer. */
export function explorerRow(page: Page, name: string): Locator {
  return page.locator(`.explorer-folders-view .monaco-list-row[aria-label^="${name}"]`);
}

/** The document of the extension's own page, inside the host's two frames. */
export function webviewOf(page: Page): FrameLocator {
  return page.frameLocator('iframe.webview.ready:visible').last().frameLocator('iframe#active-frame');
}

/** Picks from the extension's part of the explorer's menu. A menu that has only just opened takes no click, hence several tries. */
export async function pickFromExplorer(page: Page, row: string, label: string): Promise<void> {
  const menu = page.locator('.monaco-menu-container').first();
  for (let tries = 1, isPicked = false; ; tries++) {
    try {
      // A slow menu may have gone after its time.
      if (isPicked && !(await menu.isVisible())) return;
      if (!(await menu.isVisible())) await explorerRow(page, row).click({ button: 'right', timeout: STEP_MS });
      await page.getByRole('menuitem', { name: 'Sizeproof', exact: true }).hover({ timeout: STEP_MS });
      await page.getByRole('menuitem', { name: label, exact: true }).click({ timeout: STEP_MS });
      isPicked = true;
      await menu.waitFor({ state: 'hidden', timeout: STEP_MS });
      return;
    } catch (error) {
      if (tries >= TRIES) throw error;
    }
  }
}

/** Takes the path that the host's file dialog offers, which ends in this name. */
export async function acceptPath(page: Page, name: string): Promise<void> {
  const input = page.locator('.quick-input-widget input.input');
  await page.waitForFunction((ending) => {
    const field = document.querySelector<HTMLInputElement>('.quick-input-widget input.input');
    return field?.value.endsWith(ending) ?? false;
  }, name);
  await input.press('Enter');
}
