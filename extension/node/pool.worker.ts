import { parentPort, workerData } from 'node:worker_threads';
import type { WorkerData } from './pool.ts';
import { serve } from './serve.ts';

const given = workerData as WorkerData;
const cancel = new Int32Array(given.cancel);

if (parentPort !== null) serve(parentPort, given.kernels, () => Atomics.load(cancel, 0) === 1);
