import type * as vscode from 'vscode';
import { type Problem, Refusal } from '../../../core/problem.ts';
import {
  type HostCall,
  type HostEvent,
  PROTOCOL,
  type Question,
  type Reply,
  type Response,
} from '../../../core/protocol.ts';
import { readRequest, requestId } from './question.ts';

/** Answers to every call. One that is refused throws Refusal. */
export type Answers = {
  readonly [K in HostCall]: (question: Question<K>) => Promise<(Reply<K> & { readonly ok: unknown })['ok']>;
};

/** One page's line to the host. Owns what the page waits for: every question gets one answer, whatever happens, and once it is
 *  disposed nothing more is posted. */
export class Channel {
  readonly #webview: vscode.Webview;
  readonly #answers: Answers;
  readonly #revision: () => number;
  readonly #report: (error: unknown) => void;
  readonly #listening: vscode.Disposable;
  readonly #pending = new Set<number>();
  #disposed = false;

  constructor(
    webview: vscode.Webview,
    options: {
      readonly answers: Answers;
      /** Of source and settings, at the time of an answer. */
      readonly revision: () => number;
      /** Hears of what should not happen. */
      readonly report: (error: unknown) => void;
    },
  ) {
    this.#webview = webview;
    this.#answers = options.answers;
    this.#revision = options.revision;
    this.#report = options.report;
    this.#listening = webview.onDidReceiveMessage((message: unknown) => void this.#take(message));
  }

  /** Questions that wait for an answer. */
  get pending(): number {
    return this.#pending.size;
  }

  tell(event: HostEvent): void {
    this.#post(event);
  }

  dispose(): void {
    this.#disposed = true;
    this.#pending.clear();
    this.#listening.dispose();
  }

  async #take(message: unknown): Promise<void> {
    const id = requestId(message);
    if (id !== null) this.#pending.add(id);
    const reply = await this.#answer(message);
    if (id === null) {
      if ('problem' in reply) this.#report(new Refusal(reply.problem));
      return;
    }
    this.#pending.delete(id);
    this.#post({ protocol: PROTOCOL, kind: 'reply', id, revision: this.#revision(), reply });
  }

  async #answer(message: unknown): Promise<Reply<HostCall>> {
    try {
      const { call, question } = readRequest(message);
      const answer = this.#answers[call] as (question: unknown) => Promise<never>;
      return { ok: await answer(question) };
    } catch (error) {
      return { problem: this.#problemOf(error) };
    }
  }

  #problemOf(error: unknown): Problem {
    if (error instanceof Refusal) return error.problem;
    this.#report(error);
    const reason = error instanceof Error ? error.message : String(error);
    return { code: 'unexpected', severity: 'error', values: { reason } };
  }

  #post(message: Response | HostEvent): void {
    // A hidden page drops messages; it asks `open` again when it is seen.
    if (!this.#disposed) void this.#webview.postMessage(message);
  }
}
