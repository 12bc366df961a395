import type { Reporter } from '../node/project/build.ts';

/** What a bar is drawn on: standard error, if it is a terminal. */
export interface Terminal {
  readonly isTTY?: boolean | undefined;
  readonly columns?: number | undefined;
  write(text: string): unknown;
}

/** Cells of the bar. */
const CELLS = 24;

/** A bar that is redrawn in place on a terminal; nothing is drawn elsewhere. `clear` makes room for other lines. */
export function openProgress(
  terminal: Terminal,
): Pick<Reporter, 'begin'> & { done(what?: unknown): void; clear(): void } {
  let count = 0;
  let finished = 0;
  const shown = terminal.isTTY === true;

  return {
    begin(total) {
      count = total;
      finished = 0;
      draw();
    },
    done() {
      finished++;
      draw();
    },
    clear() {
      if (shown) terminal.write('\r\u001b[K');
    },
  };

  function draw(): void {
    if (!shown || count === 0) return;
    const filled = Math.floor((finished / count) * CELLS);
    const bar = `${'█'.repeat(filled)}${'·'.repeat(CELLS - filled)}`;
    terminal.write(`\r\u001b[K${`${bar} ${finished} of ${count}`.slice(0, (terminal.columns ?? 80) - 1)}`);
    if (finished === count) terminal.write('\r\u001b[K');
  }
}
