import { parentPort, workerData } from 'node:worker_threads';
import { serve } from './serve.ts';

const cancel = new Int32Array(workerData.cancel);

if (parentPort !== null) serve(parentPort, () => Atomics.load(cancel, 0) === 1);
