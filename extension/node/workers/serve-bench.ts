import type { MessagePort } from 'node:worker_threads';
import { plainFilters } from '../../../core/codec/png/filters.ts';
import { Desk } from '../../../core/proof/desk.ts';
import type { ToBench } from '../../../core/proof/want.ts';
import { plainEngine } from '../../../core/resample/plain.ts';
import { createEngine } from '../../../core/simd/engine.ts';
import { createFilters } from '../../../core/simd/filters.ts';
import { readKernels } from '../ports/kernels.ts';
import { nodePorts } from '../ports/ports.ts';

/** Makes prints as a page's own worker does, by the same desk. */
export function serveBench(port: MessagePort, kernelsFile: URL): void {
  const { kernels, missing } = readKernels(kernelsFile);
  const engine = kernels === null ? plainEngine : createEngine(kernels);
  const filters = kernels === null ? plainFilters : createFilters(kernels);
  const pause = () => new Promise<void>((resolve) => setImmediate(resolve));
  const desk = new Desk(
    { ...nodePorts, engine, filters, pause },
    { slow: missing, post: (message, transfer) => port.postMessage(message, transfer) },
  );
  port.on('message', (message: ToBench) => desk.take(message));
}
