import type { Problem } from '../../core/problem.ts';
import {
  type HostCall,
  type HostEvent,
  PROTOCOL,
  type Question,
  type Request,
  type Response,
} from '../../core/protocol.ts';
import type { Answered, Link } from './link.ts';

/** What VS Code gives a webview; it may be asked for once. */
export interface VsCodeApi {
  postMessage(message: unknown, transfer?: Transferable[]): void;
  getState(): unknown;
  setState(state: unknown): void;
}

/** A link to an extension host by VS Code's messages. `source` is where its messages arrive: the window. */
export function openHostLink(api: VsCodeApi, source: EventTarget): Link {
  const pending = new Map<number, (answered: Answered<HostCall>) => void>();
  const listeners: ((event: HostEvent) => void)[] = [];
  let asked = 0;
  let closed = false;

  const take = (message: MessageEvent): void => {
    const data: unknown = message.data;
    if (!isMessage(data)) return;
    if (data.kind !== 'reply') {
      for (const listener of listeners) listener(data);
      return;
    }
    pending.get(data.id)?.({ revision: data.revision, reply: data.reply });
    pending.delete(data.id);
  };
  source.addEventListener('message', take as EventListener);

  return {
    ask<K extends HostCall>(call: K, question: Question<K>): Promise<Answered<K>> {
      if (closed) return Promise.resolve(refused('The page is closed'));
      const id = ++asked;
      return new Promise((resolve) => {
        pending.set(id, resolve as (answered: Answered<HostCall>) => void);
        const request: Request<K> = { protocol: PROTOCOL, kind: 'ask', id, call, question };
        try {
          api.postMessage(request);
        } catch (error) {
          pending.delete(id);
          resolve(refused(error instanceof Error ? error.message : String(error)));
        }
      });
    },
    listen: (listener) => void listeners.push(listener),
    kept: () => api.getState() ?? null,
    keep: (state) => api.setState(state),
    close: () => {
      closed = true;
      source.removeEventListener('message', take as EventListener);
      for (const resolve of pending.values()) resolve(refused('The page is closed'));
      pending.clear();
    },
  };
}

function refused<K extends HostCall>(reason: string): Answered<K> {
  const problem: Problem = { code: 'unexpected', severity: 'error', values: { reason } };
  return { revision: 0, reply: { problem } };
}

/** Messages of another shape, or of a host with another protocol, are passed over. */
function isMessage(data: unknown): data is Response | HostEvent {
  if (typeof data !== 'object' || data === null) return false;
  const { protocol, kind } = data as { readonly protocol?: unknown; readonly kind?: unknown };
  return protocol === PROTOCOL && typeof kind === 'string' && KINDS.has(kind);
}

const KINDS: ReadonlySet<string> = new Set(['reply', 'source', 'settings', 'preferences', 'built', 'export'] satisfies (
  | Response['kind']
  | HostEvent['kind']
)[]);
