import { availableParallelism } from 'node:os';
import { Worker } from 'node:worker_threads';
import type { Problem } from '../../../core/problem.ts';
import { readKernels } from '../ports/kernels.ts';
import type { Job } from './measure-job.ts';
import { type MemoryGate, openMemoryGate } from './memory.ts';
import type { Outcome } from './texture-job.ts';

/** Runs jobs, and tells what became of each as it ends. Ends when all have. */
export type RunJobs = (jobs: readonly Job[], done: (index: number, outcome: Outcome) => void) => Promise<void>;

export interface PoolOptions {
  /** The bundled pool.worker.ts, with the compiled kernels beside it. */
  readonly workerUrl: URL;
  readonly workers: number;
  /** Bytes that all running jobs may hold together. */
  readonly memoryBytes: number;
  /** One Int32 that is 1 when work should stop; shared with the workers. */
  readonly cancel: SharedArrayBuffer;
}

export type ToWorker = { readonly kind: 'job'; readonly job: Job } | { readonly kind: 'admitted' };

export type FromWorker =
  /** The job asks to hold these bytes. */
  { readonly kind: 'admit'; readonly peakBytes: number } | { readonly kind: 'done'; readonly outcome: Outcome };

/** A worker that held this much is replaced by a new one: its garbage is collected at leisure, and would stand beside what the
 *  next job holds. Starting a worker takes a tenth of the time of such a job. */
const RECYCLE_BYTES = 2 ** 26;

/** Runs jobs in worker threads, one at a time in each. A worker that ends takes its job with it, in words, and no other. Where
 *  the machine cannot run the kernels, the first texture that is built says so. */
export function runInWorkers({ workerUrl, workers, memoryBytes, cancel }: PoolOptions): RunJobs {
  const flag = new Int32Array(cancel);
  return async (jobs, done) => {
    const gate = openMemoryGate(memoryBytes);
    const { kernels, missing } = readKernels(new URL('./engine.wasm', workerUrl));
    let unsaid = missing;
    let next = 0;
    const lane = async () => {
      let thread: Thread | null = null;
      while (next < jobs.length) {
        const index = next++;
        if (Atomics.load(flag, 0) === 1) {
          done(index, { kind: 'cancelled' });
          continue;
        }
        thread ??= startThread(workerUrl, { kind: 'build', cancel, kernels });
        const { outcome, heldBytes } = await thread.run(jobs[index], gate);
        done(index, unsaid === null ? outcome : warned(outcome, unsaid));
        if (outcome.kind === 'built') unsaid = null;
        if (heldBytes >= RECYCLE_BYTES) await thread.stop();
        gate.leave(heldBytes);
        if (thread.ended()) thread = null;
      }
      await thread?.stop();
    };
    await Promise.all(Array.from({ length: Math.min(workers, jobs.length) }, lane));
  };
}

function warned(outcome: Outcome, problem: Problem): Outcome {
  return outcome.kind === 'built' ? { ...outcome, warnings: [...outcome.warnings, problem] } : outcome;
}

/** One worker for each processor that this process may use. */
export function defaultWorkers(): number {
  return Math.min(256, availableParallelism());
}

/** What a worker is given when it starts. */
export interface WorkerData {
  readonly kind: 'build';
  readonly cancel: SharedArrayBuffer;
  readonly kernels: WebAssembly.Module | null;
}

interface Thread {
  /** Answers what became of the job, and the bytes that are to leave the gate now. */
  run(job: Job, gate: MemoryGate): Promise<{ readonly outcome: Outcome; readonly heldBytes: number }>;
  ended(): boolean;
  stop(): Promise<unknown>;
}

function startThread(url: URL, workerData: WorkerData): Thread {
  const worker = new Worker(url, { workerData });
  let ended = false;
  worker.once('exit', () => {
    ended = true;
  });

  return {
    run,
    ended: () => ended,
    stop: () => {
      ended = true;
      return worker.terminate();
    },
  };

  async function run(job: Job, gate: MemoryGate) {
    let heldBytes = 0;
    const outcome = await new Promise<Outcome>((resolve) => {
      let isOver = false;
      const finish = (end: Outcome) => {
        isOver = true;
        worker.off('message', onMessage).off('error', onError).off('exit', onExit);
        resolve(end);
      };
      const onMessage = async (message: FromWorker) => {
        if (message.kind === 'done') return finish(message.outcome);
        await gate.enter(message.peakBytes);
        // It may have ended while it waited.
        if (isOver) return gate.leave(message.peakBytes);
        heldBytes = message.peakBytes;
        post({ kind: 'admitted' });
      };
      const onError = (error: Error) => {
        ended = true;
        finish({ kind: 'failed', problem: endedProblem(job, error.message) });
      };
      const onExit = (code: number) => finish({ kind: 'failed', problem: endedProblem(job, `exit code ${code}`) });
      worker.on('message', onMessage).on('error', onError).on('exit', onExit);
      post({ kind: 'job', job });
    });
    return { outcome, heldBytes };
  }

  function post(message: ToWorker): void {
    worker.postMessage(message);
  }
}

function endedProblem(job: Job, reason: string): Problem {
  return { code: 'worker-ended', severity: 'error', values: { reason }, path: job.image.path };
}
