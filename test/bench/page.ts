import { isLeftOut } from '../host/skip.ts';
import type { Cases } from './cases.ts';
import { least, median, most } from './clock.ts';
import { beside, node } from './command.ts';
import { digits, type Findings } from './figure.ts';
import type { PageTimes } from './page-speed.ts';

/** How fast a proof's page opens and changes kernels, in a browser and without an editor. Where no browser can be had, the figures
 *  say so. */
export async function benchPage({ page: { side, rounds } }: Cases): Promise<Findings> {
  if (isLeftOut) return missing('left out by SKIP_HOST');
  let times: readonly PageTimes[];
  try {
    const options = ['--side', String(side), '--rounds', String(rounds)];
    const files = ['--pages', beside('page'), '--worker', beside('pool.worker.js')];
    times = JSON.parse(await node([beside('page-speed.js'), ...options, ...files], process.cwd()));
  } catch (error) {
    // The process has said on stderr what it missed, most likely a browser.
    return missing(`not measured: ${error instanceof Error ? error.message : String(error)}`);
  }
  const row = (name: string, of: (round: PageTimes) => number): string[] => {
    const all = times.map(of);
    return [name, digits(median(all)), `${digits(least(all))} - ${digits(most(all))}`];
  };
  // Both begin at once, the host when the proof is opened, the page when its frame is made.
  const open = (round: PageTimes): number => Math.max(round.host, round.opening.first);
  return {
    figures: [
      { target: 'page-open', measured: median(times.map(open)) },
      { target: 'page-kernel', measured: median(times.map(({ fine }) => fine.kernel)) },
    ],
    tables: [
      {
        title: 'The page',
        says: `An RGB PNG of ${side} x ${side} of noise, ${rounds} rounds, the page in a browser. The way from the editor to its page is not in it: the file and the host's print are in the browser's memory before the page asks. A print counts when its canvas is painted. Levels: 4, where a proof of 2048 x 2048 opens, and 1. Of kernels, eight are chosen one after another, and the median is that of each round. Tasks under 50 ms are not told by the browser, and count as 0.`,
        columns: ['', 'ms', 'low - high'],
        rows: [
          row("host's worker: start, read, first print", ({ host }) => host),
          row("page: start to the host's print, handed over at once", ({ opening }) => opening.first),
          row('the longer of both: first print', open),
          row('page: start to its own print, level 4', ({ opening }) => opening.own),
          row('page: start to its own print, level 1', ({ fine }) => fine.own),
          row('another kernel to its print, level 4', ({ opening }) => opening.kernel),
          row('another kernel to its print, level 1', ({ fine }) => fine.kernel),
          row("longest task of the page's thread while it opens", ({ opening, fine }) =>
            most([0, ...opening.openTasks, ...fine.openTasks]),
          ),
          row("longest task of the page's thread while kernels change", ({ opening, fine }) =>
            most([0, ...opening.kernelTasks, ...fine.kernelTasks]),
          ),
        ],
      },
    ],
  };
}

function missing(why: string): Findings {
  return {
    tables: [],
    figures: ['page-open', 'page-kernel'].map((target) => ({ target, measured: { missing: why } })),
  };
}
