import type { Locator, Page } from 'playwright-core';

/** Rows of the view of changed textures that are in sight. */
export function rowsOf(page: Page): Locator {
  return page.locator('.pane').filter({ hasText: 'Changed Textures' }).locator('.monaco-list-row');
}

export async function namesOf(rows: Locator): Promise<readonly string[]> {
  return rows.locator('.label-name').allTextContents();
}
