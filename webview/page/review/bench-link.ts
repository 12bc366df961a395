import type { Problem } from '../../../core/problem.ts';
import { Shelf } from '../../../core/proof/shelf.ts';
import type {
  FromReviewBench,
  PairSide,
  ReviewAnswer,
  ReviewAnswers,
  ReviewWant,
  ReviewWantKind,
  ToReviewBench,
} from '../../../core/review/want.ts';

export type ReviewTold<K extends ReviewWantKind> = ReviewAnswers[K] | { readonly problem: Problem } | undefined;

/** The review page's side of its worker: what is wanted goes out, answers are kept by want. */
export class ReviewBenchLink {
  readonly #worker: Worker;
  readonly #answers = new Shelf<ReviewAnswer | { readonly problem: Problem }>(ANSWER_BYTES, sizeOf);
  readonly #changed: () => void;
  #revision = 0;
  #sent = '';
  problem: Problem | null = null;

  constructor(worker: Worker, changed: () => void) {
    this.#worker = worker;
    this.#changed = changed;
    worker.onmessage = (event: MessageEvent<FromReviewBench>) => this.#take(event.data);
    worker.onerror = (event) => {
      this.problem = { code: 'unexpected', severity: 'error', values: { reason: event.message ?? 'worker' } };
      changed();
    };
  }

  /** Another texture, or other bytes of the same: what was answered before is forgotten. */
  open(before: PairSide, after: PairSide): void {
    this.#revision++;
    this.#sent = '';
    this.#answers.clear();
    this.problem = null;
    const buffers = [before, after].flatMap((side) => (side.kind === 'file' ? [side.bytes] : []));
    this.#post({ kind: 'open', revision: this.#revision, before, after }, buffers);
  }

  /** In the order in which they are needed. What is known is not asked for again. */
  want(wants: readonly ReviewWant[]): void {
    if (this.#revision === 0) return;
    const keyed = new Map(wants.map((want) => [JSON.stringify(want), want]));
    const open = [...keyed].filter(([key]) => this.#answers.get(key) === undefined);
    const list = open.map(([key]) => key).join('\n');
    if (list === this.#sent) return;
    this.#sent = list;
    this.#post({ kind: 'want', revision: this.#revision, wants: open.map(([key, want]) => ({ key, want })) }, []);
  }

  told<K extends ReviewWantKind>(want: ReviewWant & { readonly kind: K }): ReviewTold<K> {
    return this.#answers.get(JSON.stringify(want)) as ReviewTold<K>;
  }

  close(): void {
    this.#worker.terminate();
  }

  #post(message: ToReviewBench, transfer: Transferable[]): void {
    this.#worker.postMessage(message, transfer);
  }

  #take(message: FromReviewBench): void {
    if (message.revision !== this.#revision) return;
    if (message.kind === 'answer') this.#answers.put(message.key, message.answer);
    else if (message.key === null) this.problem = message.problem;
    else this.#answers.put(message.key, { problem: message.problem });
    this.#changed();
  }
}

/** Bytes of answers that the page keeps, so that going back is immediate. */
const ANSWER_BYTES = 160 * 1024 * 1024;

function sizeOf(answer: ReviewAnswer | { readonly problem: Problem }): number {
  if ('problem' in answer || answer.kind === 'review') return 4096;
  const { before, after, marks } = answer;
  const codes = (side: typeof before): number => side?.picture.codes.byteLength ?? 0;
  return codes(before) + codes(after) + (marks?.byteLength ?? 0);
}
