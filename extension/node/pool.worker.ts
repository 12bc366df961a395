import { parentPort, workerData } from 'node:worker_threads';
import type { BenchData } from './workers/bench-worker.ts';
import type { WorkerData } from './workers/pool.ts';
import { serve } from './workers/serve.ts';
import { serveBench } from './workers/serve-bench.ts';
import { type SheetData, serveSheet } from './workers/sheet.ts';

const given = workerData as WorkerData | BenchData | SheetData;

if (parentPort !== null) {
  if (given.kind === 'bench') serveBench(parentPort, new URL(given.kernels));
  else if (given.kind === 'sheet') void serveSheet(parentPort, given);
  else {
    const cancel = new Int32Array(given.cancel);
    serve(parentPort, given.kernels, () => Atomics.load(cancel, 0) === 1);
  }
}
