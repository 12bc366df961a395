import { plainFilters } from '../../core/codec/png/filters.ts';
import { Desk } from '../../core/proof/desk.ts';
import type { ToBench } from '../../core/proof/want.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import { compileKernels } from '../../core/simd/compile.ts';
import { createEngine } from '../../core/simd/engine.ts';
import { createFilters } from '../../core/simd/filters.ts';
import kernelBytes from '../../dist/engine.wasm';
import { newHash } from './hash.ts';
import { inflate } from './inflate.ts';

// The page's worker: everything that is computed is computed here, never where the page is drawn.

declare const self: DedicatedWorkerGlobalScope;

const channel = new MessageChannel();
const resting: (() => void)[] = [];
channel.port1.onmessage = () => resting.shift()?.();

/** A turn of the event loop, without the delay that timers have. */
const pause = (): Promise<void> =>
  new Promise((resolve) => {
    resting.push(resolve);
    channel.port2.postMessage(null);
  });

// In the bundle, so that it is there wherever the worker is: a webview's worker could not fetch it from its host.
const { kernels, missing } = compileKernels(() => kernelBytes);
const engine = kernels === null ? plainEngine : createEngine(kernels);
const filters = kernels === null ? plainFilters : createFilters(kernels);
const desk = new Desk(
  { engine, filters, inflate, newHash, pause },
  { slow: missing, post: (message, transfer) => self.postMessage(message, transfer) },
);
self.onmessage = (event: MessageEvent<ToBench>) => desk.take(event.data);
