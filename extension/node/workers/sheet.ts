import { setImmediate } from 'node:timers/promises';
import { type MessagePort, Worker } from 'node:worker_threads';
import type { ProofOrder } from '../../../core/export/order.ts';
import { makeSheet } from '../../../core/export/sheet.ts';
import { type Cancel, Cancelled } from '../../../core/port.ts';
import { type Problem, Refusal } from '../../../core/problem.ts';
import { createEngine } from '../../../core/simd/engine.ts';
import { readKernels } from '../ports/kernels.ts';
import { nodePorts } from '../ports/ports.ts';

/** Draws a proof sheet on this thread, by the compiled kernels where they run. Answers a PNG file. Throws Refusal and Cancelled. */
export async function drawSheet(
  order: ProofOrder,
  kernels: WebAssembly.Module | null,
  cancel: Cancel,
): Promise<Uint8Array> {
  const engine = kernels === null ? {} : { engine: createEngine(kernels) };
  const { png } = await makeSheet(order, { ...nodePorts, ...engine, pause: () => setImmediate() }, cancel);
  return png;
}

/** What a worker thread is given that draws one sheet. */
export interface SheetData {
  readonly kind: 'sheet';
  readonly sheet: ProofOrder;
  readonly kernels: WebAssembly.Module | null;
}

type SheetReply = { readonly png: Uint8Array } | { readonly problem: Problem };

/** The same in a thread of its own, so that this one stays free. `workerUrl` is the bundled pool.worker.ts, with the compiled
 *  kernels beside it. */
export function drawSheetInThread(order: ProofOrder, workerUrl: URL, token: CancelToken): Promise<Uint8Array> {
  const { kernels } = readKernels(new URL('./engine.wasm', workerUrl));
  const workerData: SheetData = { kind: 'sheet', sheet: order, kernels };
  const worker = new Worker(workerUrl, { workerData });
  return new Promise<Uint8Array>((resolve, reject) => {
    const listening = token.onCancellationRequested(() => end(() => reject(new Cancelled())));
    const end = (settle: () => void): void => {
      listening.dispose();
      void worker.terminate();
      settle();
    };
    worker.once('message', (reply: SheetReply) =>
      end(() => ('png' in reply ? resolve(reply.png) : reject(new Refusal(reply.problem)))),
    );
    worker.once('error', (error) => end(() => reject(error)));
    worker.once('exit', (code) => end(() => reject(new Error(`The thread ended with exit code ${code}`))));
    if (token.isCancellationRequested) end(() => reject(new Cancelled()));
  });
}

interface CancelToken {
  readonly isCancellationRequested: boolean;
  onCancellationRequested(listener: () => void): { dispose(): void };
}

/** A thread's side of it. */
export async function serveSheet(port: MessagePort, { sheet, kernels }: SheetData): Promise<void> {
  try {
    const reply: SheetReply = { png: await drawSheet(sheet, kernels, { cancelled: false }) };
    port.postMessage(reply);
  } catch (error) {
    if (!(error instanceof Refusal)) throw error;
    const reply: SheetReply = { problem: error.problem };
    port.postMessage(reply);
  }
}
