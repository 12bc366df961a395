import { pathToFileURL } from 'node:url';
import { expect, test } from 'vitest';
import { makeSheet } from '../../core/export/sheet.ts';
import { Cancelled } from '../../core/port.ts';
import { drawSheetInThread } from '../../extension/node/workers/sheet.ts';
import { demoOrder, goOn, ports } from '../export/orders.ts';
import { problemOf } from '../fixtures/refusal.ts';
import { bundleOnce } from './bundle.ts';

const never = { isCancellationRequested: false, onCancellationRequested: () => ({ dispose: () => undefined }) };

async function workerUrl(): Promise<URL> {
  return pathToFileURL(`${await bundleOnce()}/pool.worker.js`);
}

test('the editor’s thread draws the same bytes by the compiled kernels as core by the plain engine', async () => {
  const order = demoOrder('ui/lantern.png');
  const drawn = await drawSheetInThread(order, await workerUrl(), never);
  const { png } = await makeSheet(order, ports, goOn);
  expect(Buffer.from(drawn).equals(Buffer.from(png))).toBe(true);
});

test('what it refuses is refused here, and it ends when it is asked to', async () => {
  const order = demoOrder('ui/lantern.png');
  const damaged = { ...order, image: order.image.slice(0, 60) };
  const url = await workerUrl();
  expect((await problemOf(() => drawSheetInThread(damaged, url, never)))?.code).toBe('png-file-truncated');
  let stop: () => void = () => undefined;
  const token = {
    isCancellationRequested: false,
    onCancellationRequested(listener: () => void) {
      stop = listener;
      return { dispose: () => undefined };
    },
  };
  const drawing = drawSheetInThread(order, url, token);
  stop();
  await expect(drawing).rejects.toBeInstanceOf(Cancelled);
});
