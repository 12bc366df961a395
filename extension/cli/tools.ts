import { nodeDisk } from '../node/files/node-disk.ts';
import type { BuildTools } from '../node/project/build.ts';
import { defaultWorkers, runInWorkers } from '../node/workers/pool.ts';
import type { Arguments } from './arguments.ts';
import type { Shell } from './shell.ts';

/** This machine's disk and workers, as a command line asks for them. */
export function toolsOf(args: Arguments, shell: Shell, memoryBytes: number): BuildTools {
  const workerUrl = new URL('./pool.worker.js', import.meta.url);
  const workers = args.jobs ?? defaultWorkers();
  return {
    disk: nodeDisk,
    run: runInWorkers({ workerUrl, workers, memoryBytes, cancel: shell.cancel }),
    isCancelled: shell.isCancelled,
  };
}
