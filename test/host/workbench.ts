import type { Browser, FrameLocator, Locator, Page } from 'playwright-core';
import { PATIENCE_MS } from './patience.ts';
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
  await page.locator('.monaco-workbench .statusbar').waitFor();
}

/** Loads the window anew, and waits until the old one is gone. */
export async function reloadWindow(page: Page): Promise<void> {
  await page.evaluate(() => {
    Object.assign(window, { isOld: true });
  });
  await runCommand(page, 'Developer: Reload Window');
  await page.waitForFunction(() => !('isOld' in window));
  await page.locator('.monaco-workbench .statusbar').waitFor();
}

/** Longest wait for a step of a try, in milliseconds. A loading editor may take the focus away, hence several tries; on a slow
 *  machine a step may be late, hence longer ones. */
const stepMs = (tries: number): number => Math.min(3_000 * tries, 30_000);

/** Runs a command from the palette. Its list is made when it opens: commands of extensions that load later are not in it. */
export async function runCommand(page: Page, label: string): Promise<void> {
  const input = page.locator('.quick-input-widget input.input');
  const end = Date.now() + PATIENCE_MS;
  for (let tries = 1; ; tries++) {
    try {
      const step = { timeout: stepMs(tries) };
      await page.keyboard.press('F1');
      await input.waitFor(step);
      await input.fill(`>${label}`, step);
      await choice(page, label).click(step);
      return;
    } catch (error) {
      if (Date.now() > end) throw error;
      await page.keyboard.press('Escape');
      await page.locator('.part.titlebar').click({ position: { x: 200, y: 10 } });
    }
  }
}

/** The entry of an open list of choices that is called so, where the name may leave out that it asks for more. An entry of a list
 *  that was open before may hold the same words among others. */
export function choice(page: Page, name: string): Locator {
  const whole = new RegExp(`^${name.replaceAll(/[.*+?^${}()|[\]\\]/g, '\\$&')}( ?…|\\.\\.\\.)?$`);
  const row = page.locator('.quick-input-list .monaco-list-row');
  return row.filter({ has: page.locator('.label-name').filter({ hasText: whole }) }).first();
}

/** A notification that holds a text. */
function toast(page: Page, text: string): Locator {
  return page.locator('.notifications-toasts .notification-list-item-message').filter({ hasText: text }).first();
}

/** Waits until a notification says a text. One whose toast was missed lies in the list of notifications. */
export async function heard(page: Page, text: string): Promise<void> {
  const listed = page
    .locator('.notifications-center .notification-list-item-message')
    .filter({ hasText: text })
    .first();
  const end = Date.now() + PATIENCE_MS;
  for (let tries = 1; ; tries++) {
    try {
      await toast(page, text)
        .or(listed)
        .first()
        .waitFor({ timeout: 5 * stepMs(tries) });
      return;
    } catch (error) {
      if (Date.now() > end) throw error;
      await runCommand(page, 'Notifications: Show Notifications');
    }
  }
}

/** A row of the explorer. */
export function explorerRow(page: Page, name: string): Locator {
  return page.locator(`.explorer-folders-view .monaco-list-row[aria-label^="${name}"]`);
}

/** The document of the extension's own page, inside the host's two frames. */
export function webviewOf(page: Page): FrameLocator {
  return page.frameLocator('iframe.webview.ready:visible').last().frameLocator('iframe#active-frame');
}

/** Picks from the extension's part of the explorer's menu. */
export function pickFromExplorer(page: Page, row: string, label: string): Promise<void> {
  return pickFromMenu(page, explorerRow(page, row), ['Sizeproof', label]);
}

/** Picks from a row's menu, through those inside it. A menu that has only just opened takes no click, hence several tries. */
export async function pickFromMenu(page: Page, row: Locator, labels: readonly string[]): Promise<void> {
  const menu = page.locator('.monaco-menu-container').first();
  const item = (name: string) => page.getByRole('menuitem', { name, exact: true });
  const end = Date.now() + PATIENCE_MS;
  for (let tries = 1, isPicked = false; ; tries++) {
    const step = { timeout: stepMs(tries) };
    try {
      // A slow menu may have gone after its time.
      if (isPicked && !(await menu.isVisible())) return;
      if (!(await menu.isVisible())) await row.click({ button: 'right', ...step });
      for (const label of labels.slice(0, -1)) await item(label).hover(step);
      await item(labels[labels.length - 1]).click(step);
      isPicked = true;
      await menu.waitFor({ state: 'hidden', ...step });
      return;
    } catch (error) {
      if (Date.now() > end) throw error;
    }
  }
}

/** Whether the palette has a command, once it lists those that there are. */
export async function hasCommand(page: Page, label: string): Promise<boolean> {
  const input = page.locator('.quick-input-widget input.input');
  await page.keyboard.press('F1');
  await input.fill(`>${label}`);
  // Where there is none, others that are like it are offered, if there are any.
  const others = page.locator('.quick-input-list .monaco-list-row').filter({ hasText: /similar commands|No matching/ });
  await choice(page, label).or(others).first().waitFor();
  const isThere = await choice(page, label).isVisible();
  await page.keyboard.press('Escape');
  await input.waitFor({ state: 'hidden' });
  return isThere;
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

/** All that the workbench has written into its browser's stores, as text, where quotes inside a value are not escaped. */
export async function keptBy(page: Page): Promise<string> {
  const values = await page.evaluate(async () => {
    const answer = <T>(request: IDBRequest<T>) =>
      new Promise<T>((resolve, reject) => {
        request.onsuccess = () => resolve(request.result);
        request.onerror = () => reject(request.error);
      });
    const texts: string[] = [];
    for (const { name } of await indexedDB.databases()) {
      if (name === undefined) continue;
      const database = await answer(indexedDB.open(name));
      for (const store of Array.from(database.objectStoreNames)) {
        const all = await answer(database.transaction(store).objectStore(store).getAll());
        texts.push(...all.filter((each) => typeof each === 'string'));
      }
      database.close();
    }
    return texts;
  });
  return values.join('\n').replaceAll('\\', '');
}
