import type {
  FromReviewBench,
  PairSide,
  ReviewAnswer,
  ReviewAnswers,
  ReviewWant,
  ReviewWantKind,
  ToReviewBench,
} from '../../../core/review/want.ts';
import { type Failed, WorkerLink } from '../state/worker-link.ts';

export type ReviewTold<K extends ReviewWantKind> = ReviewAnswers[K] | Failed | undefined;

type Open = Extract<ToReviewBench, { kind: 'open' }>;

/** The link of a review's page. */
export class ReviewBenchLink extends WorkerLink<ReviewWant, ReviewAnswer, Open, FromReviewBench> {
  #ready = false;

  constructor(worker: Worker, changed: () => void) {
    super(worker, changed, sizeOf);
  }

  open(before: PairSide, after: PairSide): void {
    this.#ready = true;
    const buffers = [before, after].flatMap((side) => (side.kind === 'file' ? [side.bytes] : []));
    this.openNext({ before, after }, buffers);
  }

  told<K extends ReviewWantKind>(want: ReviewWant & { readonly kind: K }): ReviewTold<K> {
    return this.answerTo(want) as ReviewTold<K>;
  }

  protected override isReady(): boolean {
    return this.#ready;
  }

  protected override keyOf(want: ReviewWant): string {
    return JSON.stringify(want);
  }

  protected override take(message: FromReviewBench): void {
    this.keep(message);
  }
}

function sizeOf(answer: ReviewAnswer | Failed): number {
  if ('problem' in answer || answer.kind === 'review') return 4096;
  const { before, after, marks } = answer;
  const codes = (side: typeof before): number => side?.picture.codes.byteLength ?? 0;
  return codes(before) + codes(after) + (marks?.byteLength ?? 0);
}
