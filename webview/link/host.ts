import type { Problem } from '../../core/problem.ts';
import { PROTOCOL, type QuestionOf, type RequestOf, type ResponseOf } from '../../core/protocol.ts';
import type { Answered, Link } from './link.ts';

/** What VS Code gives a webview; it may be asked for once. */
export interface VsCodeApi {
  postMessage(message: unknown, transfer?: Transferable[]): void;
  getState(): unknown;
  setState(state: unknown): void;
}

/** A link to an extension host by VS Code's messages. `source` is where its messages arrive: the window. Events are those whose
 *  kind is in `kinds`. */
export function openHostLink<Calls, Told extends { readonly kind: string }>(
  api: VsCodeApi,
  source: EventTarget,
  kinds: readonly Told['kind'][],
): Link<Calls, Told> {
  const pending = new Map<number, (answered: Answered<Calls, keyof Calls>) => void>();
  const listeners: ((event: Told) => void)[] = [];
  let asked = 0;
  let closed = false;

  const take = (message: MessageEvent): void => {
    const data: unknown = message.data;
    if (!isMessage(data)) return;
    if (data.kind === 'reply') {
      const { id, revision, reply } = data as unknown as ResponseOf<Calls>;
      pending.get(id)?.({ revision, reply });
      pending.delete(id);
    } else if (kinds.includes(data.kind)) {
      for (const listener of listeners) listener(data as Told);
    }
  };
  source.addEventListener('message', take as EventListener);

  return {
    ask<K extends keyof Calls>(call: K, question: QuestionOf<Calls, K>): Promise<Answered<Calls, K>> {
      if (closed) return Promise.resolve(refused('The page is closed'));
      const id = ++asked;
      return new Promise((resolve) => {
        pending.set(id, resolve as (answered: Answered<Calls, keyof Calls>) => void);
        const request: RequestOf<Calls, K> = { protocol: PROTOCOL, kind: 'ask', id, call, question };
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

function refused(reason: string): { readonly revision: number; readonly reply: { readonly problem: Problem } } {
  const problem: Problem = { code: 'unexpected', severity: 'error', values: { reason } };
  return { revision: 0, reply: { problem } };
}

/** Messages of another shape, or of a host with another protocol, are passed over. */
function isMessage(data: unknown): data is { readonly kind: string } {
  if (typeof data !== 'object' || data === null) return false;
  const { protocol, kind } = data as { readonly protocol?: unknown; readonly kind?: unknown };
  return protocol === PROTOCOL && typeof kind === 'string';
}
