import { type FSWatcher, watch } from 'node:fs';
import type { Problem } from '../../core/problem.ts';
import { slashed } from '../node/files/node-disk.ts';

/** A change comes as many events: they are waited out for this long. */
const QUIET_MS = 150;

/** Calls `build` now and after every change below the folders that it answers, one call at a time, until `stopped`. What a
 *  build itself writes leads to one more, which finds nothing to do, writes nothing, and so is the last. Ends at once where
 *  nothing can be watched; `report` says why. */
export async function buildOnChange(
  build: () => Promise<readonly string[]>,
  stopped: Promise<void>,
  report: (problem: Problem) => void,
): Promise<void> {
  const watchers = new Map<string, FSWatcher>();
  let isOver = false;
  let isDirty = true;
  let wake: () => void = () => undefined;
  const over = stopped.then(() => {
    isOver = true;
    wake();
  });
  const change = () => {
    isDirty = true;
    wake();
  };
  while (!isOver) {
    if (isDirty) {
      isDirty = false;
      for (const folder of await build()) watchFolder(folder);
      if (watchers.size === 0) break;
      continue;
    }
    await new Promise<void>((awake) => {
      wake = awake;
      if (isDirty || isOver) awake();
    });
    await Promise.race([over, new Promise((quiet) => setTimeout(quiet, QUIET_MS))]);
  }
  for (const watcher of watchers.values()) watcher.close();

  function watchFolder(folder: string): void {
    if (watchers.has(folder)) return;
    try {
      const watcher = watch(folder, { recursive: true }, (_, name) => {
        if (name === null || matters(slashed(name))) change();
      });
      watcher.on('error', (error) => {
        watchers.delete(folder);
        fail(folder, error);
      });
      watchers.set(folder, watcher);
      // What changed before the watch began is found by one more build.
      isDirty = true;
    } catch (error) {
      fail(folder, error);
    }
  }

  function fail(folder: string, error: unknown): void {
    const reason = (error as { code?: string }).code ?? String(error);
    report({ code: 'watch-failed', severity: 'error', values: { reason }, path: folder });
  }
}

/** Whether a changed file may decide what is built: not version control, packages, or what a build leaves under way. */
function matters(path: string): boolean {
  return !path.split('/').some((name) => name === '.git' || name === 'node_modules' || /^\..+\.(tmp|next)$/.test(name));
}
