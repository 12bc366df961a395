import type { MessagePort } from 'node:worker_threads';
import { buildTexture } from '../../../core/build/texture.ts';
import { plainEngine } from '../../../core/resample/plain.ts';
import { createEngine } from '../../../core/simd/engine.ts';
import { createFilters } from '../../../core/simd/filters.ts';
import { createTokens } from '../../../core/simd/tokens.ts';
import { nodeDisk } from '../files/node-disk.ts';
import { openVersions } from '../git/versions.ts';
import { nodePorts } from '../ports/ports.ts';
import { type Job, runJob } from './measure-job.ts';
import { planJob } from './plan-job.ts';
import type { FromWorker, ToWorker } from './pool.ts';
import type { Bench, Outcome } from './texture-job.ts';

/** Answers a pool's messages: builds one texture after another, by the compiled kernels where there are any. */
export function serve(port: MessagePort, kernels: WebAssembly.Module | null, isCancelled: () => boolean): void {
  const engine = kernels === null ? plainEngine : createEngine(kernels);
  const compiled = kernels === null ? {} : { filters: createFilters(kernels), tokens: createTokens(kernels) };
  const cancel = {
    get cancelled() {
      return isCancelled();
    },
  };
  // A Git that it opens ends with this thread, whose pipe it reads.
  const versions = openVersions(nodeDisk);
  let admitted: () => void = () => undefined;
  port.on('message', async (message: ToWorker) => {
    if (message.kind === 'admitted') return admitted();
    answer({ kind: 'done', outcome: await run(message.job) });
  });

  async function run(job: Job): Promise<Outcome> {
    try {
      const ports = { ...nodePorts, ...compiled, engine };
      const plan: Bench['planJob'] = (one, image, roughness) => planJob(one, image, roughness, engine);
      return await runJob(job, { disk: nodeDisk, ports, cancel, buildTexture, planJob: plan, admit, versions });
    } catch (error) {
      const reason = error instanceof Error ? (error.stack ?? error.message).replaceAll(/\s+/g, ' ') : String(error);
      return {
        kind: 'failed',
        problem: { code: 'unexpected', severity: 'error', values: { reason }, path: job.image.path },
      };
    }
  }

  function admit(peakBytes: number): Promise<void> {
    return new Promise((enter) => {
      admitted = enter;
      answer({ kind: 'admit', peakBytes });
    });
  }

  function answer(message: FromWorker): void {
    port.postMessage(message);
  }
}
