import { Worker } from 'node:worker_threads';
import type { FromBench, ToBench } from '../../../core/proof/want.ts';

/** Starts a thread that makes prints. `workerUrl` is the bundled pool.worker.ts, with the compiled kernels beside it. */
export function startBenchWorker(workerUrl: URL) {
  const worker = new Worker(workerUrl, {
    workerData: { kind: 'bench', kernels: new URL('./engine.wasm', workerUrl).href },
  });
  return {
    post: (message: ToBench) => worker.postMessage(message),
    listen(take: (message: FromBench | null) => void) {
      worker.on('message', take);
      // An error ends it, and an end is told.
      worker.on('error', () => undefined);
      worker.once('exit', () => take(null));
    },
    stop: () => void worker.terminate(),
  };
}

/** What such a thread is given when it starts. */
export interface BenchData {
  readonly kind: 'bench';
  readonly kernels: string;
}
