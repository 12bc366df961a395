import type { BuildTools } from '../node/build.ts';
import { nodeDisk } from '../node/node-disk.ts';
import { defaultWorkers, runInWorkers } from '../node/pool.ts';
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
