import type { Problem } from '../../../core/problem.ts';
import { Shelf } from '../../../core/proof/shelf.ts';

/** What stands in the place of an answer that there is none of. */
export interface Failed {
  readonly problem: Problem;
}

/** What every worker of a page says. A `key` of null means what was opened as a whole. */
export type Said<A> =
  | { readonly kind: 'answer'; readonly revision: number; readonly key: string; readonly answer: A }
  | { readonly kind: 'problem'; readonly revision: number; readonly key: string | null; readonly problem: Problem };

/** What every worker of a page is asked, beside what it is to open. */
export interface Asked<W> {
  readonly kind: 'want';
  readonly revision: number;
  readonly wants: readonly { readonly key: string; readonly want: W }[];
}

/** A page's side of its worker: what is wanted goes out, answers are kept by want. */
export abstract class WorkerLink<
  W,
  A,
  To extends { readonly kind: 'open' },
  From extends { readonly revision: number },
> {
  readonly #worker: Worker;
  readonly #answers: Shelf<A | Failed>;
  #revision = 0;
  #sent = '';
  problem: Problem | null = null;

  constructor(worker: Worker, changed: () => void, sizeOf: (answer: A | Failed) => number) {
    this.#worker = worker;
    this.#answers = new Shelf(ANSWER_BYTES, sizeOf);
    worker.onmessage = ({ data }: MessageEvent<From>) => {
      if (data.revision !== this.#revision) return;
      this.take(data);
      changed();
    };
    worker.onerror = (event) => {
      this.problem = { code: 'unexpected', severity: 'error', values: { reason: event.message ?? 'worker' } };
      changed();
    };
  }

  /** In the order in which they are needed. What is known is not asked for again. */
  want(wants: readonly W[]): void {
    if (!this.isReady()) return;
    const keyed = new Map(wants.map((want) => [this.keyOf(want), want]));
    const open = [...keyed].filter(([key]) => this.#answers.get(key) === undefined);
    const list = open.map(([key]) => key).join('\n');
    if (list === this.#sent) return;
    this.#sent = list;
    const asked: Asked<W> = {
      kind: 'want',
      revision: this.#revision,
      wants: open.map(([key, want]) => ({ key, want })),
    };
    this.#worker.postMessage(asked, []);
  }

  close(): void {
    this.#worker.terminate();
  }

  /** Whether anything can be asked of what is open. */
  protected abstract isReady(): boolean;

  /** Equal for wants of one answer. */
  protected abstract keyOf(want: W): string;

  /** Takes a message about what is open now. */
  protected abstract take(message: From): void;

  /** Another file, or other bytes of the same: what was answered before is forgotten. */
  protected openNext(what: Omit<To, 'kind' | 'revision'>, buffers: Transferable[]): void {
    this.#revision++;
    this.#sent = '';
    this.#answers.clear();
    this.problem = null;
    this.#worker.postMessage({ kind: 'open', revision: this.#revision, ...what }, buffers);
  }

  protected keep(said: Said<A>): void {
    if (said.kind === 'answer') this.#answers.put(said.key, said.answer);
    else if (said.key === null) this.problem = said.problem;
    else this.#answers.put(said.key, { problem: said.problem });
  }

  protected answerTo(want: W): A | Failed | undefined {
    return this.#answers.get(this.keyOf(want));
  }
}

/** Bytes of answers that a page keeps, so that going back is immediate. */
const ANSWER_BYTES = 160 * 1024 * 1024;
