import { pathToFileURL } from 'node:url';
import { parseArgs } from 'node:util';
import { HostBench } from '../../extension/app/proof/host-bench.ts';
import { startBenchWorker } from '../../extension/node/workers/bench-worker.ts';
import { launchBrowser } from '../host/browser.ts';
import type { Recording } from '../page/recorded.ts';
import { measurePage, type PageSpeed, speedRecording } from '../page/speed.ts';

// Run by the bench in a process of its own: prints a JSON list of PageTimes.

/** One round. */
export interface PageTimes {
  /** Milliseconds in which the host's worker starts, reads the file and makes the first print. */
  readonly host: number;
  /** Opened where a proof opens by itself, and at its first level. */
  readonly opening: PageSpeed;
  readonly fine: PageSpeed;
}

/** The level that a proof of 2048x2048 opens at by itself, and the finest that is made. */
const LEVELS = { opening: 4, fine: 1 };

const { values } = parseArgs({
  options: {
    side: { type: 'string', default: '2048' },
    rounds: { type: 'string', default: '1' },
    /** The built page, and the host's bundled worker. */
    pages: { type: 'string', default: 'dist/page' },
    worker: { type: 'string', default: 'dist/pool.worker.js' },
  },
});
const side = Number(values.side);
const recordings = {
  opening: await speedRecording(side, LEVELS.opening),
  fine: await speedRecording(side, LEVELS.fine),
};
const browser = await launchBrowser();
try {
  const rounds: PageTimes[] = [];
  for (let round = 0; round < Number(values.rounds); round++) {
    rounds.push({
      host: await timeHost(recordings.opening),
      opening: await measurePage(browser, recordings.opening, values.pages),
      fine: await measurePage(browser, recordings.fine, values.pages),
    });
  }
  console.log(JSON.stringify(rounds));
} finally {
  await browser.close();
}

/** As the extension does it when a proof is opened, without an editor between. */
async function timeHost({ open, bytes, first }: Recording): Promise<number> {
  if ('problem' in open || first === undefined) throw new TypeError('Expected a recording with a first print');
  // The worker takes the bytes for its own.
  const copy = new Uint8Array(bytes).buffer;
  const start = performance.now();
  const bench = new HostBench(startBenchWorker(pathToFileURL(values.worker)), open.name, copy);
  try {
    await bench.print(first.treatment, first.image);
    return performance.now() - start;
  } finally {
    bench.stop();
  }
}
