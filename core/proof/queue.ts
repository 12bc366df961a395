import { Cancelled } from '../port.ts';
import { type Problem, Refusal } from '../problem.ts';

/** Something that is wanted, under the key that its answer goes by. */
export interface Wanted<Want> {
  readonly key: string;
  readonly want: Want;
}

/** Works through what a page wants, one want at a time and in its order. A new list replaces the old one, and what is being worked
 *  on goes on only where the new list still wants it. */
export class WantQueue<Want> {
  readonly #work: (wanted: Wanted<Want>, cancel: { cancelled: boolean }) => Promise<void>;
  readonly #fail: (key: string, problem: Problem) => void;
  readonly #pause: () => Promise<void>;
  #waiting: readonly Wanted<Want>[] = [];
  #running: { readonly key: string; readonly cancel: { cancelled: boolean } } | null = null;

  constructor(options: {
    /** Answers one want. Throws Refusal, and Cancelled when asked to stop. */
    readonly work: (wanted: Wanted<Want>, cancel: { cancelled: boolean }) => Promise<void>;
    readonly fail: (key: string, problem: Problem) => void;
    /** A turn in which messages are read. */
    readonly pause: () => Promise<void>;
  }) {
    this.#work = options.work;
    this.#fail = options.fail;
    this.#pause = options.pause;
  }

  /** Replaces everything that waits. */
  want(wants: readonly Wanted<Want>[]): void {
    const wanted = wants.some(({ key }) => key === this.#running?.key);
    if (!wanted) this.#stop();
    this.#waiting = wants.filter(({ key }) => !wanted || key !== this.#running?.key);
    void this.#run();
  }

  /** Nothing is wanted any more. */
  clear(): void {
    this.#stop();
    this.#waiting = [];
  }

  #stop(): void {
    if (this.#running !== null) this.#running.cancel.cancelled = true;
  }

  async #run(): Promise<void> {
    if (this.#running !== null) return;
    for (let next = this.#shift(); next !== undefined; next = this.#shift()) {
      const cancel = { cancelled: false };
      this.#running = { key: next.key, cancel };
      try {
        await this.#work(next, cancel);
      } catch (error) {
        if (!(error instanceof Cancelled)) this.#fail(next.key, problemOf(error));
      } finally {
        this.#running = null;
      }
      // Messages that came meanwhile are read before the next want is begun.
      await this.#pause();
      if (this.#running !== null) return;
    }
  }

  #shift(): Wanted<Want> | undefined {
    const [next, ...rest] = this.#waiting;
    this.#waiting = rest;
    return next;
  }
}

/** What went wrong, for a page. */
export function problemOf(error: unknown): Problem {
  if (error instanceof Refusal) return error.problem;
  const reason = error instanceof Error ? error.message : String(error);
  return { code: 'unexpected', severity: 'error', values: { reason } };
}
