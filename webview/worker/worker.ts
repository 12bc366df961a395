import type { ToBench } from '../../core/proof/want.ts';
import { Desk } from './desk.ts';
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

const desk = new Desk({ inflate, newHash, pause }, (message, transfer) => self.postMessage(message, transfer));
self.onmessage = (event: MessageEvent<ToBench>) => desk.take(event.data);
