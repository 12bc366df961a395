import type * as vscode from 'vscode';
import { type Problem, Refusal } from '../../../core/problem.ts';
import { type AnswerOf, PROTOCOL, type QuestionOf, type ReplyOf, type ResponseOf } from '../../../core/protocol.ts';
import { requestId } from './question.ts';

/** Answers to every call. One that is refused throws Refusal. */
export type Answers<Calls> = {
  readonly [K in keyof Calls]: (question: QuestionOf<Calls, K>) => Promise<AnswerOf<Calls, K>>;
};

/** One page's line to the host. Owns what the page waits for: every question gets one answer, whatever happens, and once it is
 *  disposed nothing more is posted. */
export class Channel<Calls, Told> {
  readonly #webview: vscode.Webview;
  readonly #answers: Answers<Calls>;
  readonly #read: (message: unknown) => { readonly call: keyof Calls; readonly question: unknown };
  readonly #revision: () => number;
  readonly #report: (error: unknown) => void;
  readonly #listening: vscode.Disposable;
  readonly #pending = new Set<number>();
  #disposed = false;

  constructor(
    webview: vscode.Webview,
    options: {
      readonly answers: Answers<Calls>;
      /** Reads a message of the page and trusts nothing in it. Throws Refusal. */
      readonly read: (message: unknown) => { readonly call: keyof Calls; readonly question: unknown };
      /** Of source and settings, at the time of an answer. */
      readonly revision: () => number;
      /** Hears of what should not happen. */
      readonly report: (error: unknown) => void;
    },
  ) {
    this.#webview = webview;
    this.#answers = options.answers;
    this.#read = options.read;
    this.#revision = options.revision;
    this.#report = options.report;
    this.#listening = webview.onDidReceiveMessage((message: unknown) => void this.#take(message));
  }

  /** Questions that wait for an answer. */
  get pending(): number {
    return this.#pending.size;
  }

  tell(event: Told): void {
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

  async #answer(message: unknown): Promise<ReplyOf<Calls, keyof Calls>> {
    try {
      const { call, question } = this.#read(message);
      const answer = this.#answers[call] as unknown as (question: unknown) => Promise<never>;
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

  #post(message: ResponseOf<Calls> | Told): void {
    // A hidden page drops messages; it asks `open` again when it is seen.
    if (!this.#disposed) void this.#webview.postMessage(message);
  }
}
