import { plainFilters } from '../../core/codec/png/filters.ts';
import { Desk } from '../../core/proof/desk.ts';
import type { FromBench, ToBench } from '../../core/proof/want.ts';
import { plainEngine } from '../../core/resample/plain.ts';
import { ReviewDesk } from '../../core/review/desk.ts';
import type { FromReviewBench, ToReviewBench } from '../../core/review/want.ts';
import { compileKernels } from '../../core/simd/compile.ts';
import { createEngine } from '../../core/simd/engine.ts';
import { createFilters } from '../../core/simd/filters.ts';
import kernelBytes from '../../dist/engine.wasm';
import { deflate } from './deflate.ts';
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
const ports = { engine, filters, inflate, deflate, newHash, pause };
const post = (message: FromBench | FromReviewBench, transfer: ArrayBuffer[]): void =>
  self.postMessage(message, transfer);

// A page is a proof's or a review's: its first message says which.
self.onmessage = ({ data }: MessageEvent<ToBench | ToReviewBench>) => {
  if ('before' in data) return begin(new ReviewDesk(ports, { memoryBytes: MEMORY_BYTES, post }), data);
  return begin(new Desk(ports, { slow: missing, post }), data as ToBench);
};

function begin<Message>(desk: { take(message: Message): void }, first: Message): void {
  self.onmessage = ({ data }: MessageEvent<Message>) => desk.take(data);
  desk.take(first);
}

/** What both versions of a texture may hold in a page; a 4096 x 4096 pair holds less. */
const MEMORY_BYTES = 2 ** 31;
