import type { Ports } from '../../core/port.ts';
import { deflate } from '../../webview/worker/deflate.ts';
import { newHash } from '../../webview/worker/hash.ts';
import { inflate } from '../../webview/worker/inflate.ts';

/** What core needs of a browser: its streams, as the page's worker has them. */
export const webPorts: Ports = { inflate, deflate, newHash };
